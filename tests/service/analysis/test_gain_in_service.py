"""The gain in service against the oracle: its counts, its verdict and the nearest stable band."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from service.analysis.answer import Answer
from tests.asking import ask, band_ends, edge_gain, is_rational
from tests.effort import examples
from tests.oracle import Loop, closed_loop, counts, reduced, verdict
from tests.polynomials import degree
from tests.strategies import FAMILIES, any_loops, feedbacks, non_zeros

in_every_family = pytest.mark.parametrize("family", FAMILIES.values(), ids=FAMILIES)


@in_every_family
@given(data=st.data())
@examples(30)
def test_the_counts_at_a_rational_edge_are_its_own(
    family: st.SearchStrategy[Loop], data: st.DataObject
) -> None:
    loop, feedback = data.draw(family), data.draw(feedbacks)
    for edge in filter(is_rational, ask(loop, feedback=feedback).edges):
        commissioned = ask(loop, feedback=feedback, gain=edge_gain(edge)).commissioned
        closed = closed_loop(loop, edge_gain(edge), feedback)
        expected = counts(closed) if closed else (None, None)
        assert commissioned is not None
        assert commissioned.band is None
        assert (commissioned.rhp_poles, commissioned.axis_poles) == expected


def gain_is_algebraic(small: Loop, gain: Fraction, feedback: str) -> bool:
    """Tell whether 1 + K L(infinity) = 0, for the cancelled loop."""
    drops = degree(closed_loop(small, gain, feedback)) < degree(small.denominator)
    return bool(small.numerator) and drops


@in_every_family
@given(data=st.data())
@examples(30)
def test_the_counts_at_a_commissioned_gain_are_the_oracle_s(
    family: st.SearchStrategy[Loop], data: st.DataObject
) -> None:
    loop, feedback, gain = data.draw(family), data.draw(feedbacks), data.draw(non_zeros)
    found = ask(loop, feedback=feedback, gain=gain)
    closed = closed_loop(loop, gain, feedback)
    assert found.commissioned is not None
    assert Fraction(found.commissioned.exact) == gain
    small = reduced(loop)
    if gain_is_algebraic(small, gain, feedback):
        assert found.commissioned.verdict == "ill_posed"
    else:
        assert found.commissioned.verdict == verdict(closed)
    expected = counts(closed) if closed else (None, None)
    assert (found.commissioned.rhp_poles, found.commissioned.axis_poles) == expected
    if found.commissioned.band is None:
        assert gain in map(edge_gain, found.edges)
    else:
        lower, upper = band_ends(found)[found.commissioned.band]
        assert lower is None or lower < gain
        assert upper is None or gain < upper


def nearest_stable_band(found: Answer, gain: Fraction) -> int | None:
    """Find the stable band that the least factor takes the gain to, of a tie the one towards zero."""
    factors = {}
    for i, (band, (lower, upper)) in enumerate(zip(found.bands, band_ends(found), strict=True)):
        low, high = (lower, upper) if gain > 0 else (upper, lower)
        start = Fraction(0) if low is None else max(Fraction(0), low / gain)
        end = None if high is None else high / gain
        if band.verdict == "stable" and (end is None or end > 0):
            factors[i] = max(Fraction(1), start, Fraction(1) if end is None else 1 / end), start
    return min(factors, key=lambda i: factors[i], default=None)


@given(loop=any_loops, gain=non_zeros)
@examples(200)
def test_the_nearest_stable_band_is_nearest_by_ratio(loop: Loop, gain: Fraction) -> None:
    found = ask(loop, gain=gain)
    assert found.commissioned is not None
    nearest = found.commissioned.nearest_stable
    if found.commissioned.verdict == "stable":
        assert nearest is None
    else:
        assert (nearest and nearest.band) == nearest_stable_band(found, gain)
    if nearest:
        ends = band_ends(found)[nearest.band][:: 1 if gain > 0 else -1]
        for ratio, end in zip((nearest.ratio_from, nearest.ratio_to), ends, strict=True):
            assert ratio == (None if end is None else pytest.approx(float(end / gain), rel=1e-15))
