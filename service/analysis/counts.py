"""How many roots of a polynomial lie right of the imaginary axis, and how many on it: exactly.

A real p splits as p(s) = E(s^2) + s O(s^2). Roots shared by E and O, in y = s^2, are p's roots that
come in pairs symmetric to the origin: negative y give axis pairs, all others one root on each side.
What remains has no such pair, and Routh's scheme in the form of Stieltjes' continued fraction of its
even and odd parts counts its right half plane roots, with quotients of any odd degree, so that no row
can vanish (F. R. Gantmacher, The Theory of Matrices, vol. 2, ch. XV, sections 2 to 14).

Only the signs of the remainders' leading coefficients count, and ball arithmetic proves most of them at
a fraction of the cost of exact remainders. One that the balls leave open sends the polynomial the exact
way.
"""

from dataclasses import dataclass

from flint import arb_poly, fmpz_poly

from service.analysis.polynomials import (
    mirrored,
    parity_parts,
    remainder,
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
    proven = _right_of_axis_by_balls(even, odd)
    if proven is not None:
        return Counts(proven, at_origin, at_origin > 1)
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


def _right_of_axis_by_balls(even: fmpz_poly, odd: fmpz_poly) -> int | None:
    """Count as ``_right_of_axis`` where every leading coefficient has a proven sign, else None.

    That also proves that the parts are coprime: there is no pair symmetric to the origin.
    """
    order = max(2 * even.degree(), 2 * odd.degree() + 1)
    with working(64 + 6 * order):
        high, low = (even, odd) if order % 2 == 0 else (odd, even)
        upper, lower = arb_poly(high), arb_poly(low)
        above = upper[upper.degree()]
        shift = 1 - order % 2
        balance = 0
        while True:
            least = lower.degree() + shift
            lead = lower[lower.degree()]
            if lower.degree() < 0 or lead.contains(0):
                return None
            steps = upper.degree() - least
            balance += -1 if (steps & 1) != (bool(above > 0) != bool(lead > 0)) else 1
            if least == 0:
                return (order - balance) // 2
            for k in range(steps, -1, -1):
                eliminated = upper - (lower * (upper[least + k] / lead)).left_shift(shift + k)
                upper = eliminated.truncate(least + k)
            if upper.degree() != least - 1:
                return None
            upper, lower, above, shift = lower, upper, lead, 1 - shift


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
        high, low = low, remainder(high, low, shift)
        shift = 1 - shift
    return (order - balance) // 2
