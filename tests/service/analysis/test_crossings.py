"""The course of the curve: what it meets on the real axis, in order, and on which side it goes on."""

from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given, settings

from service.analysis.crossings import AxisCourse, Kind, axis_course, axis_roots
from service.analysis.roots import PositiveRoot
from tests import oracle
from tests.contour import curve
from tests.exact import exact_loop, fraction, integral
from tests.oracle import Loop, is_lossless
from tests.polynomials import Polynomial, degree, multiply, polynomial, power
from tests.strategies import any_loops

P = polynomial
PAIR, OTHER_PAIR = P(1, 0, 1), P(1, 0, 4)


def course(numerator: Polynomial, denominator: Polynomial) -> AxisCourse:
    return axis_course(exact_loop(Loop(numerator, denominator)))


def told(found: AxisCourse) -> list[tuple[Kind, Fraction, bool, int]]:
    """Give the passages of a course with rational squared frequencies."""
    return [
        (passage.kind, place(passage.at), passage.turns, passage.order)
        for passage in found.passages
        if passage.at.rational is not None
    ]


def place(root: PositiveRoot) -> Fraction:
    """Give a rational squared frequency."""
    assert root.rational is not None
    return fraction(root.rational)


def test_a_simple_crossing_turns_to_the_other_side() -> None:
    """1/(s + 1)^3 starts below the axis and crosses at w^2 = 3 where K = 8."""
    found = course(P(1), P(1, 3, 3, 1))
    assert found.side_at_start == -1
    assert told(found) == [(Kind.CROSSING, 3, True, 0)]
    assert found.passages[0].gain is not None
    assert found.passages[0].gain.rational == 8


def test_a_touch_stays_on_its_side() -> None:
    found = course(P(1, 1, 1), P(1, 2, 1, 1, 0))
    assert told(found) == [(Kind.CROSSING, 1, False, 0)]


def test_a_contact_of_third_order_crosses() -> None:
    found = course(P(2, 1, 4, 1), P(1, 0, 1, -2, 0))
    assert told(found) == [(Kind.CROSSING, 1, True, 0)]


@pytest.mark.parametrize("order", range(1, 7))
def test_an_axis_pole_is_a_passage_with_its_order(order: int) -> None:
    found = course(P(1, 2, 3), power(PAIR, order))
    poles = [passage for passage in found.passages if passage.kind is Kind.POLE]
    assert [(place(p.at), p.order, p.gain) for p in poles] == [(1, order, None)]


@pytest.mark.parametrize("order", range(1, 5))
def test_an_axis_zero_is_a_passage_without_gain(order: int) -> None:
    found = course(power(PAIR, order), power(P(1, 1), 2 * order + 1))
    zeros = [passage for passage in found.passages if passage.kind is Kind.ZERO]
    assert [(place(z.at), z.order, z.gain) for z in zeros] == [(1, 0, None)]


def test_poles_zeros_and_crossings_come_in_the_order_of_frequency() -> None:
    found = course(multiply(PAIR, P(1, 1)), multiply(OTHER_PAIR, P(1, 2, 5), P(1, 3)))
    assert [kind for kind, *_ in told(found)][:2] == [Kind.ZERO, Kind.POLE]
    balls = [passage.at.ball(64) for passage in found.passages]
    assert all(one < other for one, other in pairwise(balls))


def test_poles_of_different_orders_are_told_apart() -> None:
    found = course(P(1, 1), multiply(power(PAIR, 2), OTHER_PAIR, P(1, 3)))
    assert [(x, order) for kind, x, _, order in told(found) if kind is Kind.POLE] == [(1, 2), (4, 1)]


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=60)
def test_at_every_crossing_the_curve_is_minus_one_over_its_gain(loop: Loop) -> None:
    """D + K N at jw, in floating point, is small beside its terms."""
    small = oracle.reduced(loop)
    for passage in axis_course(exact_loop(loop)).passages:
        if passage.gain is not None:
            w = float(passage.at.ball(60)) ** 0.5
            gain = float(passage.gain.ball(60))
            closed = sum(
                complex(0, w) ** (degree(p) - i) * float(c) * factor
                for p, factor in ((small.denominator, 1.0), (small.numerator, gain))
                for i, c in enumerate(p)
            )
            size = sum(abs(float(c)) * w ** (degree(small.denominator) - i)
                       for i, c in enumerate(small.denominator))  # fmt: skip
            assert abs(closed) <= 1e-6 * size


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=60)
def test_lossless_loops_alone_have_no_side(loop: Loop) -> None:
    assert (axis_course(exact_loop(loop)).side_at_start == 0) == is_lossless(loop)


@pytest.mark.parametrize(
    ("numerator", "denominator"),
    [(P(1), P(1, 1)), (P(-1), P(1, 1)), (P(1, 1), P(1, 0)), (P(1, 2), P(1, 3)), (P(1, 0), P(1, 1))],
    ids=["lag", "reversed lag", "integrator", "lead", "differentiator"],
)
def test_the_side_at_the_start_is_that_of_the_curve_there(
    numerator: Polynomial, denominator: Polynomial
) -> None:
    drawn = curve(Loop(numerator, denominator), 1e-3j).imag
    assert course(numerator, denominator).side_at_start == (1 if drawn > 0 else -1)


def test_a_lossless_course_has_the_frequencies_where_axis_roots_meet() -> None:
    """1/(s^2 (s^2 + 4)): two pairs meet at w^2 = 2 where K = 4; the pole at w^2 = 4 is passed."""
    found = course(P(1), multiply(P(1, 0, 0), OTHER_PAIR))
    assert told(found) == [(Kind.CROSSING, 2, False, 0), (Kind.POLE, 4, False, 1)]
    assert found.passages[0].gain is not None
    assert found.passages[0].gain.rational == 4


def test_a_lossless_course_has_the_frequency_of_a_hidden_pair() -> None:
    """1/(s^2 + 4) with s^2 + 1 hidden: at K = -3 the moving pair meets it."""
    found = course(PAIR, multiply(PAIR, OTHER_PAIR))
    assert (Kind.CROSSING, Fraction(1), False, 0) in told(found)
    (gain,) = [passage.gain for passage in found.passages if passage.gain is not None]
    assert gain.rational == -3


def test_axis_roots_come_with_multiplicity_in_ascending_order() -> None:
    """The origin is no pair; nor is anything off the axis."""
    p = multiply(power(OTHER_PAIR, 3), PAIR, P(1, 0, 0), P(1, 0, -9), P(1, 2, 2), P(1, -2, 2))
    assert [(place(root), often) for root, often in axis_roots(integral(p))] == [
        (1, 1),
        (4, 3),
    ]
