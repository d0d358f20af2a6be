"""Numbers and verdicts in words."""

import re
from fractions import Fraction
from itertools import pairwise
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st
from sympy import Rational, Symbol, sympify

from service.command.words import (
    band_labels,
    counted,
    gain_labels,
    polynomial_words,
    printable,
    rounded,
)


@pytest.mark.parametrize(
    ("value", "text"),
    [
        pytest.param(0.14545454545454545, "0.1455", id="four-digits"),
        pytest.param(10.0, "10", id="no-trailing-zeros"),
        pytest.param(-0.0, "0", id="zero-has-no-sign"),
        pytest.param(12982286013280.0, "1.298e+13", id="large"),
        pytest.param(-2e-15, "-2e-15", id="small"),
    ],
)
def test_a_number_has_four_significant_digits(value: float, text: str) -> None:
    assert rounded(value) == text


def test_one_is_singular_and_everything_else_plural() -> None:
    assert [counted(count, "pole") for count in (0, 1, 2)] == ["0 poles", "1 pole", "2 poles"]


@given(st.text(max_size=20))
def test_what_is_printed_obeys_no_control_character(text: str) -> None:
    assert printable(text).isprintable()


@given(st.text(alphabet=st.characters(codec="utf-8", categories=["L", "N", "P"]), max_size=20))
def test_what_a_terminal_shows_is_left_as_it_is(text: str) -> None:
    assert printable(text) == text


def test_an_escape_sequence_is_written_out() -> None:
    assert printable("\x1b[2J\ud800") == r"\x1b[2J\ud800"


def test_gains_that_read_alike_at_four_digits_get_more() -> None:
    gains = [(0.999999999, "0.999999999"), (1.0, "1"), (1.000000001, "1.000000001"), (7.0, "7")]
    assert gain_labels(gains) == ["0.999999999", "1", "1.000000001", "7"]


def test_gains_that_are_one_double_are_told_apart_by_their_decimals() -> None:
    gains = [(1.0, "1"), (1.0, "1.0000000000000000000000001")]
    assert gain_labels(gains) == ["1", "1.0000000000000000000000001"]


@given(st.lists(st.floats(allow_nan=False, allow_infinity=False), min_size=2, max_size=6, unique=True))
def test_neighbouring_gains_never_read_alike(values: list[float]) -> None:
    labels = gain_labels([(value, repr(value)) for value in sorted(values)])
    assert all(lower != upper for lower, upper in pairwise(labels))


def bands_between(*ends: float | None, edges: list[float]) -> dict[str, Any]:
    return {
        "edges": [{"gain": gain, "decimal": repr(gain)} for gain in edges],
        "bands": [{"lower": lower, "upper": upper} for lower, upper in pairwise(ends)],
    }


@pytest.mark.parametrize(
    ("answer", "texts"),
    [
        pytest.param(bands_between(None, None, edges=[]), ["every K"], id="no-edge"),
        pytest.param(
            bands_between(None, 0.0, 6.0, None, edges=[0.0, 6.0]),
            ["K < 0", "0 < K < 6", "K > 6"],
            id="unbounded",
        ),
        pytest.param(
            bands_between(-1.0, 0.0, 2.0, edges=[0.0]), ["-1 < K < 0", "0 < K < 2"], id="window-between-edges"
        ),
        pytest.param(
            bands_between(0.0, 0.0, 6.0, 6.0, edges=[0.0, 6.0]),
            ["just below 0", "0 < K < 6", "just above 6"],
            id="window-on-edges",
        ),
        pytest.param(
            bands_between(0.14546, 0.145463, 1.0, edges=[0.145463]),
            ["0.14546 < K < 0.145463", "0.145463 < K < 1"],
            id="window-close-to-an-edge",
        ),
        pytest.param(bands_between(1.0, 2.0, edges=[]), ["1 < K < 2"], id="window-without-edge"),
    ],
)
def test_a_band_reads_as_an_inequality(answer: dict[str, Any], texts: list[str]) -> None:
    assert band_labels(answer) == texts


@pytest.mark.parametrize(
    ("coefficients", "text"),
    [
        pytest.param(["1", "-2"], "s - 2", id="linear"),
        pytest.param(["1", "0", "9/4"], "s^2 + 9/4", id="absent-term"),
        pytest.param(["-1", "1/3", "-1"], "-s^2 + 1/3 s - 1", id="negative-lead"),
        pytest.param(["5/2", "0"], "5/2 s", id="no-constant"),
        pytest.param(["0"], "0", id="zero"),
        pytest.param(["-3"], "-3", id="constant"),
    ],
)
def test_a_polynomial_reads_in_descending_powers(coefficients: list[str], text: str) -> None:
    assert polynomial_words(coefficients) == text


@given(st.lists(st.fractions(), min_size=1, max_size=6))
def test_a_polynomial_in_words_is_the_one_of_its_coefficients(coefficients: list[Fraction]) -> None:
    words = polynomial_words([str(coefficient) for coefficient in coefficients])
    read_back = sympify(re.sub(r"(\d) s", r"\1*s", words))
    expected = sum(Rational(each) * Symbol("s") ** power for power, each in enumerate(reversed(coefficients)))
    assert read_back == expected
