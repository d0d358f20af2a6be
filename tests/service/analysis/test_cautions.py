"""Every caution is there for a loop that earns it and not for one that does not."""

from fractions import Fraction
from typing import Any

import pytest
from hypothesis import given, settings

from service.analysis.cautions import GENERAL
from tests.asking import ask
from tests.oracle import Loop, verdict
from tests.polynomials import add, multiply, polynomial, scaled
from tests.strategies import any_loops, non_zeros

P = polynomial
F = Fraction
THREE_LAGS = Loop(P(1), P(1, 3, 3, 1))
UNSTABLE_INTEGRATOR = Loop(P(1, 1), P(1, -1, 0))
TOUCH = Loop(P(1, 1, 1), P(1, 2, 1, 1, 0))


def cautions(loop: Loop, **fields: Any) -> dict[str, str]:
    """Give the texts by their codes."""
    found = ask(loop, **fields).cautions
    texts = {caution.code: caution.text for caution in found}
    assert len(texts) == len(found) or "conditional_stability" in texts
    return texts


EARNED = {
    "gain_without_effect": (Loop((), P(1, 1)), {}),
    "hidden_mode": (Loop(P(1, -1), P(1, 1, -2)), {}),
    "repeated_axis_poles": (Loop(P(1, 1), P(1, 0, 0)), {}),
    "improper_loop": (Loop(P(1, 0, 0), P(1, 1)), {}),
    "direct_feedthrough": (Loop(P(1, 2), P(1, 1)), {}),
    "lossless_loop": (Loop(P(1), P(1, 0, 1)), {}),
    "conditional_stability": (UNSTABLE_INTEGRATOR, {"gain": F(2)}),
    "marginal_is_not_safe": (THREE_LAGS, {"gain": F(8)}),
    "algebraic_loop": (Loop(P(1, -1), P(1, 1)), {"gain": F(-1)}),
    "reversed_gain": (THREE_LAGS, {"gain": F(2)}),
}

NOT_EARNED = {
    "gain_without_effect": (THREE_LAGS, {}),
    "hidden_mode": (Loop(P(1, -2), P(1, 1, -2)), {}),
    "repeated_axis_poles": (Loop(P(1, 1), multiply(P(1, 0), P(1, 0, 1))), {}),
    "improper_loop": (Loop(P(1, 2), P(1, 1)), {}),
    "direct_feedthrough": (Loop(P(1), P(1, 1)), {}),
    "lossless_loop": (Loop(P(1, 0), P(1, 0, 1)), {}),
    "conditional_stability": (THREE_LAGS, {"gain": F(2)}),
    "marginal_is_not_safe": (THREE_LAGS, {"gain": 8 - F(1, 10**30)}),
    "algebraic_loop": (Loop(P(1, -1), P(1, 1)), {"gain": F(1)}),
    "reversed_gain": (THREE_LAGS, {"gain": F(0)}),
}


@pytest.mark.parametrize("code", EARNED)
def test_a_caution_is_there_where_it_is_earned(code: str) -> None:
    loop, fields = EARNED[code]
    assert code in cautions(loop, **fields)


@pytest.mark.parametrize("code", NOT_EARNED)
def test_a_caution_is_not_there_where_it_is_not(code: str) -> None:
    loop, fields = NOT_EARNED[code]
    assert code not in cautions(loop, **fields)


@given(loop=any_loops)
@settings(max_examples=60)
def test_the_general_caution_comes_last_in_every_answer(loop: Loop) -> None:
    found = ask(loop, gain=F(1)).cautions
    assert [i for i, caution in enumerate(found) if caution.code == "linear_model_only"] == [len(found) - 1]
    assert found[-1] == GENERAL
    assert {caution.code for caution in found} <= {*EARNED, "linear_model_only"}


def test_the_general_caution_says_whose_the_decision_is() -> None:
    for words in (
        "linear model",
        "not a safety function",
        "functional safety",
        "responsible licensed engineer",
    ):
        assert words in GENERAL.text


@pytest.mark.parametrize(
    ("shared", "words"),
    [
        pytest.param(P(1, -1), "share one root", id="one"),
        pytest.param(P(1, -1), "1 right of the imaginary axis and 0 on it", id="right"),
        pytest.param(P(1, 0, 1), "0 right of the imaginary axis and 2 on it", id="on the axis"),
        pytest.param(P(1, 3, 2), "share two roots", id="two"),
        pytest.param(P(1, 3, 2), "All of them are left of the axis", id="left"),
    ],
)
def test_a_hidden_mode_is_told_with_its_place(shared: tuple[Fraction, ...], words: str) -> None:
    assert words in cautions(Loop(shared, multiply(shared, P(1, 5))))["hidden_mode"]


