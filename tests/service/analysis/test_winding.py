"""Encirclements from the curve alone: its arcs at infinity for every order, either side, every start."""

from collections.abc import Iterator
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import loop as loop_module
from service.analysis.bands import encirclements
from service.analysis.crossings import Kind, axis_course
from service.analysis.edges import find_edges
from service.analysis.question import Detour
from service.analysis.winding import Arcs, Winding, wind
from tests.exact import exact_loop
from tests.oracle import Loop, closed_loop_counts, counts, reduced
from tests.polynomials import Polynomial, add, degree, multiply, polynomial, power
from tests.strategies import any_loops, detours

P = polynomial
TINY = Fraction(1, 10**60)

NUMERATORS = {
    "constant": P(1),
    "lead": P(1, 1),
    "zero on the right": P(1, -1),
    "reversed": P(-2, -3),
    "two zeros": P(1, 1, 3),
    "zero at the origin's far side": P(-1, 5, 7),
    "even": P(1, 0, 3),
}
DENOMINATORS = {"": P(1), "lag": P(1, 2), "unstable": P(1, -3)}
PLACES = {"at the origin": P(1, 0), "at a rational frequency": P(1, 0, 4), "elsewhere": P(1, 0, 2)}


def winding(loop: Loop, detour: Detour) -> Winding:
    exact = exact_loop(loop)
    return wind(exact, axis_course(exact), detour)


def passes_at(loop: Loop, gain: Fraction, detour: Detour) -> int | None:
    """Give N = Z - P at a gain by the oracle; None where axis roots put -1/K on the curve."""
    closed = closed_loop_counts(loop, gain)
    before = counts(loop.denominator)
    enclosed = before.rhp + (before.axis if detour == "left" else 0)
    return None if closed.axis else closed.rhp - enclosed


def hold_arcs(loop: Loop, detour: Detour) -> None:
    """At the smallest gains only arcs at infinity are met: over the negative axis for K > 0."""
    arcs = winding(loop, detour).arcs
    for found, gain in ((arcs.over_negative, TINY), (arcs.over_positive, -TINY)):
        expected = passes_at(loop, gain, detour)
        assert expected is None or found == expected, gain


def pole_loops(place: Polynomial, order: int) -> Iterator[Loop]:
    for numerator in NUMERATORS.values():
        for rest in DENOMINATORS.values():
            denominator = multiply(power(place, order), rest)
            if len(numerator) <= len(denominator):
                yield Loop(numerator, denominator)


both_sides = pytest.mark.parametrize("detour", ["right", "left"])


@both_sides
@pytest.mark.parametrize("order", range(1, 7))
@pytest.mark.parametrize("place", PLACES.values(), ids=PLACES)
def test_arcs_of_every_order_pass_as_often_as_the_counts_say(
    place: Polynomial, order: int, detour: Detour
) -> None:
    """Even orders, and pure powers, begin on the real axis: the next term decides."""
    for loop in pole_loops(place, order):
        hold_arcs(loop, detour)


@both_sides
@pytest.mark.parametrize("excess", range(1, 7))
def test_improper_loops_close_with_an_arc_of_every_order(excess: int, detour: Detour) -> None:
    for denominator in (P(1), P(1, 2), P(1, -1), P(1, 0), P(1, 2, 3)):
        for lead in (2, -2):
            for rest in (P(3), P(1, 3), P(-1, 3)):
                numerator = add(P(lead, *[0] * (degree(denominator) + excess)), rest)
                hold_arcs(Loop(numerator, denominator), detour)


@pytest.mark.parametrize(
    ("order", "passes"),
    [(1, Arcs(0, 1)), (3, Arcs(2, 1)), (5, Arcs(2, 3)), (7, Arcs(4, 3))],
)
def test_odd_integrators_turn_by_half_turns_from_the_imaginary_axis(order: int, passes: Arcs) -> None:
    """1/s^m: clockwise from +j (m = 1, 5) or -j (m = 3, 7) by m half turns."""
    assert winding(Loop(P(1), P(1, *[0] * order)), "right").arcs == passes


