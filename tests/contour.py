"""The indented contour drawn in floating point, to count encirclements the way one does on paper.

For well-separated poles and zeros only: the detours' radius and the closing arc's must lie clear of every
root that matters. Nothing here is exact, and nothing of the engine's is used.
"""

import cmath
import math
from collections.abc import Callable, Iterator
from itertools import pairwise
from typing import Literal

import numpy as np

from tests.oracle import Loop

Path = Callable[[float], complex]
"""A piece of the contour, from parameter 0 to 1."""

DETOUR_RADIUS = 1e-3
CLOSING_RADIUS = 1e3
STEPS = 200
TURN = 2 * cmath.pi


def curve(loop: Loop, s: complex) -> complex:
    """Give L(s)."""
    return complex(np.polyval([float(c) for c in loop.numerator], s)) / complex(
        np.polyval([float(c) for c in loop.denominator], s)
    )


def contour(loop: Loop, detour: Literal["right", "left"]) -> list[Path]:
    """Give the pieces in order: up the axis past its poles on one side, then clockwise round the right."""
    frequencies = sorted(
        {
            round(root.imag, 6)
            for root in np.roots([float(c) for c in loop.denominator])
            if abs(root.real) < 1e-5
        }
    )
    pieces: list[Path] = []
    start = -CLOSING_RADIUS
    for w in frequencies:
        pieces += [_straight(start, w - DETOUR_RADIUS), _half_circle(w, detour)]
        start = w + DETOUR_RADIUS
    return [*pieces, _straight(start, CLOSING_RADIUS), closing_arc]


def _straight(low: float, high: float) -> Path:
    """Run along the axis, evenly for small frequencies and by decades for large ones."""
    start, span = math.asinh(low), math.asinh(high) - math.asinh(low)
    return lambda t: 1j * math.sinh(start + span * t)


def _half_circle(w: float, detour: Literal["right", "left"]) -> Path:
    """Pass jw from below: anticlockwise on its right, clockwise on its left."""
    start, sense = -cmath.pi / 2, 1 if detour == "right" else -1
    return lambda t: 1j * w + DETOUR_RADIUS * cmath.exp(1j * (start + sense * cmath.pi * t))


def closing_arc(t: float) -> complex:
    """Run from +jR clockwise through +R to -jR."""
    return CLOSING_RADIUS * cmath.exp(1j * cmath.pi * (0.5 - t))


def image(loop: Loop, piece: Path, about: complex) -> list[complex]:
    """Sample L along a piece so finely that no step turns by more than a tenth of a turn about a point."""
    start = (0.0, curve(loop, piece(0.0)))
    pending = [(k / STEPS, curve(loop, piece(k / STEPS))) for k in range(STEPS, 0, -1)]
    points = [start[1]]
    at = start
    while pending:
        ahead = pending[-1]
        if abs(cmath.phase((ahead[1] - about) / (at[1] - about))) > TURN / 10:
            middle = (at[0] + ahead[0]) / 2
            pending.append((middle, curve(loop, piece(middle))))
        else:
            at = pending.pop()
            points.append(at[1])
    return points


def clockwise_turn(points: list[complex], about: complex = 0) -> float:
    """Give the clockwise angle, in turns, that a polygon goes round a point."""
    steps = (cmath.phase((b - about) / (a - about)) for a, b in pairwise(points))
    return -sum(steps) / TURN


def clockwise_encirclements(loop: Loop, gain: float, detour: Literal["right", "left"] = "right") -> float:
    """Give N round -1/K, by adding up angles."""
    about = complex(-1 / gain)
    return sum(clockwise_turn(image(loop, piece, about), about) for piece in contour(loop, detour))


def ray_crossings(
    loop: Loop, gain: float, direction: float, detour: Literal["right", "left"] = "right"
) -> int:
    """Give N round -1/K, by crossings of a ray from it: clockwise ones less the others.

    ``direction`` is the ray's angle in radians.
    """
    about = complex(-1 / gain)
    onto_ray = cmath.exp(-1j * direction)
    return sum(
        _crossings([(point - about) * onto_ray for point in image(loop, piece, about)])
        for piece in contour(loop, detour)
    )


def _crossings(points: list[complex]) -> int:
    """Count passes over the positive real axis, downwards (clockwise) less upwards."""

    def passes() -> Iterator[int]:
        for a, b in pairwise(points):
            if (a.imag >= 0) != (b.imag >= 0) and a.real - a.imag * (b - a).real / (b - a).imag > 0:
                yield 1 if a.imag >= 0 else -1

    return sum(passes())
