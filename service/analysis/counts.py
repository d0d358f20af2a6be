"""How many roots of a polynomial lie right of the imaginary axis, and how many on it: exactly.

A real p splits as p(s) = E(s^2) + s O(s^2). Roots shared by E and O, in y = s^2, are p's roots that
come in pairs symmetric to the origin: negative y give axis pairs, all others one root on each side.
What remains has no such pair, and Routh's scheme in the form of Stieltjes' continued fraction of its
even and odd parts counts its right half plane roots, with quotients of any odd degree, so that no row
can vanish (F. R. Gantmacher, The Theory of Matrices, vol. 2, ch. XV, sections 2 to 14).

Most polynomials are regular: every quotient is linear. Then the signs of Routh's first column settle
everything, and ball arithmetic proves them at a fraction of the cost of exact remainders. A column
entry whose sign the balls leave open sends the polynomial the exact way.
"""

from dataclasses import dataclass

from flint import arb_poly, fmpz, fmpz_poly

from service.analysis.polynomials import (
    mirrored,
    parity_parts,
    primitive,
    sign,
    squarefree_levels,
    strip_origin,
)
from service.analysis.precision import working
from service.analysis.roots import count_positive


@dataclass(frozen=True, slots=True)
class Counts:
    """Roots with multiplicity right of the imaginary axis and on it, and whether one on it is repeated."""

    rhp: int
    axis: int
    repeated_axis: bool = False

    def __add__(self, other: "Counts") -> "Counts":
        return Counts(self.rhp + other.rhp, self.axis + other.axis, self.repeated_axis or other.repeated_axis)


def count_roots(p: fmpz_poly) -> Counts:
    """Count the roots of p (not zero; integer coefficients in ascending powers of s).

    Examples
    --------
    >>> count_roots(fmpz_poly([1, 0, 1]))  # s^2 + 1
    Counts(rhp=0, axis=2, repeated_axis=False)
    >>> count_roots(fmpz_poly([1, 0, 0, 1]))  # s^3 + 1
    Counts(rhp=2, axis=0, repeated_axis=False)

    """
    rest, at_origin = strip_origin(p)
    even, odd = parity_parts(rest)
    regular = _right_of_axis_if_regular(even, odd)
    if regular is not None:
        return Counts(regular, at_origin, at_origin > 1)
    shared = even.gcd(odd)
    pairs = _count_pairs(shared)
    remaining = _right_of_axis(even // shared, odd // shared)
    return Counts(
        remaining + pairs.rhp,
        at_origin + pairs.axis,
        at_origin > 1 or pairs.repeated_axis,
    )


def _count_pairs(shared: fmpz_poly) -> Counts:
    """Count the roots of shared(s^2), where shared(0) != 0."""
    negative, repeated = 0, False
    for level, multiplicity in squarefree_levels(shared):
        found = count_positive(mirrored(level))
        negative += multiplicity * found
        repeated |= found > 0 and multiplicity > 1
    return Counts(shared.degree() - negative, 2 * negative, repeated)


def _right_of_axis_if_regular(even: fmpz_poly, odd: fmpz_poly) -> int | None:
    """Count as ``_right_of_axis`` where every entry of Routh's first column has a proven sign, else None.

    A full column also proves that the parts are coprime: there is no pair symmetric to the origin.
    """
    order = max(2 * even.degree(), 2 * odd.degree() + 1)
    with working(64 + 6 * order):
        high, low = (even, odd) if order % 2 == 0 else (odd, even)
        upper, lower = arb_poly(high), arb_poly(low)
        positive_before = high.leading_coefficient() > 0
        changes = 0
        for step in range(order, 0, -1):
            if lower.degree() != (step - 1) // 2:
                return None
            lead = lower[lower.degree()]
            if lead.contains(0):
                return None
            positive = lead > 0
            changes += positive != positive_before
            positive_before = positive
            eliminated = upper - (lower * (upper[upper.degree()] / lead)).left_shift((step + 1) % 2)
            upper, lower = lower, eliminated.truncate(step // 2)
    return changes


def _right_of_axis(even: fmpz_poly, odd: fmpz_poly) -> int:
    """Right half plane roots of even(s^2) + s odd(s^2), even and odd coprime.

    Each division of the higher part by the lower has a quotient odd in s; its leading coefficient c at
    s^(2k+1) adds sign(c) (-1)^k to (roots left) - (roots right).
    """
    order = max(2 * even.degree(), 2 * odd.degree() + 1)
    high, low = (even, odd) if order % 2 == 0 else (odd, even)
    shift = 1 - order % 2  # the lower part carries the factor s: a quotient in y starts at y^1
    balance = 0
    while not low.is_zero():
        steps = high.degree() - low.degree() - shift
        ahead = sign(high.leading_coefficient()) * sign(low.leading_coefficient())
        balance += -ahead if steps & 1 else ahead
        high, low = low, _remainder(high, low, shift)
        shift = 1 - shift
    return (order - balance) // 2


def _remainder(high: fmpz_poly, low: fmpz_poly, shift: int) -> fmpz_poly:
    """A positive multiple of ``high`` modulo (y^shift ``low``), of content 1."""
    lead = low.leading_coefficient()
    least = low.degree() + shift
    while high.degree() >= least and not high.is_zero():
        top = high.leading_coefficient()
        common = fmpz(lead).gcd(top)
        high = high * (abs(lead) // common) - (low * (sign(lead) * top // common)).left_shift(
            high.degree() - low.degree()
        )
    return primitive(high)
