"""An independent exact count of closed-loop poles, to hold the engine against.

Pure Python on fractions and integers, no FLINT and no float anywhere. With p(s) = E(s^2) + s O(s^2), the
common divisor g of E and O holds every root set that is its own mirror image, so the roots on the axis;
what is left has none there and its count is a Cauchy index, read off a signed remainder sequence
(Sturm 1829; Gantmacher, The Theory of Matrices, vol. II, ch. XV - from memory).
"""

from collections.abc import Callable
from fractions import Fraction
from itertools import pairwise
from typing import NamedTuple

from tests.polynomials import (
    Polynomial,
    add,
    degree,
    divided,
    evaluate,
    gcd,
    in_square,
    parts,
    primitive,
    scaled,
    squarefree_factors,
    trimmed,
)


class Loop(NamedTuple):
    """A loop L = numerator / denominator, descending powers of s."""

    numerator: Polynomial
    denominator: Polynomial


class Counts(NamedTuple):
    """Roots right of the imaginary axis and on it, with multiplicity."""

    rhp: int
    axis: int


def counts(p: Polynomial) -> Counts:
    """Count the roots of p, which is not zero, right of the axis and on it."""
    at_origin, rest = _without_origin(p)
    even, odd = parts(rest)
    mirrored = gcd(even, odd)
    lopsided = divided(rest, in_square(mirrored))[0]
    negative = sum(
        multiplicity * negative_roots(factor) for factor, multiplicity in squarefree_factors(mirrored)
    )
    # Each root x of the mirrored part stands for s = +-sqrt(x): both on the axis, or one on either side.
    return Counts(_rhp_off_axis(lopsided) + degree(mirrored) - negative, at_origin + 2 * negative)


def has_repeated_axis_root(p: Polynomial) -> bool:
    """Tell whether a root on the axis is multiple; p is not zero."""
    at_origin, rest = _without_origin(p)
    mirrored = gcd(*parts(rest))
    return at_origin > 1 or any(
        multiplicity > 1 and negative_roots(factor) > 0
        for factor, multiplicity in squarefree_factors(mirrored)
    )


def verdict(p: Polynomial) -> str:
    """Judge the roots of p, which is not zero: stable, marginal or unstable."""
    rhp, axis = counts(p)
    if rhp or has_repeated_axis_root(p):
        return "unstable"
    return "marginal" if axis else "stable"


def closed_loop(loop: Loop, gain: Fraction, feedback: str = "negative") -> Polynomial:
    """Give D + K N, or D - K N for positive feedback."""
    return add(loop.denominator, scaled(loop.numerator, gain if feedback == "negative" else -gain))


def closed_loop_counts(loop: Loop, gain: Fraction, feedback: str = "negative") -> Counts:
    """Count the closed-loop poles at a rational gain where the polynomial does not vanish."""
    return counts(closed_loop(loop, gain, feedback))


def reduced(loop: Loop) -> Loop:
    """Cancel what numerator and denominator share; a zero numerator shares nothing that matters."""
    shared = gcd(loop.numerator, loop.denominator)
    return Loop(divided(loop.numerator, shared)[0], divided(loop.denominator, shared)[0])


def is_lossless(loop: Loop) -> bool:
    """Tell whether L, after cancelling, is even in s and not zero: its axis image is all real."""
    numerator, denominator = reduced(loop)
    return bool(numerator) and not parts(numerator)[1] and not parts(denominator)[1]


def negative_roots(p: Polynomial) -> int:
    """Count the distinct roots of p with p(0) != 0 on the negative real axis."""
    chain = _sturm_chain(p)
    return _variations(chain, _sign_at_minus_infinity) - _variations(chain, lambda f: f[-1])


def real_roots(p: Polynomial, width: Fraction) -> list[tuple[Fraction, Fraction]]:
    """Isolate the real roots of a squarefree p, ascending, in intervals (a, b] with b - a <= width * |root|.

    A rational root met on the way has equal ends.
    """
    chain = _sturm_chain(p)
    bound = 1 + max(abs(c / p[0]) for c in p)
    pending = [(-bound, Fraction(0)), (Fraction(0), bound)]
    found = []
    while pending:
        low, high = pending.pop()
        inside = _variations_at(chain, low) - _variations_at(chain, high)
        if inside == 1 and (evaluate(p, high) == 0 or evaluate(p, low) != 0):
            found.append(_narrowed(p, low, high, width))
        elif inside:
            middle = (low + high) / 2
            pending += [(low, middle), (middle, high)]
    return sorted(found)


def _narrowed(p: Polynomial, low: Fraction, high: Fraction, width: Fraction) -> tuple[Fraction, Fraction]:
    """Bisect on the sign of p, which has one simple root in (low, high]."""
    while evaluate(p, high) != 0:
        if high - low <= width * min(abs(low), abs(high)):
            return low, high
        middle = (low + high) / 2
        if evaluate(p, middle) * evaluate(p, high) < 0:
            low = middle
        else:
            high = middle
    return high, high


