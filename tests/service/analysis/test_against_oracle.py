"""The engine's counts, edges and causes against the independent oracle, over families of nasty loops."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from service.analysis.answer import Answer, Edge
from tests.asking import ask, band_ends, edge_gain, gains_inside, is_rational
from tests.effort import examples
from tests.oracle import (
    Counts,
    Loop,
    closed_loop,
    closed_loop_counts,
    counts,
    event_polynomial,
    has_repeated_axis_root,
    is_lossless,
    real_roots,
    reduced,
    verdict,
)
from tests.polynomials import (
    Polynomial,
    degree,
    evaluate,
    gcd,
    multiply,
    parts,
    squarefree_factors,
)
from tests.strategies import (
    FAMILIES,
    any_loops,
    axis_pairs,
    detours,
    feedbacks,
    lossless,
    positives,
)

shares = st.integers(1, 999).map(lambda n: Fraction(n, 1000))
in_every_family = pytest.mark.parametrize("family", FAMILIES.values(), ids=FAMILIES)


def band_counts(found: Answer) -> list[Counts]:
    return [Counts(band.rhp_poles, band.axis_poles) for band in found.bands]


def counts_at_edge(loop: Loop, edge: Edge, feedback: str) -> Counts | None:
    """Count at a rational edge; None where the closed-loop polynomial vanishes there."""
    closed = closed_loop(loop, edge_gain(edge), feedback)
    return counts(closed) if closed else None


@in_every_family
@given(data=st.data())
@examples(50)
def test_every_band_has_the_oracle_s_counts_throughout(
    family: st.SearchStrategy[Loop], data: st.DataObject
) -> None:
    loop, feedback, share = data.draw(family), data.draw(feedbacks), data.draw(shares)
    found = ask(loop, feedback=feedback)
    for band, (lower, upper) in zip(found.bands, band_ends(found), strict=True):
        for gain in gains_inside(lower, upper, share):
            closed = closed_loop(loop, gain, feedback)
            assert (band.rhp_poles, band.axis_poles, band.verdict) == (*counts(closed), verdict(closed)), gain


@given(loop=any_loops, feedback=feedbacks)
def test_no_rational_edge_without_a_change_a_touch_or_a_cause(loop: Loop, feedback: str) -> None:
    found = ask(loop, feedback=feedback)
    numerator, denominator = reduced(loop)
    # A root running along the axis of a lossless loop changes no count where it meets a hidden pair.
    meets_hidden = is_lossless(loop) and len(numerator) < len(loop.numerator)
    beside = band_counts(found)
    for i, edge in enumerate(found.edges):
        assert edge.counts_equal == (beside[i] == beside[i + 1])
        if is_rational(edge):
            at_edge = counts_at_edge(loop, edge, feedback)
            special = edge_gain(edge) == 0 or len(numerator) == len(denominator) or meets_hidden
            assert beside[i] != beside[i + 1] or at_edge != beside[i] or special


@in_every_family
@given(data=st.data())
@examples(20)
def test_causes_of_rational_edges_are_what_happens_there(
    family: st.SearchStrategy[Loop], data: st.DataObject
) -> None:
    loop, feedback = data.draw(family), data.draw(feedbacks)
    small = reduced(loop)
    # A hidden pair repeats a root of a lossless loop at gains of its own; the next test has those.
    loop = small if is_lossless(loop) else loop
    for edge in filter(is_rational, ask(loop, feedback=feedback).edges):
        closed = closed_loop(small, edge_gain(edge), feedback)
        happens = {
            "origin": bool(closed) and closed[-1] == 0,
            "crossing": bool(closed) and crosses(closed, everywhere=is_lossless(loop)),
            "infinity": degree(closed) < max(map(degree, small)),
        }
        expected = (
            ["open_loop"] if edge_gain(edge) == 0 else [cause for cause, there in happens.items() if there]
        )
        assert list(edge.causes) == expected


def crosses(closed: Polynomial, *, everywhere: bool) -> bool:
    """Tell whether a pair is on the axis off the origin; in a lossless loop, whether two pairs meet there."""
    while closed[-1] == 0:
        closed = closed[:-1]
    return has_repeated_axis_root(closed) if everywhere else counts(closed).axis > 0


@given(loop=lossless().filter(lambda loop: loop == reduced(loop)), hidden=axis_pairs)
def test_a_hidden_pair_is_an_edge_of_a_lossless_loop_where_another_meets_it(
    loop: Loop, hidden: Polynomial
) -> None:
    """Counts are the same on both sides, but the pair is repeated there."""
    numerator, denominator = (evaluate(parts(p)[0], -hidden[2]) for p in loop)
    covered = ask(Loop(multiply(loop.numerator, hidden), multiply(loop.denominator, hidden)))
    if numerator:
        assert -denominator / numerator in map(edge_gain, covered.edges)
    assert {edge.gain for edge in ask(loop).edges} <= {edge.gain for edge in covered.edges}


@given(loop=any_loops)
def test_gain_zero_is_an_edge_for_axis_poles_and_improper_loops_alone(loop: Loop) -> None:
    numerator, denominator = reduced(loop)
    by_rule = bool(numerator) and (counts(denominator).axis > 0 or degree(numerator) > degree(denominator))
    at_zero = [edge for edge in ask(loop).edges if edge_gain(edge) == 0]
    assert [edge.causes for edge in at_zero] == [("open_loop",)] * by_rule


def axis_event_gains(loop: Loop) -> list[tuple[Fraction, Fraction]]:
    """Enclose the gains at which the closed loop has a root pair +-s, without loss at the origin."""
    event = event_polynomial(loop)
    width = Fraction(1, 10**40)
    return sorted(ends for factor, _ in squarefree_factors(event) for ends in real_roots(factor, width))


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator) and not is_lossless(loop)))
def test_every_edge_but_those_at_infinity_is_an_event_of_the_axis(loop: Loop) -> None:
    """The resultant of the closed loop's even and odd parts knows nothing of the curve and its crossings."""
    small = reduced(loop)
    enclosures = axis_event_gains(small)
    tolerance = Fraction(1, 10**29)
    for edge in ask(loop).edges:
        gain = edge_gain(edge)
        if set(edge.causes) & {"origin", "crossing"}:
            near = [ends for ends in enclosures if abs(ends[1] - gain) <= tolerance * abs(gain)]
            assert len(near) == 1
            if is_rational(edge):
                assert evaluate(event_polynomial(small), gain) == 0


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator) and not is_lossless(loop)))
def test_every_rational_event_of_the_axis_is_an_edge(loop: Loop) -> None:
    """A touch changes no count: only looking at the gain itself can show that it was not left out."""
    small = reduced(loop)
    edges = {edge_gain(edge) for edge in ask(loop).edges}
    for factor, _ in squarefree_factors(event_polynomial(small)):
        if degree(factor) == 1 and counts(closed_loop(small, -factor[1])).axis:
            assert -factor[1] in edges


