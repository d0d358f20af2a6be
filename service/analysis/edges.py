"""Edges: the gains at which the closed-loop count can change, each with its causes and frequencies."""

from collections.abc import Iterator
from dataclasses import dataclass

from flint import fmpq

from service.analysis.answer import Cause
from service.analysis.crossings import AxisCourse, Kind
from service.analysis.gains import Gain, by_gain, compare
from service.analysis.loop import ExactLoop
from service.analysis.roots import PositiveRoot
from service.analysis.winding import Winding

ORIGIN = "origin"
INFINITY = "infinity"
Place = PositiveRoot | str
"""Where on the axis: x = w^2 > 0, ``ORIGIN`` (w = 0) or ``INFINITY``."""

_CAUSES: tuple[Cause, ...] = ("open_loop", "origin", "crossing", "infinity")


@dataclass(frozen=True, slots=True)
class RawEdge:
    """An edge before it is written: exact gain, causes in the contract's order, places in ascending w.

    ``swing`` is what its crossings add to the clockwise passes over the ray to the left of -1/K.
    """

    gain: Gain
    causes: tuple[Cause, ...]
    places: tuple[Place, ...]
    swing: int


def find_edges(loop: ExactLoop, course: AxisCourse, winding: Winding) -> tuple[RawEdge, ...]:
    """Collect all edges in ascending order of gain, equal gains merged into one."""
    found = sorted(_all(loop, course, winding), key=lambda edge: by_gain(edge.gain))
    merged: list[RawEdge] = []
    for edge in found:
        if merged and compare(merged[-1].gain, edge.gain) == 0:
            merged[-1] = _merge(merged[-1], edge)
        else:
            merged.append(edge)
    return tuple(merged)


def _all(loop: ExactLoop, course: AxisCourse, winding: Winding) -> Iterator[RawEdge]:
    """Yield edges cause by cause, so that merged ones list their places in ascending frequency."""
    n, d = loop.numerator, loop.denominator
    algebraic = n.degree() == 0 == d.degree()  # one gain at all frequencies, told as infinity's alone
    if d[0] != 0 and n[0] != 0 and not algebraic:
        yield RawEdge(Gain(-fmpq(d[0], n[0])), ("origin",), (ORIGIN,), winding.origin_swing)
    for passage, swing in zip(course.passages, winding.swings, strict=True):
        if passage.gain is not None and not algebraic:
            yield RawEdge(passage.gain, ("crossing",), (passage.at,), swing)
    if loop.excess == 0:
        gain = Gain(-fmpq(d.leading_coefficient(), n.leading_coefficient()))
        yield RawEdge(gain, ("infinity",), (INFINITY,), winding.infinity_swing)
    open_loop = tuple(_open_loop_places(loop, course))
    if open_loop:
        yield RawEdge(Gain(fmpq(0)), ("open_loop",), open_loop, 0)


def _open_loop_places(loop: ExactLoop, course: AxisCourse) -> Iterator[Place]:
    if loop.denominator[0] == 0:
        yield ORIGIN
    for passage in course.passages:
        if passage.kind is Kind.POLE:
            yield passage.at
    if loop.excess < 0:
        yield INFINITY


def _merge(one: RawEdge, other: RawEdge) -> RawEdge:
    causes = tuple(c for c in _CAUSES if c in one.causes or c in other.causes)
    return RawEdge(one.gain, causes, one.places + other.places, one.swing + other.swing)
