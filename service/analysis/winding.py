"""Encirclements of -1/K, counted from the curve alone: its crossings, detours and closing arc.

The clockwise encirclements are the signed crossings of the ray from -1/K to infinity along the real
axis: to the left for K > 0, where it meets the curve at gains between 0 and K, to the right for K < 0.
The arcs at infinity cross that ray whatever K is. Nothing here looks at the closed-loop polynomial.
"""

from dataclasses import dataclass

from service.analysis.crossings import AxisCourse, Kind, Passage
from service.analysis.loop import AxisView, ExactLoop
from service.analysis.polynomials import sign, strip_origin
from service.analysis.precision import working
from service.analysis.question import Detour


@dataclass(frozen=True, slots=True)
class Arcs:
    """Clockwise passes of all arcs at infinity over the negative and the positive real direction."""

    over_negative: int = 0
    over_positive: int = 0

    def __add__(self, other: "Arcs") -> "Arcs":
        return Arcs(self.over_negative + other.over_negative, self.over_positive + other.over_positive)


@dataclass(frozen=True, slots=True)
class Winding:
    """What the curve contributes to the encirclements.

    ``swings`` holds, for each passage of the course in turn, its clockwise passes over the ray to the
    left (at the frequency and at its mirror image); ``origin_swing`` and ``infinity_swing`` those where
    the curve meets the real axis at w = 0 and at infinite w.
    """

    arcs: Arcs
    swings: tuple[int, ...]
    origin_swing: int
    infinity_swing: int


def wind(loop: ExactLoop, course: AxisCourse, detour: Detour) -> Winding:
    """Follow the closed curve once round."""
    if course.side_at_start == 0:
        return Winding(_lossless_arcs(loop, course, detour), (0,) * len(course.passages), 0, 0)
    side = start = course.side_at_start
    arcs = _origin_arc(loop, -start, start, detour)
    swings = []
    for passage in course.passages:
        after = -side if passage.turns else side
        if passage.kind is Kind.POLE:
            fits = _fits(passage.order, side, after)
            half = _arc(passage.order, side, after, 0 if fits else _real_side_before(loop, passage), detour)
            arcs += half + half
        swings.append(after - side if passage.kind is Kind.CROSSING else 0)
        side = after
    return Winding(arcs + _closing_arc(loop, side, -side), tuple(swings), start, -side)


def _lossless_arcs(loop: ExactLoop, course: AxisCourse, detour: Detour) -> Arcs:
    """Arcs of a curve that lies on the real axis, seen from a point just above -1/K: always below it."""
    arcs = _origin_arc(loop, -1, -1, detour)
    for passage in course.passages:
        if passage.kind is Kind.POLE:
            below = _real_side_before(loop, passage)
            beyond = below if passage.order % 2 == 0 else -below
            arcs += _arc(passage.order, -1, -1, below, detour)
            arcs += _arc(passage.order, -1, -1, beyond, detour)
    return arcs + _closing_arc(loop, -1, -1)


def _arc(order: int, side_before: int, side_after: int, real_side: int, detour: Detour) -> Arcs:
    """Passes of an arc that turns by ``order`` half turns at infinite radius, clockwise on the right.

    The arc begins on the side ``side_before`` of the real axis and ends on ``side_after``. If these do
    not fit the number of half turns, the arc's ends lie exactly on the axis, the next term of the
    expansion puts the curve on these sides, and one pass comes on top or is missing: which, tells
    ``real_side``, the sign of Re L before the arc.
    """
    direction = 1 if detour == "right" else -1
    passes = order
    if not _fits(order, side_before, side_after):
        ahead = real_side * side_before == direction
        passes += 1 if ahead else -1
    first_positive = (side_before > 0) == (direction > 0)
    odd, even = (passes + 1) // 2, passes // 2
    over_positive, over_negative = (odd, even) if first_positive else (even, odd)
    return Arcs(direction * over_negative, direction * over_positive)


def _origin_arc(loop: ExactLoop, side_before: int, side_after: int, detour: Detour) -> Arcs:
    """The detour round s = 0, where L ~ c/s^m."""
    rest, order = strip_origin(loop.denominator)
    if order == 0:
        return Arcs()
    c = sign(loop.numerator[0]) * sign(rest[0])
    return _arc(order, side_before, side_after, _on_axis(c, order), detour)


def _closing_arc(loop: ExactLoop, side_before: int, side_after: int) -> Arcs:
    """The large half circle of an improper loop, where L ~ c s^r; any other closes at a point."""
    order = -loop.excess
    if order <= 0:
        return Arcs()
    c = sign(loop.numerator.leading_coefficient()) * sign(loop.denominator.leading_coefficient())
    return _arc(order, side_before, side_after, _on_axis(c, order), "right")


def _on_axis(c: int, order: int) -> int:
    """Sign of Re c (j)^order = Re c (-j)^order for even order; of no account for odd."""
    return c if order % 4 == 0 else -c


def _fits(order: int, side_before: int, side_after: int) -> bool:
    """Whether the sides are those of a turn by ``order`` half turns that begins off the real axis."""
    return side_before * side_after == (1 if order % 2 == 0 else -1)


def _real_side_before(loop: ExactLoop, passage: Passage) -> int:
    """Sign of Re L just before an axis pole jw0 of order m whose arc begins exactly on the real axis.

    There L ~ c (j/e)^m with c = m! N / D^(m) at jw0, so it is the sign of Re(N conj(D^(m)) j^m): not
    zero, since the arc begins on the real axis, so refinement ends.
    """
    derivative = loop.denominator
    for _ in range(passage.order):
        derivative = derivative.derivative()
    view = AxisView.of(loop.numerator, derivative)
    bits = 64
    while True:
        x = passage.at.ball(bits)
        with working(2 * bits):
            ne, no = view.numerator_even(x), view.numerator_odd(x)
            de, do = view.denominator_even(x), view.denominator_odd(x)
            turned = ne * do - no * de if passage.order % 2 else ne * de + x * no * do
        if turned.is_finite() and not turned.contains(0):
            return (1 if turned > 0 else -1) * (1 if passage.order % 4 < 2 else -1)  # noqa: PLR2004 - j^m
        bits *= 2