@in_every_family
@given(data=st.data())
@examples(40)
def test_counts_and_encirclements_agree(family: st.SearchStrategy[Loop], data: st.DataObject) -> None:
    loop, detour, feedback = data.draw(family), data.draw(detours), data.draw(feedbacks)
    small = reduced(loop)
    found = ask(loop, detour=detour, feedback=feedback)
    taken_in = counts(small.denominator).axis if detour == "left" and loop.numerator else 0
    assert found.open_loop.rhp_poles == counts(loop.denominator).rhp
    assert found.open_loop.enclosed_poles == found.open_loop.rhp_poles + taken_in
    for band, ends in zip(found.bands, band_ends(found), strict=True):
        inside = gains_inside(*ends, Fraction(1, 2))[1]
        on_curve = is_lossless(loop) and counts(closed_loop(small, inside, feedback)).axis > 0
        expected = None if on_curve else band.rhp_poles - found.open_loop.enclosed_poles
        assert band.clockwise_encirclements == expected


@given(loop=any_loops)
def test_open_loop_axis_poles_have_the_oracle_s_multiplicities(loop: Loop) -> None:
    listed = ask(loop).open_loop.axis_poles
    assert (
        sum(p.multiplicity * (1 if p.rad_per_s == 0 else 2) for p in listed) == counts(loop.denominator).axis
    )
    assert any(p.multiplicity > 1 for p in listed) == has_repeated_axis_root(loop.denominator)
    assert [p.rad_per_s for p in listed] == sorted(p.rad_per_s for p in listed)


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
def test_hidden_modes_are_the_shared_factors_once_for_each_multiplicity(loop: Loop) -> None:
    shared = squarefree_factors(gcd(loop.numerator, loop.denominator))
    listed = ask(loop).open_loop.hidden_modes
    expected = [(tuple(map(str, factor)), *counts(factor)) for factor, often in shared for _ in range(often)]
    assert [(mode.polynomial, mode.rhp_roots, mode.axis_roots) for mode in listed] == expected


@given(loop=any_loops, gain=positives, reach=positives)
def test_a_window_cuts_the_answer_and_changes_nothing_in_it(
    loop: Loop, gain: Fraction, reach: Fraction
) -> None:
    whole = ask(loop)
    # A denominator of 97 keeps the window's ends off every edge the strategies make rational.
    low, high = gain - reach - Fraction(1, 97), gain + reach + Fraction(1, 97)
    cut = ask(loop, gain_window=(low, high))
    assert cut.edges == tuple(edge for edge in whole.edges if low <= edge_gain(edge) <= high)
    first = sum(edge_gain(edge) < low for edge in whole.edges)
    assert band_counts(cut) == band_counts(whole)[first : first + len(cut.bands)]
    assert (cut.bands[0].lower, cut.bands[-1].upper) == (float(low), float(high))


@pytest.mark.parametrize("exponent", [1, 12, 24])
@given(loop=any_loops)
@examples(20)
def test_the_outermost_counts_hold_far_out(loop: Loop, exponent: int) -> None:
    found = ask(loop)
    furthest = max([abs(edge_gain(edge)) for edge in found.edges], default=Fraction(0)) + 1
    far = furthest * 10**exponent
    assert band_counts(found)[0] == closed_loop_counts(loop, -far)
    assert band_counts(found)[-1] == closed_loop_counts(loop, far)


@given(loop=any_loops, feedback=feedbacks)
def test_evidence_lies_where_it_says(loop: Loop, feedback: str) -> None:
    """Intervals hold the edges, samples have their bands' counts."""
    found = ask(loop, feedback=feedback, evidence=True)
    assert found.evidence is not None
    for edge, evidence in zip(found.edges, found.evidence.edges, strict=True):
        low, high = map(Fraction, evidence.gain_between)
        assert low - abs(low) / 10**29 <= edge_gain(edge) <= high + abs(high) / 10**29
        assert (low == high == edge_gain(edge)) == is_rational(edge)
        assert len(evidence.omega_squared_between) == len(edge.frequencies)
    for band, ends, sample in zip(found.bands, band_ends(found), found.evidence.bands, strict=True):
        assert sample.sample_gain is not None
        gain = Fraction(sample.sample_gain)
        assert ends[0] is None or ends[0] < gain
        assert ends[1] is None or gain < ends[1]
        assert (band.rhp_poles, band.axis_poles) == closed_loop_counts(loop, gain, feedback)
