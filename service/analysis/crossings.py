"""Where the curve L(jw), 0 < w < infinity, meets the real axis, and its poles and zeros on the way.

With x = w^2 the imaginary part of L(jw) has the sign of h(x) = De No - Do Ne. The positive roots of h
are the frequencies at which L is real; among them, with multiplicities of their own, all poles and
zeros of L on the axis. A root of odd multiplicity takes the curve to the other side of the real axis.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import Enum

from flint import fmpz_poly

from service.analysis.gains import Gain, GainMap
from service.analysis.loop import AxisView, ExactLoop
from service.analysis.polynomials import (
    axis_parts,
    sign,
    squarefree_levels,
    strip_origin,
    without_factor,
)
from service.analysis.roots import PositiveRoot, by_frequency, isolate_positive


class Kind(Enum):
    """What the curve does at a frequency where L is real, zero or infinite."""

    CROSSING = "crossing"
    POLE = "pole"
    ZERO = "zero"


@dataclass(frozen=True, slots=True)
class Passage:
    """A frequency w > 0 (x = w^2 is ``at``) at which the curve meets the real axis, or infinity on it.

    ``turns`` tells whether Im L has the other sign afterwards; ``order`` is a pole's multiplicity, 0
    otherwise; ``gain`` is K = -1/L at a crossing.
    """

    kind: Kind
    at: PositiveRoot
    turns: bool
    order: int = 0
    gain: Gain | None = None


@dataclass(frozen=True, slots=True)
class AxisCourse:
    """The course of the curve over 0 < w < infinity.

    ``side_at_start`` is the sign of Im L just after w = 0: 0 for a lossless loop, whose curve stays on
    the real axis. ``passages`` ascend in frequency.
    """

    side_at_start: int
    passages: tuple[Passage, ...]


def axis_course(loop: ExactLoop) -> AxisCourse:
    """Follow the curve of a loop whose numerator is not zero."""
    view = AxisView.of(loop.numerator, loop.denominator)
    h = view.denominator_even * view.numerator_odd - view.denominator_odd * view.numerator_even
    poles = _shared(view.denominator_even, view.denominator_odd)
    zeros = _shared(view.numerator_even, view.numerator_odd)
    if h.is_zero():
        found = [*_lossless_passages(loop, view, poles, zeros)]
        start = 0
    else:
        stripped, _ = strip_origin(h)
        start = sign(stripped[0])
        found = [*_passages(stripped, view, poles, zeros)]
    passages = tuple(sorted(found, key=lambda passage: by_frequency(passage.at)))
    return AxisCourse(start, passages)


def _shared(even: fmpz_poly, odd: fmpz_poly) -> fmpz_poly:
    """Common roots of both parts other than 0, with multiplicity: axis roots and other symmetric pairs."""
    return strip_origin(even.gcd(odd))[0]


def _passages(h: fmpz_poly, view: AxisView, poles: fmpz_poly, zeros: fmpz_poly) -> Iterator[Passage]:
    orders = list(squarefree_levels(poles))
    for level, multiplicity in squarefree_levels(h):
        turns = multiplicity % 2 == 1
        rest, at_zeros = without_factor(level, zeros)
        rest, at_poles = without_factor(rest, poles)
        yield from (Passage(Kind.ZERO, root, turns) for root in isolate_positive(at_zeros))
        for with_order, order in orders:
            of_this_order = at_poles.gcd(with_order)
            yield from (Passage(Kind.POLE, root, turns, order) for root in isolate_positive(of_this_order))
        yield from _crossings(rest, turns, view)


def _crossings(f: fmpz_poly, turns: bool, view: AxisView) -> Iterator[Passage]:  # noqa: FBT001
    """Crossings at f's positive roots; K = -De/Ne = -Do/No there, whichever is defined."""
    by_even, by_odd = without_factor(f, view.numerator_even)
    for part, top, bottom in (
        (by_even, view.denominator_even, view.numerator_even),
        (by_odd, view.denominator_odd, view.numerator_odd),
    ):
        gains = GainMap(part, top, bottom)
        for root in isolate_positive(part):
            yield Passage(Kind.CROSSING, root, turns, gain=Gain((gains, root)))


def _lossless_passages(
    loop: ExactLoop, view: AxisView, poles: fmpz_poly, zeros: fmpz_poly
) -> Iterator[Passage]:
    """L is real on the whole axis: its poles there, and the frequencies where axis roots repeat.

    These are the extrema of K = -D/N over x, where two axis roots meet, and the frequencies of hidden
    axis modes.
    """
    n, d = view.numerator_even, view.denominator_even
    for level, order in squarefree_levels(poles):
        yield from (Passage(Kind.POLE, root, turns=False, order=order) for root in isolate_positive(level))
    extrema = d * n.derivative() - d.derivative() * n
    hidden = _shared(*axis_parts(loop.shared))
    repeats = hidden if extrema.is_zero() else strip_origin(extrema)[0] * hidden
    for level, _ in squarefree_levels(repeats):
        rest, _ = without_factor(without_factor(level, zeros)[0], poles)
        yield from _crossings(rest, turns=False, view=view)


def axis_roots(p: fmpz_poly) -> list[tuple[PositiveRoot, int]]:
    """Return x = w^2 > 0 and multiplicity of each conjugate pair of axis roots of p, ascending in w."""
    pairs = _shared(*axis_parts(strip_origin(p)[0]))
    found = [
        (root, multiplicity)
        for level, multiplicity in squarefree_levels(pairs)
        for root in isolate_positive(level)
    ]
    return sorted(found, key=lambda pair: by_frequency(pair[0]))
