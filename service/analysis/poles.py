"""The closed-loop poles at one gain: certified, with multiplicity, on the axis exactly where they are."""

from collections.abc import Iterator
from dataclasses import replace
from typing import Final

from flint import acb, arb, fmpz_poly

from service.analysis.answer import ClosedLoopPole
from service.analysis.enclosures import enclose_roots
from service.analysis.errors import OutOfRange
from service.analysis.polynomials import parity_parts, squarefree_levels, strip_origin
from service.analysis.precision import double_in, dyadic, nearest_double, working

_FIRST_BITS: Final = 80
_LAST_BITS: Final = 1280
"""At this accuracy a part that still straddles two doubles is taken to lie midway between them."""


def closed_loop_poles(p: fmpz_poly) -> tuple[ClosedLoopPole, ...]:
    """List the roots of p (not zero) by descending real part, then descending imaginary part.

    Real and imaginary part (rad/s), damping ratio and time constant (s) are the doubles nearest to the
    true values; a part that is zero is exactly zero.
    """
    bits = _FIRST_BITS
    while True:
        try:
            poles = [
                pole
                for root, multiplicity in _enclosed_roots(p, bits)
                if not root.imag < 0
                for pole in _with_image(_written(root, multiplicity, last=bits >= _LAST_BITS))
            ]
        except _Unsettled:
            bits *= 2
        else:
            return tuple(sorted(poles, key=lambda pole: (-pole.re, -pole.im)))


def _with_image(pole: ClosedLoopPole) -> tuple[ClosedLoopPole, ...]:
    return (pole,) if pole.im == 0 else (pole, replace(pole, im=-pole.im))


class _Unsettled(Exception):
    """The enclosure is too wide to settle the nearest double."""


def _written(root: acb, multiplicity: int, *, last: bool) -> ClosedLoopPole:
    re, im = root.real, root.imag
    damping: float | None = None
    with working(_LAST_BITS):
        if not im.is_zero():
            damping = 0.0 if re.is_zero() else _ratio(-re / abs(root), last=last)
        elif not re.is_zero():
            damping = 1.0 if re < 0 else -1.0
        return ClosedLoopPole(
            re=_double(re, last=last),
            im=_double(im, last=last),
            multiplicity=multiplicity,
            damping_ratio=damping,
            time_constant_s=None if re.is_zero() else _double(-1 / re, last=last),
        )


def _ratio(ball: arb, *, last: bool) -> float | None:
    """Round a ratio that is not zero; None where that would make it zero."""
    try:
        return _double(ball, last=last)
    except OutOfRange:
        return None


def _double(ball: arb, *, last: bool) -> float:
    if ball.is_zero():
        return 0.0
    if last:
        return nearest_double(dyadic(ball.mid()))
    settled = double_in(ball)
    if settled is None:
        raise _Unsettled
    return settled


def _enclosed_roots(p: fmpz_poly, bits: int) -> Iterator[tuple[acb, int]]:
    """Yield disjoint balls round the roots with their multiplicity; parts that vanish are exactly zero."""
    rest, at_origin = strip_origin(p)
    if at_origin:
        yield acb(0), at_origin
    for level, multiplicity in squarefree_levels(rest):
        yield from ((root, multiplicity) for root in _simple_roots(level, bits))


def _simple_roots(p: fmpz_poly, bits: int) -> Iterator[acb]:
    """Yield the roots of a squarefree p with p(0) != 0: symmetric pairs from their squares, then the rest."""
    even, odd = parity_parts(p)
    shared = even.gcd(odd)
    if shared.degree() > 0:
        for square in enclose_roots(shared, bits):
            yield from _square_roots(square, bits)
        p = p // fmpz_poly(shared).inflate(2)
    if p.degree() > 0:
        yield from enclose_roots(p, bits)


def _square_roots(square: acb, bits: int) -> Iterator[acb]:
    with working(bits + 16):
        root = _square_root(square)
    yield root
    yield -root


def _square_root(square: acb) -> acb:
    if not square.imag.is_zero():
        return square.sqrt()
    if square.real > 0:
        return acb(square.real.sqrt())
    return acb(0, (-square.real).sqrt())
