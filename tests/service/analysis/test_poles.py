"""Closed-loop poles: nearest doubles, multiplicities, and exact zeros where a part vanishes."""

from fractions import Fraction
from itertools import pairwise
from math import sqrt

import pytest
from flint import fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis.answer import ClosedLoopPole
from service.analysis.counts import count_roots
from service.analysis.poles import closed_loop_poles
from tests.exact import integral
from tests.polynomials import Polynomial, degree, multiply, polynomial, power
from tests.strategies import axis_pairs

places = st.fractions(-4, 4, max_denominator=7)
heights = places.filter(lambda y: y > 0)
TINY = Fraction(1, 10**30)


def pair(re: Fraction | int, im: Fraction | int) -> Polynomial:
    return polynomial(1, -2 * re, re * re + im * im)


def only(p: Polynomial) -> ClosedLoopPole:
    """Give the one pole of p that is not below the real axis."""
    (pole,) = [pole for pole in closed_loop_poles(integral(p)) if pole.im >= 0]
    return pole


@given(
    real=st.dictionaries(places, st.integers(1, 3), max_size=2),
    pairs=st.dictionaries(st.tuples(places, heights), st.integers(1, 2), max_size=2),
)
@settings(max_examples=50)
def test_chosen_poles_are_given_as_their_nearest_doubles(
    real: dict[Fraction, int], pairs: dict[tuple[Fraction, Fraction], int]
) -> None:
    p = multiply(
        *(power(polynomial(1, -x), often) for x, often in real.items()),
        *(power(pair(*at), often) for at, often in pairs.items()),
    )
    expected = [(x, Fraction(0), often) for x, often in real.items()]
    expected += [(x, s * y, often) for (x, y), often in pairs.items() for s in (1, -1)]
    expected.sort(key=lambda root: (-root[0], -root[1]))
    found = closed_loop_poles(integral(p))
    assert [(pole.re, pole.im, pole.multiplicity) for pole in found] == [
        (float(re), float(im), often) for re, im, often in expected
    ]


@given(re=places.filter(bool), im=heights)
@settings(max_examples=40)
def test_damping_and_time_constant_are_those_of_the_exact_pole(re: Fraction, im: Fraction) -> None:
    pole = only(pair(re, im))
    assert pole.time_constant_s == float(-1 / re)
    assert pole.damping_ratio == pytest.approx(float(-re) / sqrt(re * re + im * im), rel=1e-15)


@pytest.mark.parametrize(
    ("p", "expected"),
    [
        pytest.param(polynomial(1, 4), ClosedLoopPole(-4.0, 0.0, 1, 1.0, 0.25), id="real, decaying"),
        pytest.param(polynomial(1, -4), ClosedLoopPole(4.0, 0.0, 1, -1.0, -0.25), id="real, growing"),
        pytest.param(polynomial(1, 0, 9), ClosedLoopPole(0.0, 3.0, 1, 0.0, None), id="on the axis"),
        pytest.param(polynomial(1, 0, 0), ClosedLoopPole(0.0, 0.0, 2, None, None), id="at the origin"),
        pytest.param(pair(-3, 4), ClosedLoopPole(-3.0, 4.0, 1, 0.6, 1 / 3), id="damped"),
        pytest.param(pair(3, 4), ClosedLoopPole(3.0, 4.0, 1, -0.6, -1 / 3), id="growing"),
    ],
)
def test_what_is_said_of_a_pole(p: Polynomial, expected: ClosedLoopPole) -> None:
    assert only(p) == expected


@given(
    on_axis=st.dictionaries(axis_pairs, st.integers(1, 2), min_size=1, max_size=2),
    others=st.lists(st.tuples(places.filter(bool), heights), max_size=2, unique=True),
)
@settings(max_examples=40)
def test_poles_on_the_axis_have_exactly_zero_real_part_and_no_other_has(
    on_axis: dict[Polynomial, int], others: list[tuple[Fraction, Fraction]]
) -> None:
    axis = multiply(*(power(p, often) for p, often in on_axis.items()))
    poles = closed_loop_poles(integral(multiply(axis, *(pair(*at) for at in others))))
    assert sum(pole.multiplicity for pole in poles if pole.re == 0) == degree(axis)


@pytest.mark.parametrize("side", [1, -1], ids=["right", "left"])
def test_a_pole_1e_30_off_the_axis_is_off_it(side: int) -> None:
    pole = only(polynomial(1, -2 * side * TINY, 1))
    assert (pole.re, pole.im, pole.damping_ratio) == (side * 1e-30, 1.0, -side * 1e-30)


@pytest.mark.parametrize(
    ("p", "expected"),
    [
        pytest.param(
            multiply(pair(1, 1), pair(-1, 1)), [(1, 1), (1, -1), (-1, 1), (-1, -1)], id="quadruplet"
        ),
        pytest.param(polynomial(1, 0, -4), [(2, 0), (-2, 0)], id="real pair"),
        pytest.param(
            multiply(polynomial(1, 0, 1), polynomial(1, 0, -1)),
            [(1, 0), (0, 1), (0, -1), (-1, 0)],
            id="cross",
        ),
    ],
)
def test_sets_symmetric_to_the_origin_are_taken_apart(p: Polynomial, expected: list[tuple[int, int]]) -> None:
    assert [(pole.re, pole.im) for pole in closed_loop_poles(integral(p))] == expected


@pytest.mark.parametrize(("ulps", "even"), [(1, 1.0), (3, 1 + 2.0**-51)], ids=["down", "up"])
def test_a_pole_midway_between_two_doubles_goes_to_the_even_one(ulps: int, even: float) -> None:
    """No enclosure settles it: the other roots keep Newton's method from meeting it exactly."""
    tie = 1 + Fraction(ulps, 2**53)
    poles = closed_loop_poles(
        integral(multiply(polynomial(1, tie), polynomial(1, Fraction(1, 3)), polynomial(1, Fraction(7, 5))))
    )
    assert [pole.re for pole in poles] == [-1 / 3, -even, -1.4]


@given(coefficients=st.lists(st.integers(-9, 9), min_size=2, max_size=8).filter(any))
@settings(max_examples=60)
def test_poles_agree_with_the_exact_counts(coefficients: list[int]) -> None:
    p = fmpz_poly(coefficients)
    poles = closed_loop_poles(p)
    counts = count_roots(p)
    assert sum(pole.multiplicity for pole in poles) == p.degree()
    assert sum(pole.multiplicity for pole in poles if pole.re > 0) == counts.rhp
    assert sum(pole.multiplicity for pole in poles if pole.re == 0) == counts.axis
    assert any(pole.multiplicity > 1 and pole.re == 0 for pole in poles) == counts.repeated_axis
    assert all((-one.re, -one.im) <= (-other.re, -other.im) for one, other in pairwise(poles))


def test_a_constant_has_no_poles() -> None:
    assert closed_loop_poles(fmpz_poly([7])) == ()
