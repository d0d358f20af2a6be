"""Bands: sample gains, intervals round edges, and the two counts held against each other."""

from collections.abc import Callable
from fractions import Fraction
from itertools import count, pairwise
from math import isqrt

import pytest
from flint import arb, fmpq
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import bands as module
from service.analysis.bands import (
    Cell,
    OpenLoopCounts,
    count_band,
    dyadic_cell,
    encirclements,
    gain_cells,
    separate_cells,
    simplest_between,
    span_of,
    verdict_of,
)
from service.analysis.counts import Counts
from service.analysis.crossings import axis_course
from service.analysis.edges import RawEdge, find_edges
from service.analysis.errors import CountsDisagree
from service.analysis.gains import Gain
from service.analysis.precision import working
from service.analysis.winding import Arcs, Winding, wind
from tests.exact import exact_loop, fraction, rational
from tests.oracle import Loop
from tests.polynomials import multiply, polynomial, power
from tests.strategies import any_loops, folded

P = polynomial
THREE_LAGS = exact_loop(Loop(P(1), P(1, 3, 3, 1)))
fractions = st.fractions(-6, 6, max_denominator=40)


def edges_of(loop: Loop) -> tuple[RawEdge, ...]:
    exact = exact_loop(loop)
    course = axis_course(exact)
    return find_edges(exact, course, wind(exact, course, "right"))


@pytest.mark.parametrize(
    ("counts", "verdict"),
    [
        (Counts(0, 0), "stable"),
        (Counts(0, 2), "marginal"),
        (Counts(0, 4, repeated_axis=True), "unstable"),
        (Counts(1, 0), "unstable"),
        (Counts(1, 2), "unstable"),
    ],
)
def test_a_verdict_names_what_the_counts_mean(counts: Counts, verdict: str) -> None:
    assert verdict_of(counts) == verdict


def simplest_by_search(low: Fraction | None, high: Fraction | None) -> Fraction:
    """Try every denominator in turn, and of each the numerators from zero on."""
    reach = 2 + max(abs(end) for end in (low, high, Fraction(0)) if end is not None)
    for denominator in count(1):
        numerators = sorted(range(-int(reach * denominator), int(reach * denominator) + 1), key=abs)
        for numerator in numerators:
            value = Fraction(numerator, denominator)
            if (low is None or low < value) and (high is None or value < high):
                return value
    raise AssertionError


@given(ends=st.tuples(fractions, fractions).filter(lambda pair: pair[0] < pair[1]))
@settings(max_examples=80)
def test_the_simplest_fraction_has_the_smallest_denominator_then_size(
    ends: tuple[Fraction, Fraction],
) -> None:
    assert fraction(simplest_between(*map(rational, ends))) == simplest_by_search(*ends)


@given(end=fractions)
@settings(max_examples=40)
def test_the_simplest_beyond_one_end_is_a_whole_number(end: Fraction) -> None:
    assert fraction(simplest_between(rational(end), None)) == simplest_by_search(end, None)
    assert fraction(simplest_between(None, rational(end))) == simplest_by_search(None, end)


def test_zero_is_the_simplest_of_all() -> None:
    assert simplest_between(None, None) == 0
    assert simplest_between(fmpq(-1, 10**30), fmpq(5)) == 0


@pytest.mark.parametrize("terms", [10, 500, 3000])
def test_the_simplest_fraction_is_found_however_long_its_continued_fraction(terms: int) -> None:
    """Between neighbouring ratios of Fibonacci numbers only their mediant is that simple."""
    a, b = 0, 1
    for _ in range(terms):
        a, b = b, a + b
    c = a + b
    low, high = sorted([fmpq(a, b), fmpq(b, c)])
    assert simplest_between(low, high) == fmpq(a + b, b + c)


def root_of(value: Fraction) -> Callable[[int], arb]:
    def enclose(bits: int) -> arb:
        with working(bits + 8):
            return arb(rational(abs(value))).sqrt() * (1 if value > 0 else -1)

    return enclose


@given(
    value=st.integers(2, 10**6).filter(lambda n: int(n**0.5 + 0.5) ** 2 != n),
    scale=st.integers(-300, 300),
    sign=st.sampled_from([1, -1]),
    bits=st.sampled_from([1, 53, 64, 192, 700]),
)
@settings(max_examples=80)
def test_a_dyadic_cell_is_the_one_of_its_grid_that_holds_the_number(
    value: int, scale: int, sign: int, bits: int
) -> None:
    """[m/2^k, (m+1)/2^k], k = bits - floor(log2 |v|); here v^2 is known exactly."""
    square = value * Fraction(4) ** scale
    low, high = map(fraction, dyadic_cell(root_of(sign * square), bits))
    near, far = (low, high) if sign > 0 else (-high, -low)
    assert near > 0
    assert near**2 < square < far**2
    unit = high - low
    assert (low / unit).denominator == 1
    assert 2**bits <= near / unit < far / unit <= 2 ** (bits + 1)


