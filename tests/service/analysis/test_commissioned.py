"""The gain in service: exact precisely on an edge, and its way back to the nearest stable band."""

from fractions import Fraction
from math import isqrt

import pytest
from flint import fmpq
from hypothesis import given, settings

from service.analysis.answer import Commissioned, NearestStable
from service.analysis.commissioned import commission
from service.analysis.survey import Window, survey
from tests.exact import exact_loop, rational
from tests.oracle import Loop
from tests.polynomials import add, multiply, polynomial, scaled
from tests.strategies import any_loops, non_zeros

P = polynomial
THREE_LAGS = Loop(P(1), P(1, 3, 3, 1))
ALL_PASS = Loop(P(1, -1), P(1, 1))
TINY = Fraction(1, 10**30)

QUADRATIC = Loop(P(1, 1, 8), P(1, 1, 1, -3))
"""s^3 + (K + 1) s^2 + (K + 1) s + 8K - 3: a pair crosses where (K + 1)^2 = 8K - 3, at K = 3 -+ sqrt(5)."""


def at(loop: Loop, gain: Fraction | int | str, window: Window | None = None) -> Commissioned:
    return commission(survey(exact_loop(loop), "right", window), rational(gain))


@pytest.mark.parametrize(
    ("gain", "band", "verdict", "rhp", "axis"),
    [
        ("-2", 0, "unstable", 1, 0),
        ("-1", None, "marginal", 0, 1),
        ("1/2", 1, "stable", 0, 0),
        ("8", None, "marginal", 0, 2),
        ("9", 2, "unstable", 2, 0),
    ],
)
def test_a_gain_has_its_band_verdict_and_counts(
    gain: str, band: int | None, verdict: str, rhp: int, axis: int
) -> None:
    found = at(THREE_LAGS, gain)
    assert (found.gain, found.exact) == (float(Fraction(gain)), gain)
    assert (found.band, found.verdict, found.rhp_poles, found.axis_poles) == (band, verdict, rhp, axis)
    assert found.margins is None


@pytest.mark.parametrize(("offset", "band"), [(-TINY, 1), (0, None), (TINY, 2)], ids=["below", "on", "above"])
def test_an_edge_is_met_exactly_or_not_at_all(offset: Fraction, band: int | None) -> None:
    assert at(THREE_LAGS, 8 + offset).band == band


def test_a_rational_gain_never_meets_an_irrational_edge() -> None:
    """The crossing of QUADRATIC at 3 + sqrt(5), cut off after n digits and one unit more."""
    for digits in (5, 30, 200):
        cut = 3 + Fraction(isqrt(5 * 100**digits), 10**digits)
        assert [at(QUADRATIC, cut).band, at(QUADRATIC, cut + Fraction(1, 10**digits)).band] == [2, 3]


def test_counts_at_an_edge_are_its_own_and_not_a_neighbour_s() -> None:
    """Row 33 of the degenerate cases: two poles right of the axis on both sides, none at the edge."""
    found = at(Loop(P(1, 0), P(1, 2, 2, 1, 1)), 1)
    assert (found.band, found.verdict, found.rhp_poles, found.axis_poles) == (None, "marginal", 0, 2)


def test_repeated_axis_roots_at_an_edge_are_unstable() -> None:
    found = at(Loop(P(1, 1), P(1, 0, 0)), 0)
    assert (found.verdict, found.rhp_poles, found.axis_poles) == ("unstable", 0, 2)


def test_where_the_closed_loop_loses_degree_it_is_ill_posed_with_its_finite_roots_counted() -> None:
    """(s^2 - 2s + 2)/(s^2 + 2s + 2) at K = -1 leaves 4s."""
    found = at(Loop(P(1, -2, 2), P(1, 2, 2)), -1)
    assert (found.verdict, found.rhp_poles, found.axis_poles) == ("ill_posed", 0, 1)
    assert len(found.closed_loop_poles) == 1


def test_where_the_closed_loop_vanishes_nothing_is_counted() -> None:
    found = at(Loop(P(1, 1), P(1, 1)), -1)
    assert (found.verdict, found.rhp_poles, found.axis_poles) == ("ill_posed", None, None)
    assert found.closed_loop_poles == ()


def test_an_improper_loop_without_gain_is_not_ill_posed() -> None:
    assert at(Loop(P(1, 0, 0), P(1, 1)), 0).verdict == "stable"


def test_without_effect_a_gain_is_judged_by_the_open_loop() -> None:
    found = at(Loop((), P(1, 1)), 7)
    assert (found.band, found.verdict, found.nearest_stable) == (0, "stable", None)