@pytest.mark.parametrize(
    ("gain", "words"),
    [
        pytest.param(
            "2",
            "(K = -2) one pole is unstable, running away without oscillation, with no warning",
            id="a runaway",
        ),
        pytest.param("-9", "(K = 9) two poles are unstable, oscillating.", id="an oscillation"),
        pytest.param("-2", "(K = 2) the loop is stable too: stability does not show the sign.", id="stable"),
        pytest.param("-8", "(K = 8) the loop is at best marginal, with two poles on the axis.", id="on it"),
    ],
)
def test_the_fate_of_the_reversed_sign_is_told(gain: str, words: str) -> None:
    assert words in cautions(THREE_LAGS, gain=F(gain))["reversed_gain"]


def test_a_mixed_fate_counts_the_runaways() -> None:
    """At K = -1: (s - 1)(s^2 - s + 1)."""
    closed = multiply(P(1, -1), P(1, -1, 1))
    loop = Loop(P(1), add(closed, P(1)))
    text = cautions(loop, gain=F(1))["reversed_gain"]
    assert text.endswith("three poles are unstable, 1 of them running away without oscillation.")


def test_reversed_where_the_closed_loop_vanishes_it_has_no_answer() -> None:
    text = cautions(Loop(P(1, 1), P(1, 1)), gain=F(1))["reversed_gain"]
    assert text.endswith("the loop is algebraic and has no answer of its own.")


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)), gain=non_zeros)
@settings(max_examples=80)
def test_the_reversed_sign_is_called_stable_exactly_if_it_is(loop: Loop, gain: Fraction) -> None:
    """As a commissioned gain of its own would be: ill-posed is not stable."""
    there = ask(loop, gain=-gain).commissioned
    assert there is not None
    text = cautions(loop, gain=gain)["reversed_gain"]
    assert ("stable too" in text) == (there.verdict == "stable")


def test_reversed_where_a_root_passes_through_infinity_it_is_not_called_stable() -> None:
    """(s + 2)/(s + 1) at K = -1 leaves the constant -1: ill-posed, with no root anywhere."""
    loop = Loop(P(1, 2), P(1, 1))
    assert verdict(add(loop.denominator, scaled(loop.numerator, -1))) == "stable"
    assert "stable too" not in cautions(loop, gain=F(1))["reversed_gain"]


def test_feedthrough_names_the_gain_beyond_which_no_dead_time_is_borne() -> None:
    assert "wherever |K| > 0.4." in cautions(Loop(P(5, 1), P(2, 1)))["direct_feedthrough"]


@pytest.mark.parametrize(
    ("loop", "gain", "words"),
    [
        pytest.param(
            UNSTABLE_INTEGRATOR, "2", "beyond K = 1 two poles are unstable, oscillating at 1 rad/s", id="pair"
        ),
        pytest.param(
            Loop(P(1), P(1, 3, 3, -1)), "2", "beyond K = 1 one pole is unstable, running", id="runaway"
        ),
        pytest.param(
            Loop(P(-1, -1), P(1, -1, 0)), "-2", "beyond K = -1 two poles are unstable", id="negative"
        ),
    ],
)
def test_conditional_stability_tells_what_a_drop_in_gain_does(loop: Loop, gain: str, words: str) -> None:
    assert words in cautions(loop, gain=F(gain))["conditional_stability"]


def test_without_a_gain_in_service_every_stable_band_is_looked_at() -> None:
    assert "conditional_stability" in cautions(UNSTABLE_INTEGRATOR)
    assert "conditional_stability" not in cautions(THREE_LAGS)


@pytest.mark.parametrize(
    ("loop", "gain"),
    [
        pytest.param(UNSTABLE_INTEGRATOR, "1/2", id="not stable"),
        pytest.param(UNSTABLE_INTEGRATOR, "1", id="on the edge"),
        pytest.param(TOUCH, "3/2", id="beyond a touch, stable down to zero"),
    ],
)
def test_conditional_stability_is_said_of_stable_gains_that_cannot_drop(loop: Loop, gain: str) -> None:
    assert "conditional_stability" not in cautions(loop, gain=F(gain))


def test_a_touch_on_the_way_down_does_not_hide_what_lies_below_it() -> None:
    """The touching loop two gains further up: unstable below 2, stable to 3, touching, stable beyond."""
    loop = Loop(TOUCH.numerator, add(TOUCH.denominator, scaled(TOUCH.numerator, -2)))
    assert "conditional_stability" in cautions(loop, gain=F(5, 2))
    assert "conditional_stability" in cautions(loop, gain=F(4))


def test_no_edge_outside_the_window_is_written() -> None:
    """The gain at infinity is 10^400, beyond the doubles, and beyond the window."""
    loop = Loop(P(1, 1), P(F(10) ** 400, 2))
    assert "direct_feedthrough" in cautions(loop, gain_window=(F(1), F(2)))