def test_cells_that_would_touch_are_narrowed_and_others_are_not() -> None:
    asked: dict[str, list[int]] = {"a": [], "b": [], "c": []}

    def maker(name: str, at: Fraction) -> Callable[[int], Cell]:
        def make(bits: int) -> Cell:
            asked[name].append(bits)
            return rational(at - Fraction(1, 2**bits)), rational(at + Fraction(1, 2**bits))

        return make

    makers = [maker("a", Fraction(0)), maker("b", Fraction(1, 2**40)), maker("c", Fraction(9))]
    cells = separate_cells(makers, 10)
    assert all(one[1] < other[0] for one, other in pairwise(cells))
    assert asked == {"a": [10, 20, 40, 80], "b": [10, 20, 40, 80], "c": [10]}


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=60)
def test_gain_cells_hold_their_gains_and_are_disjoint(loop: Loop) -> None:
    edges = edges_of(loop)
    cells = gain_cells(edges)
    assert all(one[1] < other[0] for one, other in pairwise(cells))
    for edge, (low, high) in zip(edges, cells, strict=True):
        exact = edge.gain.rational
        assert (low == high == exact) if exact is not None else low < high
        with working(400):
            assert not arb(low) > edge.gain.ball(300)
            assert not arb(high) < edge.gain.ball(300)


@pytest.mark.parametrize("decade", [5, 30, 100])
def test_no_cell_reaches_a_wall(decade: int) -> None:
    """Walls at 3 + sqrt(5), cut off after so many digits, and one unit further."""
    edges = edges_of(Loop(P(1, 1, 8), P(1, 1, 1, -3)))
    low = 3 + Fraction(isqrt(5 * 100**decade), 10**decade)
    walls = [(2, rational(low)), (3, rational(low + Fraction(1, 10**decade)))]
    cells = gain_cells(edges, walls)
    assert len(cells) == len(edges)
    assert walls[0][1] < cells[2][0] < cells[2][1] < walls[1][1]
    assert cells[:2] == gain_cells(edges)[:2]


def test_a_cell_of_several_frequencies_holds_one_root_of_the_minimal_polynomial() -> None:
    """With s + 1/s for s in 1/(s + 1)^5 every crossing happens at two frequencies, at irrational gains."""
    edges = edges_of(Loop(folded(P(1), Fraction(1), 5), folded(power(P(1, 1), 5), Fraction(1), 5)))
    shared = [pair for pair in zip(edges, gain_cells(edges), strict=True) if len(pair[0].places) > 1]
    irrational = [(edge, cell) for edge, cell in shared if edge.gain.rational is None]
    assert len(irrational) == 2
    assert all(edge.gain.alone_in(cell) for edge, cell in irrational)


def test_a_span_is_clipped_to_the_window() -> None:
    cells = gain_cells(edges_of(Loop(P(1), P(1, 3, 3, 1))))
    whole = span_of(cells, 1, None)
    assert (whole.lower, whole.upper, whole.sample, whole.empty) == (-1, 8, 0, False)
    cut = span_of(cells, 1, (fmpq(2), fmpq(100)))
    assert (cut.lower, cut.upper, cut.sample, cut.empty) == (2, 8, 3, False)
    outer = span_of(cells, 2, (fmpq(-5), fmpq(17, 2)))
    assert (outer.lower, outer.upper, outer.sample, outer.empty) == (8, fmpq(17, 2), fmpq(25, 3), False)


def test_a_window_that_ends_on_an_edge_leaves_an_empty_span_with_a_sample_in_its_band() -> None:
    cells = gain_cells(edges_of(Loop(P(1), P(1, 3, 3, 1))))
    beyond = span_of(cells, 2, (fmpq(0), fmpq(8)))
    assert beyond.empty
    assert (beyond.lower, beyond.upper) == (8, 8)
    assert beyond.sample == 9


@pytest.mark.parametrize(
    ("detour", "enclosed"), [("right", 1), ("left", 4)], ids=["on the right", "on the left"]
)
def test_open_loop_poles_are_counted_apart(detour: str, enclosed: int) -> None:
    """1/(s (s^2 + 1)(s + 1)) with s - 2 hidden: the hidden pole is enclosed, axis poles on the left only."""
    hidden = P(1, -2)
    loop = exact_loop(Loop(hidden, multiply(hidden, P(1, 0), P(1, 0, 1), P(1, 1))))
    counted = OpenLoopCounts.of(loop, "left" if detour == "left" else "right")
    assert counted == OpenLoopCounts(Counts(0, 3), Counts(1, 0), enclosed)


