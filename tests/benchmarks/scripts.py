"""The two scripts a person would otherwise write, each as good as NumPy allows; both take the same body.

Neither is exact, looks between its gains or reports an edge: they are here for their time alone.
"""

import json
from collections.abc import Callable, Mapping
from typing import Final

import numpy as np
from numpy.typing import NDArray

POINTS: Final = 2000
GAINS: Final = np.concatenate([-np.logspace(3, -3, 200), np.logspace(-3, 3, 200)])
OMEGA: Final = np.logspace(-3, 3, POINTS)

Counts = NDArray[np.int64]


def winding_on_grid(body: bytes) -> Counts:
    """Count the half turns of 1 + K L over a frequency grid, from the unwrapped phase, for each gain."""
    numerator, denominator = _read(body)
    s = 1j * OMEGA
    loop = np.polyval(numerator, s) / np.polyval(denominator, s)
    phase = np.unwrap(np.angle(1 + GAINS[:, None] * loop[None, :]), axis=1)
    half_turns: Counts = np.rint((phase[:, -1] - phase[:, 0]) / np.pi).astype(np.int64)
    return half_turns


def roots_at_each_gain(body: bytes) -> Counts:
    """Count the closed-loop poles right of the axis with a root finder, for each gain."""
    numerator, denominator = _read(body)
    longer = np.zeros_like(denominator)
    longer[denominator.size - numerator.size :] = numerator
    return np.array([np.count_nonzero(np.roots(denominator + gain * longer).real > 0) for gain in GAINS])


def _read(body: bytes) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    question = json.loads(body)
    return np.array(question["numerator"], dtype=float), np.array(question["denominator"], dtype=float)


SCRIPTS: Final[Mapping[str, Callable[[bytes], Counts]]] = {
    "grid": winding_on_grid,
    "roots": roots_at_each_gain,
}
