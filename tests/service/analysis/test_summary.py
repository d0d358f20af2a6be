"""The answer in plain sentences, for the main shapes word by word."""

from fractions import Fraction
from typing import Any

import pytest
from hypothesis import given, settings

from tests.asking import ask
from tests.oracle import Loop
from tests.polynomials import multiply, polynomial
from tests.strategies import any_loops

P = polynomial
F = Fraction
THREE_LAGS = Loop(P(1), P(1, 3, 3, 1))
BELOW_THREE_LAGS = "Below -1 one pole goes unstable, running away without oscillation (frequency zero). "
ABOVE_THREE_LAGS = "Above 8 two poles go unstable, oscillating at 1.732 rad/s (0.2757 Hz)."
STABLE_THREE_LAGS = f"Stable for -1 < K < 8. {BELOW_THREE_LAGS}{ABOVE_THREE_LAGS}"


def said(loop: Loop, **fields: Any) -> str:
    return ask(loop, **fields).summary


@pytest.mark.parametrize(
    ("loop", "summary"),
    [
        pytest.param(THREE_LAGS, STABLE_THREE_LAGS, id="stable between two edges"),
        pytest.param(
            Loop(P(1), P(1, 1)),
            "Stable for K > -1. Below -1 one pole goes unstable, running away without oscillation "
            "(frequency zero).",
            id="stable without end",
        ),
        pytest.param(
            Loop(P("2.5", 10), P(1, "1/3", 4, 0)),
            "Stable for 0 < K < 8/55 (0.1455). Below 0 one pole goes unstable, running away without "
            "oscillation (frequency zero). Above 8/55 (0.1455) two poles go unstable, oscillating at "
            "2.089 rad/s (0.3325 Hz).",
            id="the design's example",
        ),
        pytest.param(Loop(P(1), P(1, 0, 0, 0)), "No gain is stable.", id="nowhere stable"),
        pytest.param(Loop((), P(1, 1)), "Stable for every K.", id="stable whatever the gain"),
        pytest.param(
            Loop(P(1, 1, 1), P(1, 2, 1, 1, 0)),
            "Stable for 0 < K < 1 and K > 1. Below 0 one pole goes unstable, running away without "
            "oscillation (frequency zero). At K = 1 exactly poles lie on the imaginary axis, oscillating at "
            "1 rad/s (0.1592 Hz), though both sides are stable.",
            id="a touch",
        ),
        pytest.param(
            Loop(P(2), P(1)),
            "Stable for K < -1/2 (-0.5) and K > -1/2 (-0.5). At K = -1/2 (-0.5) exactly the loop is "
            "ill-posed, though both sides are stable.",
            id="an algebraic loop",
        ),
        pytest.param(
            Loop(P(1), P(1, 0, 1)),
            "No gain is stable. Marginal, with poles that stay on the imaginary axis, for -1 < K < 0 and "
            "K > 0.",
            id="lossless",
        ),
        pytest.param(
            Loop(P(1, -1), P(1, 1, -2)),
            "Numerator and denominator share one root right of the imaginary axis: no gain moves a hidden "
            "mode. No gain is stable.",
            id="a hidden unstable mode",
        ),
        pytest.param(
            Loop(P(1, -1), P(1, 1)),
            "Stable for -1 < K < 1. Below -1 one pole goes unstable, by way of infinity, where the closed "
            "loop changes its order. Above 1 one pole goes unstable, running away without oscillation "
            "(frequency zero).",
            id="by way of infinity",
        ),
    ],
)
def test_what_is_said_of_a_loop(loop: Loop, summary: str) -> None:
    assert said(loop) == summary


@pytest.mark.parametrize(
    ("gain", "sentences"),
    [
        pytest.param("1/2", "The gain in service, K = 1/2 (0.5), is stable (-1 < K < 8).", id="stable"),
        pytest.param(
            "20",
            "The gain in service, K = 20, is unstable, with two poles right of the axis (K > 8). The nearest "
            "stable band lies a factor below 0.4 away.",
            id="unstable",
        ),
        pytest.param(
            "8",
            "The gain in service, K = 8, lies exactly on an edge: marginal, with two poles on the axis. The "
            "nearest stable band lies a factor below 1 away.",
            id="on an edge",
        ),
    ],
)
def test_where_the_gain_in_service_stands(gain: str, sentences: str) -> None:
    assert said(THREE_LAGS, gain=F(gain)) == f"{STABLE_THREE_LAGS} {sentences}"