def test_without_a_numerator_all_poles_are_fixed() -> None:
    loop = exact_loop(Loop((), multiply(P(1, 0, 1), P(1, -1))))
    assert OpenLoopCounts.of(loop, "left") == OpenLoopCounts(Counts(0, 0), Counts(1, 2), 1)


def counted(loop: Loop, sample: int, wound: int, *, lossless: bool = False) -> tuple[Counts, int | None]:
    exact = exact_loop(loop)
    band = count_band(exact, fmpq(sample), wound, OpenLoopCounts.of(exact, "right"), lossless=lossless)
    return band.counts, band.encirclements


def test_a_band_whose_counts_agree_is_counted() -> None:
    assert counted(Loop(P(1), P(1, 3, 3, 1)), 9, 2) == (Counts(2, 0), 2)


@pytest.mark.parametrize("wound", [1, 3, 0, -2])
def test_a_band_whose_encirclements_are_off_is_refused(wound: int) -> None:
    with pytest.raises(
        CountsDisagree,
        match=rf"At K = 9 .* 2 roots right of the axis; 0 enclosed .* and {wound} clockwise encirclements",
    ):
        counted(Loop(P(1), P(1, 3, 3, 1)), 9, wound)


@pytest.mark.parametrize("falsified", [Counts(0, 0), Counts(3, 0)], ids=str)
def test_a_band_whose_roots_are_counted_wrong_is_refused(
    falsified: Counts, monkeypatch: pytest.MonkeyPatch
) -> None:
    poles = OpenLoopCounts.of(THREE_LAGS, "right")
    monkeypatch.setattr(module, "count_roots", lambda _p: falsified)
    with pytest.raises(CountsDisagree, match=f"{falsified.rhp} roots right of the axis; 0 enclosed"):
        count_band(THREE_LAGS, fmpq(9), 2, poles, lossless=False)


def test_axis_roots_in_a_band_of_a_lossy_loop_are_refused() -> None:
    """Even where Z = P + N holds: at K = 8 two roots are on the axis, which is no band."""
    with pytest.raises(CountsDisagree, match="has 2 roots on the axis, where only the 0 of the hidden modes"):
        counted(Loop(P(1), P(1, 3, 3, 1)), 8, 0)


def test_axis_roots_of_a_lossless_band_leave_no_encirclements() -> None:
    assert counted(Loop(P(1), P(1, 0, 1)), 1, 0, lossless=True) == (Counts(0, 2), None)


def test_fewer_axis_roots_than_hidden_modes_have_are_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    pair = P(1, 0, 1)
    loop = exact_loop(Loop(pair, multiply(pair, P(1, 0, -9))))
    poles = OpenLoopCounts.of(loop, "right")
    monkeypatch.setattr(module, "count_roots", lambda _p: Counts(1, 0))
    with pytest.raises(CountsDisagree, match="has 0 roots on the axis, where only the 2"):
        count_band(loop, fmpq(1), 0, poles, lossless=True)


def edge_at(gain: int, swing: int) -> RawEdge:
    return RawEdge(Gain(fmpq(gain)), ("crossing",), (), swing)


@pytest.mark.parametrize(
    ("swings", "arcs", "expected"),
    [
        pytest.param({}, Arcs(), (0,), id="no edge"),
        pytest.param({0: 0}, Arcs(3, 2), (2, 3), id="zero alone"),
        pytest.param({-2: 10, -1: 1, 1: 100, 2: 1000}, Arcs(), (-11, -1, 0, 100, 1100), id="beside zero"),
        pytest.param({-1: 10, 0: 0, 1: 100}, Arcs(5, 7), (-3, 7, 5, 105), id="through zero"),
    ],
)
def test_encirclements_add_up_away_from_zero(
    swings: dict[int, int], arcs: Arcs, expected: tuple[int, ...]
) -> None:
    edges = tuple(edge_at(gain, swing) for gain, swing in swings.items())
    assert encirclements(edges, Winding(arcs, (), 0, 0)) == expected


def test_a_finite_curve_cannot_pass_infinity() -> None:
    with pytest.raises(CountsDisagree, match="reaches infinity where its loop has no pole on the axis"):
        encirclements((edge_at(1, 2),), Winding(Arcs(1, 0), (), 0, 0))