def test_a_detour_on_the_left_turns_the_other_way() -> None:
    assert winding(Loop(P(1), P(1, 0)), "left").arcs == Arcs(-1, 0)


@both_sides
@pytest.mark.parametrize("order", [2, 4, 6])
@pytest.mark.parametrize("numerator", [P(1, 1), P(1, -1), P(-1, -1), P(-1, 1)], ids=str)
def test_arcs_that_begin_on_the_real_axis_take_the_side_of_the_next_term(
    numerator: Polynomial, order: int, detour: Detour
) -> None:
    """(s +- 1)/s^m has a real leading term: one pass more or less than m - 1 beyond the certain ones."""
    loop = Loop(numerator, P(1, *[0] * order))
    hold_arcs(loop, detour)
    arcs = winding(loop, detour).arcs
    assert abs(arcs.over_negative + arcs.over_positive) in {order - 1, order + 1}


@both_sides
@pytest.mark.parametrize("order", range(1, 7))
def test_lossless_loops_wind_by_their_detours_only(order: int, detour: Detour) -> None:
    """Even loops with poles at the origin, at w > 0, and both; -1/K beside the curve alone counts."""
    pair = P(1, 0, 1)
    for denominator in (
        power(P(1, 0), 2 * order),
        power(pair, order),
        multiply(power(pair, order), P(1, 0, 0)),
        multiply(power(pair, order), P(1, 0, 4)),
        multiply(power(pair, order), P(1, 0, -4)),
    ):
        for numerator in (P(1), P(-1), P(1, 0, 3), P(1, 0, -3)):
            loop = Loop(numerator, denominator)
            if len(numerator) <= len(denominator):
                hold_arcs(loop, detour)
                assert winding(loop, detour).swings == (0,) * len(axis_course(exact_loop(loop)).passages)


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)), detour=detours)
@settings(max_examples=150)
def test_the_curve_alone_gives_the_encirclements_of_every_band(loop: Loop, detour: Detour) -> None:
    """Compared at the samples of the engine's bands with the oracle's Z - P."""
    small = reduced(loop)
    exact = exact_loop(small)
    found = wind(exact, axis_course(exact), detour)
    edges = find_edges(exact, axis_course(exact), found)
    wound = encirclements(edges, found)
    assert len(wound) == len(edges) + 1
    ends = [None, *(Fraction(str(edge.gain.ball(200).mid().str(60, radius=False))) for edge in edges), None]
    for low, high, n in zip(ends, ends[1:], wound, strict=False):
        expected = passes_at(small, inside(low, high), detour)
        assert expected is None or n == expected


def inside(low: Fraction | None, high: Fraction | None) -> Fraction:
    if low is None:
        return Fraction(0) if high is None else high - abs(high) - 1
    return low + abs(low) + 1 if high is None else (low + high) / 2


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=60)
def test_swings_are_those_of_a_passage_that_turns_at_a_finite_point(loop: Loop) -> None:
    """Twice (at the frequency and its mirror image) to the other side, or not at all."""
    exact = exact_loop(loop)
    course = axis_course(exact)
    for passage, swing in zip(course.passages, wind(exact, course, "right").swings, strict=True):
        crosses = passage.kind is Kind.CROSSING and passage.turns
        assert abs(swing) == (2 if crosses else 0)


def test_nothing_here_looks_at_the_closed_loop(monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object) -> None:
        raise AssertionError

    monkeypatch.setattr(loop_module.ExactLoop, "closed_at", refuse)
    monkeypatch.setattr(loop_module.ExactLoop, "reduced_at", refuse)
    assert winding(Loop(P(1), P(1, 3, 2, 0)), "right").arcs == Arcs(0, 1)


@given(a=st.tuples(*[st.integers(-9, 9)] * 4))
def test_arcs_add_up_by_direction(a: tuple[int, int, int, int]) -> None:
    assert Arcs(a[0], a[1]) + Arcs(a[2], a[3]) == Arcs(a[0] + a[2], a[1] + a[3])
