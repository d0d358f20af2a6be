"""Crowded guesses moved apart, with radii that are proven whatever the guesses were."""

from fractions import Fraction

import pytest
from flint import acb, arb, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis.clusters import Guess, joined, proven_radius, separate
from service.analysis.guesses import exactly
from service.analysis.precision import working
from tests.exact import integral, rational
from tests.polynomials import multiply, polynomial

places = st.fractions(-4, 4, max_denominator=8)


def factor(re: Fraction, im: Fraction) -> tuple[Fraction, ...]:
    return polynomial(1, -2 * re, re * re + im * im)


@given(
    chosen=st.lists(st.tuples(places, places.filter(lambda y: y > 0)), min_size=1, max_size=3, unique=True),
    z=st.complex_numbers(max_magnitude=6),
)
@settings(max_examples=60)
def test_a_root_lies_within_the_proven_radius_of_any_point(
    chosen: list[tuple[Fraction, Fraction]], z: complex
) -> None:
    p = integral(multiply(*(factor(re, im) for re, im in chosen)))
    with working(120):
        at = exactly(z, 0)
        radius = proven_radius(p, p.derivative(), at)
        distances = [abs(at - acb(rational(re), rational(s * im))) for re, im in chosen for s in (1, -1)]
        assert any(not distance > radius for distance in distances)


def test_where_the_derivative_vanishes_nothing_is_proven() -> None:
    p = fmpz_poly([1, 0, 1])
    assert proven_radius(p, p.derivative(), acb(0)) == arb.pos_inf()


@pytest.mark.parametrize(
    ("points", "radii", "groups"),
    [
        pytest.param([0, 10], [1, 1], [[0], [1]], id="apart"),
        pytest.param([0, 2], [1, 1], [[0, 1]], id="touching is not disjoint"),
        pytest.param([0, 3, 1.5], [1, 1, 1], [[0, 1, 2]], id="joined by a third"),
        pytest.param([0, 1e9], [1, float("inf")], [[0, 1]], id="unbounded"),
        pytest.param([1, 1 + 2.0**-50], [2.0**-60, 2.0**-60], [[0], [1]], id="a few doubles apart"),
        pytest.param([2j, -2j], [1, 1], [[0], [1]], id="mirror images"),
    ],
)
def test_discs_that_may_overlap_are_joined(
    points: list[complex], radii: list[float], groups: list[list[int]]
) -> None:
    assert joined([acb(z) for z in points], [arb(r) for r in radii]) == groups


def test_discs_no_double_can_tell_apart_are_told_apart() -> None:
    with working(300):
        near = acb(1) + acb(arb(2) ** -200)
        assert joined([acb(1), near], [arb(2) ** -210] * 2) == [[0], [1]]
        assert joined([acb(1), near], [arb(2) ** -200] * 2) == [[0, 1]]


@pytest.mark.parametrize("gap", [60, 200, 700], ids=lambda bits: f"2^-{bits}")
def test_crowded_guesses_end_one_at_each_root(gap: int) -> None:
    """Roots 1, 1 + e, 1 + 3e and -3; the guesses are those of an eigenvalue computation gone coarse."""
    e = Fraction(1, 2**gap)
    roots = [Fraction(1), 1 + e, 1 + 3 * e, Fraction(-3)]
    p = integral(multiply(*(polynomial(1, -root) for root in roots)))
    coarse = [
        Guess(acb(z), arb.pos_inf()) for z in (1 + 0.0001j, 1 - 0.0001j, 1.0002 + 0.00003j, -3.01 + 0.01j)
    ]
    precision = 4 * gap + 200
    moved, apart = separate(p, coarse, 64, precision)
    assert apart
    with working(precision):
        nearest = [min(range(4), key=lambda i: float(abs(g.at - rational(roots[i])) * 2**gap)) for g in moved]
        assert sorted(nearest) == [0, 1, 2, 3]
        for guess, i in zip(moved, nearest, strict=True):
            assert abs(guess.at - rational(roots[i])) <= guess.radius


def test_guesses_that_cannot_part_are_said_to_crowd() -> None:
    """At a precision that does not tell the roots apart."""
    p = integral(multiply(polynomial(1, -1), polynomial(1, -1 - Fraction(1, 2**400))))
    crowded = [Guess(acb(1, 0.01), arb.pos_inf()), Guess(acb(1, -0.01), arb.pos_inf())]
    _, apart = separate(p, crowded, 64, 100)
    assert not apart
