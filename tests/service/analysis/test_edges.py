"""Edges: their causes, their places in order, and what is merged at one gain."""

from fractions import Fraction
from itertools import pairwise
from math import inf

import pytest
from hypothesis import given, settings

from service.analysis.crossings import axis_course
from service.analysis.edges import INFINITY, ORIGIN, RawEdge, find_edges
from service.analysis.gains import compare
from service.analysis.roots import PositiveRoot
from service.analysis.winding import wind
from tests.exact import exact_loop, fraction
from tests.oracle import Loop
from tests.polynomials import Polynomial, add, multiply, polynomial, scaled
from tests.strategies import any_loops

P = polynomial
PAIRS = multiply(P(1, 0, 1), P(1, 0, 4))


def edges(numerator: Polynomial, denominator: Polynomial) -> tuple[RawEdge, ...]:
    loop = exact_loop(Loop(numerator, denominator))
    course = axis_course(loop)
    return find_edges(loop, course, wind(loop, course, "right"))


def told(found: tuple[RawEdge, ...]) -> list[tuple[object, ...]]:
    """Give gain, causes and places of edges whose values are rational."""
    return [(gain_of(edge), edge.causes, [place(at) for at in edge.places]) for edge in found]


def gain_of(edge: RawEdge) -> Fraction | None:
    return None if edge.gain.rational is None else fraction(edge.gain.rational)


def place(at: PositiveRoot | str) -> Fraction | str:
    if isinstance(at, str):
        return at
    assert at.rational is not None
    return fraction(at.rational)


def position(at: PositiveRoot | str) -> float:
    """Give the squared frequency as a double, the origin's below all others."""
    if isinstance(at, str):
        return {ORIGIN: -1.0, INFINITY: inf}[at]
    return float(at.ball(60))


def closing_to(closed: Polynomial, numerator: Polynomial) -> tuple[RawEdge, ...]:
    """Give the edges of the loop whose closed-loop polynomial at K = 1 is this one."""
    return edges(numerator, add(closed, scaled(numerator, -1)))


def test_each_cause_has_its_gain_and_place() -> None:
    assert told(edges(P(1, -1), P(1, 1))) == [
        (-1, ("infinity",), [INFINITY]),
        (1, ("origin",), [ORIGIN]),
    ]
    assert told(edges(P(1), P(1, 3, 3, 1))) == [(-1, ("origin",), [ORIGIN]), (8, ("crossing",), [3])]


@pytest.mark.parametrize(
    ("numerator", "denominator", "places"),
    [
        pytest.param(P(1, 1), P(1, 0, 0), [ORIGIN], id="integrators"),
        pytest.param(P(1, 0), PAIRS, [1, 4], id="two pairs"),
        pytest.param(P(1, 0, 0), P(1, 1), [INFINITY], id="improper"),
        pytest.param(P(1, 2, 3), P(1, 0), [ORIGIN, INFINITY], id="integrator and improper"),
        pytest.param(P(1, 0, 0, 2, 0, 0, 5), multiply(P(1, 0), PAIRS), [ORIGIN, 1, 4, INFINITY], id="all"),
    ],
)
def test_zero_gain_is_an_edge_for_one_cause_with_all_its_places(
    numerator: Polynomial, denominator: Polynomial, places: list[object]
) -> None:
    (at_zero,) = [edge for edge in edges(numerator, denominator) if edge.gain.sign == 0]
    assert told((at_zero,)) == [(0, ("open_loop",), places)]
    assert at_zero.swing == 0


@pytest.mark.parametrize(
    ("numerator", "denominator"),
    [(P(1), P(1, 1)), (P(1, 1), P(1, 2)), (P(1, 0), P(1, 0, -4))],
    ids=["proper", "biproper", "symmetric poles off the axis"],
)
def test_zero_gain_is_no_edge_otherwise(numerator: Polynomial, denominator: Polynomial) -> None:
    assert all(edge.gain.sign != 0 for edge in edges(numerator, denominator))


def test_a_zero_at_the_origin_leaves_no_edge_there() -> None:
    assert all("origin" not in edge.causes for edge in edges(P(1, 0), P(1, 2, 3)))


@pytest.mark.parametrize("shared", [P(1), P(1, 0, 1), P(1, 2)], ids=["plain", "hidden pair", "hidden lag"])
def test_a_constant_loop_has_one_edge_at_infinity_alone(shared: Polynomial) -> None:
    """One gain at all frequencies: the algebraic loop."""
    found = edges(scaled(shared, 2), shared)
    assert told(found) == [(Fraction(-1, 2), ("infinity",), [INFINITY])]


def test_two_frequencies_at_one_gain_are_one_edge() -> None:
    merged = closing_to(multiply(PAIRS, P(1, 1)), P(1, 2))
    assert (1, ("crossing",), [1, 4]) in told(merged)


def test_causes_at_one_gain_stand_in_the_order_of_the_contract() -> None:
    """At K = 1 a root at the origin, a pair, and one through infinity."""
    closed = multiply(P(1, 0), P(1, 0, 1))
    merged = closing_to(closed, P(1, 5, 2, 7, 3))
    assert (1, ("origin", "crossing", "infinity"), [ORIGIN, 1, INFINITY]) in told(merged)


def test_a_merged_edge_swings_by_the_sum_of_its_crossings() -> None:
    """One pair comes in while the other leaves: nothing is left."""
    merged = closing_to(multiply(PAIRS, P(1, 1)), P(1, 2))
    (exchange,) = [edge for edge in merged if gain_of(edge) == 1]
    assert exchange.swing == 0
    both_leave = closing_to(multiply(PAIRS, P(1, 1)), P(1, 0, 2))
    (jump,) = [edge for edge in both_leave if gain_of(edge) == 1]
    assert abs(jump.swing) == 4


@pytest.mark.parametrize("decade", [9, 30, 300])
def test_edges_however_near_stay_two(decade: int) -> None:
    """The touch (K - 1)^2 = 0 moved apart by its coefficient: edges at 1 - e and 1."""
    e = Fraction(1, 10**decade)
    found = told(edges(P(1, 1, 1), P(1, 2, 1, 1 + e, 0)))
    near = [gain for gain, causes, _ in found if causes == ("crossing",)]
    assert near == [1 - e, 1 + e] or near == [1, 1 + e]


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=80)
def test_edges_strictly_ascend_and_their_places_do(loop: Loop) -> None:
    found = edges(*loop)
    assert all(compare(one.gain, other.gain) == -1 for one, other in pairwise(found))
    for edge in found:
        order = [position(at) for at in edge.places]
        assert order == sorted(order)
        assert len(edge.places) >= len(edge.causes)
