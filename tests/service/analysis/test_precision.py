"""Working precision put back, exact ends of balls, and correct rounding to doubles and 30 digits."""

import math
import sys
from collections.abc import Callable
from decimal import Decimal
from fractions import Fraction

import pytest
from flint import arb, ctx, fmpq
from hypothesis import given
from hypothesis import strategies as st

from service.analysis.errors import OutOfRange
from service.analysis.precision import (
    HIGHEST,
    accurate_bits,
    decimal30,
    dyadic,
    ends,
    nearest_double,
    rounded_decimal,
    rounded_double,
    working,
)
from tests.exact import fraction, rational

LEAST = Fraction(2) ** -1074
GREATEST = Fraction(sys.float_info.max)
TWO = Fraction(2)

wide_fractions = st.builds(
    lambda value, exponent: value * Fraction(10) ** exponent,
    st.fractions(min_value=-9, max_value=9, max_denominator=10**6).filter(bool),
    st.integers(-290, 290),
)


class BrokenOff(Exception):
    """Raised within a block to leave it."""


def test_a_block_works_at_its_precision_and_puts_the_former_one_back() -> None:
    before = ctx.prec
    with working(200):
        assert ctx.prec == 200
        with working(90):
            assert ctx.prec == 90
        assert ctx.prec == 200
    assert ctx.prec == before


def broken_off(bits: int) -> None:
    """Leave a block of that precision by an error."""
    with working(bits):
        raise BrokenOff(ctx.prec)


def test_precision_is_put_back_after_an_error() -> None:
    before = ctx.prec
    with pytest.raises(BrokenOff, match="333"):
        broken_off(333)
    assert ctx.prec == before


@pytest.mark.parametrize(
    ("ball", "least", "most"),
    [(arb(1, 2.0**-40), 39, 41), (arb(0, 1), 0, 0), (arb(1, 5), 0, 0)],
    ids=["forty bits", "round zero", "wider than its middle"],
)
def test_accurate_bits_are_relative_and_never_negative(ball: arb, least: int, most: int) -> None:
    assert least <= accurate_bits(ball) <= most


@given(m=st.integers(-(2**70), 2**70), e=st.integers(-90, 90))
def test_an_exact_ball_is_read_as_its_fraction(m: int, e: int) -> None:
    with working(80):
        assert fraction(dyadic(arb(m) * arb(2) ** e)) == m * TWO**e


def test_ends_are_exact() -> None:
    ball = arb(0.75, 2.0**-30)
    low, high = ends(ball)
    assert low + high == fmpq(3, 2)
    assert high - low == 2 * dyadic(ball.rad())
    assert fmpq(1, 2**30) <= dyadic(ball.rad()) < fmpq(1001, 1000 * 2**30)


@given(value=wide_fractions)
def test_no_neighbouring_double_is_nearer(value: Fraction) -> None:
    found = nearest_double(rational(value))
    for other in (math.nextafter(found, math.inf), math.nextafter(found, -math.inf)):
        assert abs(Fraction(found) - value) <= abs(Fraction(other) - value)


@pytest.mark.parametrize("sign", [1, -1], ids=["positive", "negative"])
@pytest.mark.parametrize(
    ("value", "expected"),
    [
        pytest.param(1 + TWO**-53, 1.0, id="tie down to even"),
        pytest.param(1 + 3 * TWO**-53, 1 + 2.0**-51, id="tie up to even"),
        pytest.param(1 + TWO**-53 + TWO**-2000, 1 + 2.0**-52, id="just above a tie"),
        pytest.param(1 + 3 * TWO**-53 - TWO**-2000, 1 + 2.0**-52, id="just below a tie"),
        pytest.param(LEAST, 5e-324, id="least subnormal"),
        pytest.param(LEAST * 3 / 2, 1e-323, id="subnormal tie up to even"),
        pytest.param(LEAST * 5 / 2, 1e-323, id="subnormal tie down to even"),
        pytest.param(LEAST / 2 + TWO**-3000, 5e-324, id="just above half the least"),
        pytest.param(TWO**-1022 - LEAST / 2, 2.0**-1022, id="tie up to the least normal"),
        pytest.param(GREATEST, sys.float_info.max, id="greatest"),
        pytest.param(TWO**1024 - TWO**970 - 1, sys.float_info.max, id="just below overflow"),
    ],
)
def test_ties_go_to_even_and_nothing_else_does(value: Fraction, expected: float, sign: int) -> None:
    assert nearest_double(rational(sign * value)) == sign * expected


