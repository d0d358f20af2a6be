"""Random loops to time: an integrator, damped modes within three decades, half as many zeros as poles."""

import json
import math
from random import Random
from typing import Final

import numpy as np

_DIGITS: Final = 4


def random_body(draw: Random, degree: int, *, gain: bool) -> bytes:
    """Write a question as a caller would: coefficients of four digits, a commissioned gain or none."""
    question: dict[str, object] = {
        "numerator": _coefficients(_roots(draw, degree - degree // 2)),
        "denominator": [*_coefficients(_roots(draw, degree - 1)), 0],
        "curve": False,
    }
    if gain:
        question["gain"] = _rounded(10 ** draw.uniform(-2, 2))
    return json.dumps(question).encode()


def _roots(draw: Random, count: int) -> list[complex]:
    """Draw roots left of the axis: real ones, and pairs with dampings from 0.05 to 1."""
    roots: list[complex] = []
    while len(roots) < count:
        size = 10 ** draw.uniform(-1.5, 1.5)
        if len(roots) + 1 == count or draw.random() < 1 / 3:
            roots.append(complex(-size))
        else:
            angle = math.acos(draw.uniform(0.05, 1))
            root = -size * complex(math.cos(angle), math.sin(angle))
            roots += [root, root.conjugate()]
    return roots


def _coefficients(roots: list[complex]) -> list[float]:
    return [_rounded(c) for c in np.poly(roots).real.tolist()]


def _rounded(value: float) -> float:
    return float(f"{value:.{_DIGITS}g}")