def event_polynomial(loop: Loop) -> Polynomial:
    """Give a polynomial in K that vanishes wherever the closed loop has a root pair +-s.

    So its real roots hold the gain of every crossing, touch and passage through the origin; they also hold
    gains where a pair lies symmetrically off the axis. It is the resultant of the two parts of D + K N in s^2
    (times s, so that the origin counts), interpolated through determinants at integer gains. Identically
    zero for lossless loops and for hidden axis modes.
    """
    size = max(len(loop.numerator), len(loop.denominator))
    gains = [Fraction(k) for k in range(size + 1)]
    return _interpolated(gains, [_event_value(loop, gain, size) for gain in gains])


def _event_value(loop: Loop, gain: Fraction, size: int) -> Fraction:
    closed = closed_loop(loop, gain)
    padded = [Fraction(0)] * (size - len(closed)) + list(closed)
    ascending = padded[::-1]
    even, odd = ascending[::2], ascending[1::2]
    origin = ascending[0]
    if len(odd) == 0:
        return origin
    return origin * _determinant(_sylvester(even[::-1], odd[::-1]))


def _sylvester(p: list[Fraction], q: list[Fraction]) -> list[list[Fraction]]:
    size = len(p) + len(q) - 2
    rows = [[Fraction(0)] * i + p + [Fraction(0)] * (size - len(p) - i) for i in range(len(q) - 1)]
    return rows + [[Fraction(0)] * i + q + [Fraction(0)] * (size - len(q) - i) for i in range(len(p) - 1)]


def _determinant(matrix: list[list[Fraction]]) -> Fraction:
    rows = [list(row) for row in matrix]
    value = Fraction(1)
    for i in range(len(rows)):
        pivot = next((k for k in range(i, len(rows)) if rows[k][i]), None)
        if pivot is None:
            return Fraction(0)
        if pivot != i:
            rows[i], rows[pivot] = rows[pivot], rows[i]
            value = -value
        value *= rows[i][i]
        for k in range(i + 1, len(rows)):
            factor = rows[k][i] / rows[i][i]
            rows[k] = [a - factor * b for a, b in zip(rows[k], rows[i], strict=True)]
    return value


def _interpolated(points: list[Fraction], values: list[Fraction]) -> Polynomial:
    """Give the polynomial through the points, by divided differences."""
    table = list(values)
    for step in range(1, len(points)):
        for i in range(len(points) - 1, step - 1, -1):
            table[i] = (table[i] - table[i - 1]) / (points[i] - points[i - step])
    result: Polynomial = ()
    for point, coefficient in zip(reversed(points), reversed(table), strict=True):
        shifted = add((*result, Fraction(0)), scaled(result, -point)) if result else ()
        result = add(shifted, trimmed([coefficient]))
    return result


def _without_origin(p: Polynomial) -> tuple[int, Polynomial]:
    """Give the multiplicity of the root zero and p without it."""
    last = max(i for i, c in enumerate(p) if c)
    return degree(p) - last, p[: last + 1]


def _rhp_off_axis(p: Polynomial) -> int:
    """Count the roots right of the axis of a polynomial without any on it, by its Cauchy index."""
    n = degree(p)
    # p(jw) = u(w) + j v(w); descending coefficient i belongs to (jw)^(n - i).
    u = trimmed([c * (1, 0, -1, 0)[(n - i) % 4] for i, c in enumerate(p)])
    v = trimmed([c * (0, 1, 0, -1)[(n - i) % 4] for i, c in enumerate(p)])
    left_minus_right = -_cauchy_index(v, u) if n % 2 == 0 else _cauchy_index(u, v)
    return (n - left_minus_right) // 2


def _cauchy_index(numerator: Polynomial, denominator: Polynomial) -> int:
    """Count jumps from minus to plus infinity less the contrary ones of a strictly proper real function."""
    chain = _remainders(primitive(denominator), primitive(numerator))
    return _variations(chain, _sign_at_minus_infinity) - _variations(chain, lambda f: f[0])


def _sturm_chain(p: Polynomial) -> list[list[int]]:
    slope = [c * (degree(p) - i) for i, c in enumerate(p[:-1])]
    return _remainders(primitive(p), primitive(slope))


def _remainders(first: list[int], second: list[int]) -> list[list[int]]:
    """Give the signed remainder sequence, each member up to a positive factor."""
    chain = [first]
    while any(second):
        chain.append(second)
        first, second = second, _negated_remainder(first, second)
    return chain


def _negated_remainder(p: list[int], by: list[int]) -> list[int]:
    rest = list(p)
    lead = abs(by[0])
    sign = 1 if by[0] > 0 else -1
    while len(rest) >= len(by):
        factor = sign * rest[0]
        rest = [lead * c for c in rest]
        for i, c in enumerate(by):
            rest[i] -= factor * c
        rest.pop(0)
    stripped = trimmed([Fraction(-c) for c in rest])
    return primitive(stripped) if stripped else []


def _variations(chain: list[list[int]], sign: Callable[[list[int]], Fraction | int]) -> int:
    signs = [value > 0 for f in chain if (value := sign(f)) != 0]
    return sum(a != b for a, b in pairwise(signs))


def _variations_at(chain: list[list[int]], x: Fraction) -> int:
    return _variations(chain, lambda f: evaluate(tuple(map(Fraction, f)), x))


def _sign_at_minus_infinity(f: list[int]) -> int:
    return f[0] if len(f) % 2 else -f[0]
