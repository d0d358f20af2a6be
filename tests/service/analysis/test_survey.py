"""The survey of the whole gain axis, its windows, and its refusal where the counts differ."""

from fractions import Fraction
from math import isqrt

import pytest
from flint import fmpq
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import bands as bands_module
from service.analysis import survey as module
from service.analysis.counts import Counts, count_roots
from service.analysis.errors import CountsDisagree
from service.analysis.gains import Gain
from service.analysis.survey import Survey, Window, survey
from service.analysis.winding import Arcs, Winding, wind
from tests.exact import exact_loop, fraction
from tests.oracle import Loop, is_lossless
from tests.polynomials import polynomial
from tests.strategies import any_loops, detours

P = polynomial
THREE_LAGS = exact_loop(Loop(P(1), P(1, 3, 3, 1)))
HOIST = exact_loop(Loop(P("2.5", 10), P(1, "1/3", 4, 0)))


def whole(window: Window | None = None) -> Survey:
    return survey(THREE_LAGS, "right", window)


def value(gain: Gain | None) -> Fraction | None:
    return None if gain is None or gain.rational is None else fraction(gain.rational)


def ends(found: Survey) -> list[tuple[Fraction | None, Fraction | None]]:
    return [tuple(map(value, found.ends(i))) for i in range(len(found.bands))]  # type: ignore[misc]


def test_bands_lie_between_the_edges_and_reach_to_infinity() -> None:
    assert ends(whole()) == [(None, -1), (-1, 8), (8, None)]


def test_bands_carry_counts_and_encirclements() -> None:
    assert [(band.counts, band.encirclements) for band in whole().bands] == [
        (Counts(1, 0), 1),
        (Counts(0, 0), 0),
        (Counts(2, 0), 2),
    ]


@pytest.mark.parametrize(
    ("window", "expected"),
    [
        pytest.param((-2, 10), [(-2, -1), (-1, 8), (8, 10)], id="round all"),
        pytest.param((0, 4), [(0, 4)], id="within a band"),
        pytest.param((-1, 8), [(-1, -1), (-1, 8), (8, 8)], id="from edge to edge"),
        pytest.param((8, 20), [(8, 8), (8, 20)], id="from an edge on"),
        pytest.param((9, 20), [(9, 20)], id="beyond"),
    ],
)
def test_a_window_is_closed_and_ends_the_outer_bands(
    window: tuple[int, int], expected: list[tuple[int, int]]
) -> None:
    found = whole((fmpq(window[0]), fmpq(window[1])))
    assert ends(found) == expected
    assert [span.empty for span in found.spans] == [low == high for low, high in expected]
    assert len(found.cells) == len(found.edges) == len(found.bands) - 1


def test_a_window_may_end_however_near_an_irrational_edge() -> None:
    """The edge 3 + sqrt(5) lies within 1e-40 of either end: both bands beside it hold a gain."""
    low = 3 + Fraction(isqrt(5 * 100**40), 10**40)
    high = low + Fraction(1, 10**40)
    window = fmpq(low.numerator, low.denominator), fmpq(high.numerator, high.denominator)
    found = survey(exact_loop(Loop(P(1, 1, 8), P(1, 1, 1, -3))), "right", window)
    assert len(found.edges) == 1
    assert [span.empty for span in found.spans] == [False, False]
    assert [band.counts.rhp for band in found.bands] == [2, 0]
    assert window[0] < found.bands[0].sample < found.cells[0][0]
    assert found.cells[0][1] < found.bands[1].sample < window[1]


@given(low=st.fractions(-3, 12, max_denominator=7), width=st.fractions(Fraction(1, 9), 9, max_denominator=9))
@settings(max_examples=40)
def test_a_window_changes_no_count(low: Fraction, width: Fraction) -> None:
    """Each reported band has the counts of its sample, and the sample lies in it."""
    high = low + width
    found = whole((fmpq(low.numerator, low.denominator), fmpq(high.numerator, high.denominator)))
    for band, span in zip(found.bands, found.spans, strict=True):
        assert band.counts == count_roots(THREE_LAGS.closed_at(band.sample))
        if not span.empty:
            assert span.lower is not None
            assert span.upper is not None
            assert span.lower < band.sample < span.upper


def test_a_zero_numerator_has_one_band_and_no_edge() -> None:
    found = survey(exact_loop(Loop((), P(1, 0, 1))), "left", None)
    assert found.edges == ()
    assert [(band.counts, band.encirclements) for band in found.bands] == [(Counts(0, 2), 0)]


LOSSY = any_loops.filter(lambda loop: bool(loop.numerator) and not is_lossless(loop))


@given(loop=LOSSY, detour=detours)
@settings(max_examples=60)
def test_one_root_counted_too_many_in_a_band_is_always_noticed(loop: Loop, detour: str) -> None:
    """Only the count of the closed loop is falsified, not that of the open loop."""

    def falsified(*arguments: object, **keywords: object) -> object:
        with pytest.MonkeyPatch.context() as inner:
            inner.setattr(bands_module, "count_roots", lambda p: Counts(1, 0) + count_roots(p))
            return count_band(*arguments, **keywords)  # type: ignore[arg-type]

    count_band = bands_module.count_band
    exact = exact_loop(loop)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "count_band", falsified)
        with pytest.raises(CountsDisagree, match="clockwise encirclements say otherwise"):
            survey(exact, "left" if detour == "left" else "right", None)


@given(loop=LOSSY, detour=detours, extra=st.sampled_from([Arcs(1, 0), Arcs(0, 1), Arcs(-1, 0), Arcs(0, -1)]))
@settings(max_examples=60)
def test_one_pass_of_an_arc_too_many_is_always_noticed(loop: Loop, detour: str, extra: Arcs) -> None:
    def falsified(*arguments: object) -> Winding:
        true = wind(*arguments)  # type: ignore[arg-type]
        return Winding(true.arcs + extra, true.swings, true.origin_swing, true.infinity_swing)

    exact = exact_loop(loop)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "wind", falsified)
        with pytest.raises(CountsDisagree, match=r"say otherwise|reaches infinity"):
            survey(exact, "left" if detour == "left" else "right", None)


@pytest.mark.parametrize("loop", [THREE_LAGS, HOIST], ids=["three lags", "hoist drive"])
def test_a_swing_the_wrong_way_is_noticed(loop: object, monkeypatch: pytest.MonkeyPatch) -> None:
    def falsified(*arguments: object) -> Winding:
        true = wind(*arguments)  # type: ignore[arg-type]
        return Winding(true.arcs, tuple(-s for s in true.swings), true.origin_swing, true.infinity_swing)

    monkeypatch.setattr(module, "wind", falsified)
    with pytest.raises(CountsDisagree, match="clockwise encirclements say otherwise"):
        survey(loop, "right", None)  # type: ignore[arg-type]
