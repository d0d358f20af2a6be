"""Numbers and verdicts as a person reads them in a terminal. Reads answer documents, computes nothing."""

import re
from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import Any

Gain = tuple[float, str]
"""A gain as the nearest double and as a decimal of 30 digits."""

SCREEN_DIGITS = 4
DOUBLE_DIGITS = 17

VERDICT_WORDS = {
    "stable": "stable",
    "marginal": "marginal",
    "unstable": "unstable",
    "ill_posed": "ill-posed",
}

CAUSE_WORDS = {
    "open_loop": "open loop",
    "origin": "origin",
    "crossing": "crossing",
    "infinity": "infinity",
}


def rounded(value: float, digits: int = SCREEN_DIGITS) -> str:
    """Write ``value`` to so many significant digits, without trailing zeros; zero has no sign."""
    return f"{value + 0.0:.{digits}g}"


def counted(count: int, noun: str) -> str:
    """Count ``noun``: 1 pole, 2 poles."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"


def printable(text: str) -> str:
    """Write as an escape what a terminal would obey, not show."""
    return "".join(sign if sign.isprintable() else ascii(sign)[1:-1] for sign in text)


def gain_labels(gains: Sequence[Gain | None]) -> list[str | None]:
    """Write each gain to four significant digits, or to as many as tell it from its neighbours.

    ``gains`` ascend; an unbounded one is None and has no label. Where not even the doubles differ, the
    decimal is the label.
    """
    return [
        gain and _label(gain, [other[0] for other in (before, after) if other])
        for before, gain, after in zip([None, *gains], gains, [*gains[1:], None], strict=False)
    ]


def _label(gain: Gain, neighbours: Sequence[float]) -> str:
    for digits in range(SCREEN_DIGITS, DOUBLE_DIGITS + 1):
        label = rounded(gain[0], digits)
        if all(rounded(neighbour, digits) != label for neighbour in neighbours):
            return label
    return gain[1]


def edge_gains(answer: Mapping[str, Any]) -> list[Gain]:
    """List the gains of an answer document's edges, ascending."""
    return [(edge["gain"], edge["decimal"]) for edge in answer["edges"]]


def band_labels(answer: Mapping[str, Any]) -> list[str]:
    """Say which gains each band holds: "K < 0", "0 < K < 0.1455", "every K".

    An outer band whose two ends are one double lies at the end of a window on an edge: "just below 6".
    """
    edges = edge_gains(answer)
    lowest, highest = answer["bands"][0]["lower"], answer["bands"][-1]["upper"]
    below = bool(edges) and lowest == edges[0][0]
    above = bool(edges) and highest == edges[-1][0]
    bounds = [None if below else _window_end(lowest), *edges, None if above else _window_end(highest)]
    texts = [_inequality(lower, upper) for lower, upper in pairwise(gain_labels(bounds))]
    if below:
        texts[0] = texts[0].replace("K <", "just below")
    if above:
        texts[-1] = texts[-1].replace("K >", "just above")
    return texts


def _window_end(gain: float | None) -> Gain | None:
    return None if gain is None else (gain, repr(gain))


def _inequality(lower: str | None, upper: str | None) -> str:
    if lower is None:
        return "every K" if upper is None else f"K < {upper}"
    return f"K > {lower}" if upper is None else f"{lower} < K < {upper}"


def polynomial_words(coefficients: Sequence[str]) -> str:
    """Write a polynomial in s from its coefficients, exact texts in descending powers: "s^2 - 1/2 s + 3"."""
    degree = len(coefficients) - 1
    terms = [
        _term(coefficient, degree - place)
        for place, coefficient in enumerate(coefficients)
        if coefficient != "0"
    ]
    joined = " ".join(terms) or "0"
    return re.sub(r"^([+-]) ", lambda sign: "-" if sign[1] == "-" else "", joined)


def _term(coefficient: str, power: int) -> str:
    sign, size = ("-", coefficient[1:]) if coefficient.startswith("-") else ("+", coefficient)
    if power == 0:
        return f"{sign} {size}"
    unknown = "s" if power == 1 else f"s^{power}"
    return f"{sign} {unknown}" if size == "1" else f"{sign} {size} {unknown}"