@pytest.mark.parametrize(
    ("loop", "gain", "expected"),
    [
        pytest.param(THREE_LAGS, "20", NearestStable(1, -0.05, 0.4), id="towards zero"),
        pytest.param(THREE_LAGS, "8", NearestStable(1, -0.125, 1.0), id="at its end"),
        pytest.param(THREE_LAGS, "-2", NearestStable(1, -4.0, 0.5), id="a negative gain, towards zero"),
        pytest.param(Loop(P(1, 1), P(1, -1, 0)), "1/2", NearestStable(2, 2.0, None), id="away from zero"),
        pytest.param(Loop(P(-1, -1), P(1, -1, 0)), "-1/4", NearestStable(0, 4.0, None), id="away, negative"),
        pytest.param(Loop(P(-1, -1), P(1, -1, 0)), "1", None, id="none on this side"),
        pytest.param(Loop(P(1), P(1, -1)), "0", None, id="zero has no side"),
        pytest.param(THREE_LAGS, "1", None, id="stable itself"),
        pytest.param(ALL_PASS, "-1", NearestStable(1, -1.0, 1.0), id="ill-posed"),
    ],
)
def test_the_nearest_stable_band_lies_on_the_gain_s_own_side(
    loop: Loop, gain: str, expected: NearestStable | None
) -> None:
    assert at(loop, gain).nearest_stable == expected


BETWEEN = Loop(P(1, 1), P(-1, -16))
"""(K - 1) s + (K - 16): stable for K < 1 and for K > 16."""


@pytest.mark.parametrize(
    ("gain", "band"),
    [
        pytest.param(4 - TINY, 0, id="a little nearer to the band towards zero"),
        pytest.param(Fraction(4), 0, id="a tie goes towards zero"),
        pytest.param(4 + TINY, 2, id="a little nearer to the band away from it"),
        pytest.param(Fraction(8), 2, id="nearer by ratio, further by difference than the middle"),
    ],
)
def test_nearness_is_by_ratio_and_decided_exactly(gain: Fraction, band: int) -> None:
    found = at(BETWEEN, gain)
    assert found.verdict == "unstable"
    assert found.nearest_stable is not None
    assert found.nearest_stable.band == band


def test_a_tie_between_irrational_ends_goes_towards_zero() -> None:
    """3 - sqrt(5) and 3 + sqrt(5) multiply to 4: both are a factor of 2 / (3 - sqrt(5)) away from 2."""
    found = at(QUADRATIC, 2)
    edges = survey(exact_loop(QUADRATIC), "right", None).edges
    assert [edge.gain.rational for edge in edges] == [fmpq(3, 8), None, None]
    assert found.verdict == "unstable"
    assert found.nearest_stable is not None
    assert found.nearest_stable.band == 1


@pytest.mark.parametrize(("offset", "band"), [(-TINY, 1), (TINY, 3)], ids=["below", "above"])
def test_near_a_tie_between_irrational_ends_the_nearer_wins(offset: Fraction, band: int) -> None:
    found = at(QUADRATIC, 2 + offset).nearest_stable
    assert found is not None
    assert found.band == band


def test_a_window_hides_the_stable_gains_beyond_it() -> None:
    assert at(THREE_LAGS, 20, (fmpq(10), fmpq(30))).nearest_stable is None
    assert at(THREE_LAGS, 20, (fmpq(2), fmpq(30))).nearest_stable == NearestStable(0, 0.1, 0.4)


def test_an_empty_band_at_the_window_s_end_is_no_way_back() -> None:
    assert at(THREE_LAGS, 20, (fmpq(8), fmpq(30))).nearest_stable is None


@given(loop=any_loops, gain=non_zeros)
@settings(max_examples=60)
def test_shifting_the_gain_to_zero_keeps_the_poles(loop: Loop, gain: Fraction) -> None:
    """D + K N at K is the open loop of N / (D + K N) at gain zero."""
    shifted = add(loop.denominator, scaled(loop.numerator, gain))
    if shifted:
        here, there = at(loop, gain), at(Loop(loop.numerator, shifted), 0)
        assert here.closed_loop_poles == there.closed_loop_poles
        assert (here.rhp_poles, here.axis_poles) == (there.rhp_poles, there.axis_poles)


def test_hidden_modes_are_among_the_poles() -> None:
    hidden = P(1, -3)
    found = at(Loop(hidden, multiply(hidden, P(1, 1))), 4)
    assert [pole.re for pole in found.closed_loop_poles] == [3.0, -5.0]
    assert found.verdict == "unstable"
