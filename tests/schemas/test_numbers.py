"""Exact numbers: what is written is what is meant."""

import time
from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st
from marshmallow import ValidationError

from schemas.limits import QuestionLimits
from schemas.numbers import exact_number, exact_text
from schemas.problem import Fault, faults_of
from schemas.reader import NotFinite, NumberText

LIMITS = QuestionLimits()


def fault(value: object, limits: QuestionLimits = LIMITS) -> Fault:
    """The one fault of ``value``, read under ``limits``."""
    with pytest.raises(ValidationError, match=r"number|fraction|power") as refusal:
        exact_number(value, limits)
    (only,) = faults_of(refusal.value.messages)
    return only


@pytest.mark.parametrize(
    ("value", "exact"),
    [
        (NumberText("0.1"), Fraction(1, 10)),
        (NumberText("-0"), Fraction(0)),
        (NumberText("1E+2"), Fraction(100)),
        (NumberText("2.50e-1"), Fraction(1, 4)),
        ("0.1", Fraction(1, 10)),
        ("-2.5", Fraction(-5, 2)),
        ("1e3", Fraction(1000)),
        ("1e+3", Fraction(1000)),
        ("1e-3", Fraction(1, 1000)),
        ("007", Fraction(7)),
        ("-6/4", Fraction(-3, 2)),
        ("0/5", Fraction(0)),
        (12, Fraction(12)),
    ],
    ids=str,
)
def test_a_number_is_what_is_written(value: object, exact: Fraction) -> None:
    assert exact_number(value, LIMITS) == exact


@given(st.decimals(allow_nan=False, allow_infinity=False, places=20, min_value=-(10**30), max_value=10**30))
def test_a_decimal_is_taken_without_rounding(value: Decimal) -> None:
    written = f"{value:f}"
    assert exact_number(written, LIMITS) == exact_number(NumberText(written), LIMITS) == Fraction(value)


@given(st.fractions(max_denominator=10**40))
def test_a_fraction_comes_back_from_its_own_text(value: Fraction) -> None:
    assert exact_number(exact_text(value), LIMITS) == value


@given(st.floats(allow_nan=False, allow_infinity=False, min_value=1e-50, max_value=1e50))
def test_the_text_of_a_double_is_taken_as_the_decimal_it_shows(value: float) -> None:
    assert exact_number(NumberText(repr(value)), LIMITS) == Fraction(Decimal(repr(value)))


@pytest.mark.parametrize(
    "text",
    [
        "",
        " 1",
        "1 ",
        "1\n",
        "+1",
        "--1",
        ".5",
        "5.",
        "1_000",
        "1,5",
        "1e",
        "e5",
        "1E5",
        "1e1.5",
        "0x10",
        "inf",
        "nan",
        "1/-2",
        "1/+2",
        "1.5/2",
        "1/2/3",
        "1/2e3",
        "/2",
        "1/",
        "1j",
        "٣",
        "\uff11",
        "1\u2212",
        "²",
        "\x00",
        "\ud800",
    ],
    ids=ascii,
)
def test_no_other_form_is_taken(text: str) -> None:
    assert "Not a number in a form taken here" in fault(text).detail


@pytest.mark.parametrize(
    ("value", "reason"),
    [
        pytest.param(True, "A boolean is no number", id="true"),
        pytest.param(False, "A boolean is no number", id="false"),
        pytest.param(NotFinite("NaN"), "NaN is no number", id="NaN"),
        pytest.param(NotFinite("-Infinity"), "-Infinity is no number", id="-Infinity"),
        pytest.param(0.5, "binary float", id="float"),
        pytest.param(None, "Not a number", id="null"),
        pytest.param([1], "Not a number", id="list"),
        pytest.param({}, "Not a number", id="object"),
        pytest.param("1/0", "over zero", id="over zero"),
        pytest.param("-5/000", "over zero", id="over three zeros"),
    ],
)
def test_what_is_no_number_is_refused_with_the_reason(value: object, reason: str) -> None:
    assert reason in fault(value).detail


@pytest.mark.parametrize(
    ("within", "beyond", "received"),
    [
        pytest.param("9" * 120, "9" * 121, 121, id="whole"),
        pytest.param("0." + "3" * 119, "0." + "3" * 120, 121, id="decimal"),
        pytest.param("9" * 120 + "/" + "7" * 120, "9" * 121 + "/7", 121, id="over"),
        pytest.param("1/" + "7" * 120, "1/" + "7" * 130, 130, id="below"),
        pytest.param(10**120 - 1, 10**120, 121, id="int"),
        pytest.param(1, 10**5000, "an integer of 16610 bits", id="monstrous int"),
    ],
)
def test_digits_are_taken_to_their_limit(within: object, beyond: object, received: int | str) -> None:
    assert exact_number(within, LIMITS)
    only = fault(beyond)
    assert (only.limit, only.allowed, only.received) == ("digits", 120, received)


@pytest.mark.parametrize(
    ("beyond", "received"),
    [
        ("1e61", 61),
        ("1e-61", 61),
        ("1e999999999", 999999999),
        ("1e-999999999", 999999999),
        ("0e999999999", 999999999),
        ("1e" + "9" * 40, "an exponent of 40 digits"),
    ],
)
def test_a_power_of_ten_beyond_its_limit_names_what_was_received(beyond: str, received: int | str) -> None:
    for value in (beyond, NumberText(beyond)):
        only = fault(value)
        assert (only.limit, only.allowed, only.received) == ("exponent", 60, received)
        assert str(received) in only.detail


@pytest.mark.parametrize(
    ("text", "exact"),
    [
        pytest.param("1e60", Fraction(10**60), id="60"),
        pytest.param("1e-60", Fraction(1, 10**60), id="-60"),
        pytest.param("1e-" + "0" * 5000 + "60", Fraction(1, 10**60), id="zeros in front"),
    ],
)
def test_a_power_of_ten_is_taken_to_its_limit(text: str, exact: Fraction) -> None:
    assert exact_number(text, LIMITS) == exact


@pytest.mark.parametrize(
    "monster",
    [
        pytest.param("1e999999999", id="huge"),
        pytest.param("1e-99999999", id="tiny"),
        pytest.param("1" * 100_000, id="digits"),
        pytest.param("1e" + "9" * 100_000, id="digits of the exponent"),
        pytest.param("1/" + "1" * 100_000, id="digits of the denominator"),
    ],
)
def test_a_monster_is_refused_before_it_is_built(monster: str) -> None:
    spent = []
    for _ in range(5):
        started = time.process_time()
        fault(monster)
        spent.append(time.process_time() - started)
    assert min(spent) < 0.010


def test_the_limits_given_are_the_limits_kept() -> None:
    tight = QuestionLimits(digits=3, exponent=2)
    assert exact_number("123e2", tight) == 12300
    assert fault("1234", tight).allowed == 3
    assert fault("1e3", tight).allowed == 2