def test_zero_is_the_only_value_that_becomes_zero() -> None:
    assert nearest_double(fmpq(0)) == 0.0


@pytest.mark.parametrize(
    ("value", "named"),
    [
        pytest.param(LEAST / 2, "2.47032822920623272088284396434E-324", id="tie between zero and the least"),
        pytest.param(-(Fraction(10) ** -400), "-1E-400", id="tiny"),
        pytest.param(TWO**1024 - TWO**970, "1.79769313486231580793728971405E+308", id="tie at the top"),
        pytest.param(-(Fraction(10) ** 400), "-1E+400", id="huge"),
    ],
)
def test_a_value_beyond_the_doubles_is_refused_by_name(value: Fraction, named: str) -> None:
    with pytest.raises(OutOfRange) as refusal:
        nearest_double(rational(value))
    assert str(refusal.value) == (f"A value near {named} lies beyond the range of double precision numbers.")


@given(value=wide_fractions)
def test_a_decimal_is_within_half_a_unit_of_its_thirtieth_digit(value: Fraction) -> None:
    written = Decimal(decimal30(rational(value)))
    unit = Fraction(10) ** (written.adjusted() - 29)
    assert abs(Fraction(written) - value) <= unit / 2
    assert Fraction(written) % unit == 0


@pytest.mark.parametrize(
    ("value", "text"),
    [
        pytest.param("0", "0", id="zero"),
        pytest.param("-5/2", "-2.5", id="no trailing zeros"),
        pytest.param("1200", "1200", id="a whole number keeps its zeros"),
        pytest.param("1/3", "0.333333333333333333333333333333", id="thirty digits"),
        pytest.param("2/3", "0.666666666666666666666666666667", id="rounded up"),
        pytest.param("1." + 28 * "0" + "25", "1." + 28 * "0" + "2", id="tie down to even"),
        pytest.param("1." + 28 * "0" + "35", "1." + 28 * "0" + "4", id="tie up to even"),
        pytest.param("1." + 28 * "0" + "25" + 50 * "0" + "1", "1." + 28 * "0" + "3", id="just above a tie"),
        pytest.param("1." + 28 * "0" + "05", "1", id="tie down to a whole number"),
        pytest.param("9." + 28 * "9" + "95", "10", id="carried into the next place"),
        pytest.param("9" * 30, "9" * 30, id="thirty places before the point"),
        pytest.param("1e30", "1E+30", id="one more is written with an exponent"),
        pytest.param("1e-9", "0.000000001", id="nine places after the point"),
        pytest.param("1.5e-10", "1.5E-10", id="one more, with an exponent"),
    ],
)
def test_decimals_are_written_plainly_and_ties_go_to_even(value: str, text: str) -> None:
    assert decimal30(rational(value)) == text


def square_root_of(value: int, asked: list[int] | None = None) -> Callable[[int], arb]:
    """Enclose a square root, noting the bits asked for."""

    def enclose(bits: int) -> arb:
        if asked is not None:
            asked.append(bits)
        with working(bits + 8):
            return arb(value).sqrt()

    return enclose


@given(value=st.integers(2, 10**9))
def test_an_irrational_number_rounds_to_the_nearest_double(value: int) -> None:
    assert rounded_double(square_root_of(value)) == math.sqrt(value)


def test_an_irrational_number_rounds_to_thirty_digits() -> None:
    def pi(bits: int) -> arb:
        with working(bits + 8):
            return arb.pi()

    assert rounded_decimal(pi) == "3.14159265358979323846264338328"


def test_accuracy_is_raised_until_both_ends_round_alike() -> None:
    """The square root of 1 + 2^-52 + 2^-106 + 2^-300 passes the tie at 1 + 2^-53 by about 2^-301."""
    asked: list[int] = []
    scale = 2**300
    above = scale + (scale >> 52) + (scale >> 106) + 1
    inner = square_root_of(above * scale, asked)

    def enclose(bits: int) -> arb:
        ball = inner(bits)
        with working(bits + 8):
            return ball / scale

    assert rounded_double(enclose) == 1 + 2.0**-52
    assert asked == [64, 128, 256, 512][: len(asked)]
    assert asked[-1] >= 256


def test_a_number_that_straddles_a_tie_for_ever_is_taken_to_lie_on_it() -> None:
    asked: list[int] = []

    def tie(bits: int) -> arb:
        asked.append(bits)
        with working(bits + 64):
            return arb(1) + arb(2) ** -53 + arb(0, arb(2) ** -bits)

    assert rounded_double(tie) == 1.0
    assert asked[-1] == HIGHEST