@pytest.mark.parametrize(
    ("loop", "gain", "end"),
    [
        pytest.param(
            Loop(P(1, 1), P(1, -1, 0)),
            F(1, 2),
            "The nearest stable band lies a factor above 2 away.",
            id="up",
        ),
        pytest.param(
            Loop(P(1, 1), P(1, 1, 1, -3)), F(1), "lies a factor above 3 away.", id="up, third order"
        ),
        pytest.param(
            Loop(P(1), P(1, 2, 5, -10)), F(5), "lies a factor between 2 and 4 away.", id="between two edges"
        ),
        pytest.param(Loop(P(-1, -1), P(1, -1, 0)), F(1), "No gain of its sign is stable.", id="no way"),
        pytest.param(
            Loop(P(2), P(1)),
            F(-1, 2),
            "The gain in service, K = -1/2 (-0.5), is ill-posed: 1 + K L vanishes at infinite frequency. "
            "The nearest stable band lies a factor below 1 away.",
            id="ill-posed",
        ),
        pytest.param(
            Loop((), P(1, 1)), F(3), "The gain in service, K = 3, is stable.", id="one band needs no range"
        ),
        pytest.param(
            Loop(P(1, 2), P(1, -1, 0, 1)),
            F(0),
            "The gain in service, K = 0, is unstable, with two poles right of the axis (K > -1/2 (-0.5)).",
            id="no side",
        ),
    ],
)
def test_how_the_summary_ends(loop: Loop, gain: Fraction, end: str) -> None:
    assert said(loop, gain=gain).endswith(end)


@pytest.mark.parametrize(
    ("window", "start"),
    [
        pytest.param((F(1, 3), F(5)), "Stable for 0.3333 < K < 5.", id="within a stable band"),
        pytest.param((F(10), F(20)), "No gain in the window is stable.", id="none"),
        pytest.param((F(0), F(10)), f"Stable for 0 < K < 8. {ABOVE_THREE_LAGS}", id="over an edge"),
        pytest.param((F(8), F(10)), f"No gain in the window is stable. {ABOVE_THREE_LAGS}", id="on an edge"),
    ],
)
def test_a_window_is_spoken_of_within_its_ends(window: tuple[Fraction, Fraction], start: str) -> None:
    assert said(THREE_LAGS, gain_window=window) == start


def test_a_stable_band_narrower_than_doubles_is_not_left_out() -> None:
    """Window and edge round to the same double, but the gain in service lies between them and is stable."""
    low, gain = 8 - F(1, 10**20), 8 - F(1, 10**21)
    summary = said(THREE_LAGS, gain_window=(low, F(10)), gain=gain)
    assert "is stable" in summary
    assert "No gain in the window is stable" not in summary


def test_what_a_window_hides_is_not_denied() -> None:
    """(s + 1)/(s - 5) is stable for K < -1 and for K > 5, beyond the window."""
    summary = said(Loop(P(1, 1), P(1, -5)), gain_window=(F(-3), F(3)), gain=F(2))
    assert "No gain of its sign is stable" not in summary


@given(loop=any_loops)
@settings(max_examples=80)
def test_a_loop_is_called_stable_somewhere_exactly_if_it_is(loop: Loop) -> None:
    found = ask(loop)
    stable = any(band.verdict == "stable" for band in found.bands)
    assert ("Stable for" in found.summary) == stable
    assert ("No gain is stable." in found.summary) != stable


@given(loop=any_loops)
@settings(max_examples=40)
def test_sentences_are_whole(loop: Loop) -> None:
    summary = said(loop, gain=F(1, 3))
    assert summary.endswith(".")
    assert "  " not in summary
    assert "None" not in summary


def test_hidden_modes_left_of_the_axis_are_not_spoken_of() -> None:
    hidden = P(1, 1)
    assert said(Loop(hidden, multiply(hidden, P(1, 2)))).startswith("Stable for K > -2.")
