"""Exact polynomial operations the arithmetic library does not offer ready-made.

Polynomials are FLINT's ``fmpz_poly``: integer coefficients, ascending powers.
"""

from collections.abc import Iterator

from flint import fmpq, fmpz, fmpz_poly

ONE = fmpz_poly([1])


def sign(value: fmpz | fmpq | int) -> int:
    """-1, 0 or 1."""
    return (value > 0) - (value < 0)


def strip_origin(p: fmpz_poly) -> tuple[fmpz_poly, int]:
    """Return (q, m) with p(s) = s^m q(s) and q(0) != 0; p must not be zero."""
    m = next(i for i, c in enumerate(p.coeffs()) if c != 0)
    return (p.right_shift(m), m) if m else (p, 0)


def parity_parts(p: fmpz_poly) -> tuple[fmpz_poly, fmpz_poly]:
    """Return (E, O) with p(s) = E(s^2) + s O(s^2)."""
    c = p.coeffs()
    return fmpz_poly(c[0::2]), fmpz_poly(c[1::2])


def axis_parts(p: fmpz_poly) -> tuple[fmpz_poly, fmpz_poly]:
    """Return (Pe, Po) in x = w^2 with p(jw) = Pe(x) + j w Po(x)."""
    even, odd = parity_parts(p)
    return mirrored(even), mirrored(odd)


def mirrored(p: fmpz_poly) -> fmpz_poly:
    """Return p(-x)."""
    return fmpz_poly([-c if i & 1 else c for i, c in enumerate(p.coeffs())])


def primitive(p: fmpz_poly) -> fmpz_poly:
    """Divide by the content, keeping the sign; zero stays zero."""
    content = p.content()
    return p // content if content > 1 else p


def without_factor(p: fmpz_poly, factor: fmpz_poly) -> tuple[fmpz_poly, fmpz_poly]:
    """Split a squarefree p into (part coprime to ``factor``, part whose roots are roots of ``factor``)."""
    shared = p.gcd(factor)
    if shared.degree() < 1:
        return p, ONE
    return p // shared, shared


def squarefree_levels(p: fmpz_poly) -> Iterator[tuple[fmpz_poly, int]]:
    """Yield (q, m): coprime squarefree q of positive degree, whose roots are p's of multiplicity m."""
    if p.degree() == 1:
        yield p, 1
    elif p.degree() > 1:
        yield from ((q, int(m)) for q, m in p.factor_squarefree()[1] if q.degree() > 0)


def sign_variations(p: fmpz_poly) -> int:
    """Sign changes in the coefficient sequence, zeros skipped (Descartes' bound on the positive roots)."""
    changes, last = 0, 0
    for c in p.coeffs():
        s = (c > 0) - (c < 0)
        if s:
            changes += s == -last
            last = s
    return changes


def descending(p: fmpz_poly) -> tuple[int, ...]:
    """Coefficients in descending powers, as Python integers."""
    return tuple(int(c) for c in reversed(p.coeffs()))


def shifted(value: int, bits: int) -> int:
    """Multiply by 2^bits, toward zero where that leaves no integer."""
    if bits >= 0:
        return value << bits
    return value >> -bits if value >= 0 else -(-value >> -bits)


def remainder(high: fmpz_poly, low: fmpz_poly, shift: int = 0) -> fmpz_poly:
    """Return a positive multiple of ``high`` modulo (x^shift ``low``), of content 1."""
    lead = low.leading_coefficient()
    least = low.degree() + shift
    while high.degree() >= least and not high.is_zero():
        top = high.leading_coefficient()
        common = fmpz(lead).gcd(top)
        high = high * (abs(lead) // common) - (low * (sign(lead) * top // common)).left_shift(
            high.degree() - low.degree()
        )
    return primitive(high)
