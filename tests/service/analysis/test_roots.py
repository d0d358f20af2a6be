"""Positive roots: all of them isolated, each known exactly or as accurately as asked."""

from fractions import Fraction

import pytest
from flint import fmpq, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import roots as module
from service.analysis.precision import accurate_bits
from service.analysis.roots import (
    PositiveRoot,
    compare_roots,
    count_positive,
    floor_log2,
    isolate_positive,
    power_of_two,
    short_between,
)
from tests.clustered import WIDTH, mignotte
from tests.exact import bounds, fraction, holds, integral, rational
from tests.polynomials import Polynomial, evaluate, multiply, polynomial

sizes = st.builds(
    lambda value, decade: value * Fraction(10) ** decade,
    st.fractions(Fraction(1, 9), 9, max_denominator=30),
    st.integers(-12, 12),
)
"""Positive fractions over 24 decades."""

without_positive_root = st.lists(
    st.one_of(
        st.builds(lambda a: polynomial(1, a), sizes),
        st.builds(
            lambda a, b: polynomial(1, 2 * a, a * a + b), st.fractions(-9, 9, max_denominator=9), sizes
        ),
    ),
    max_size=2,
    unique=True,
).map(lambda factors: multiply(*factors))


def product_of(chosen: set[Fraction]) -> Polynomial:
    return multiply(*(polynomial(1, -root) for root in chosen))


@given(chosen=st.sets(sizes, max_size=5), rest=without_positive_root, lead=st.sampled_from([1, -3]))
@settings(max_examples=40)
def test_chosen_roots_are_all_found_in_ascending_order_and_known_to_be_rational(
    chosen: set[Fraction], rest: Polynomial, lead: int
) -> None:
    found = isolate_positive(integral(multiply(product_of(chosen), rest)) * lead)
    assert [fraction(root.rational) for root in found if root.rational is not None] == sorted(chosen)
    assert len(found) == len(chosen)


@given(chosen=st.sets(sizes, min_size=1, max_size=5), rest=without_positive_root)
@settings(max_examples=40)
def test_every_bracket_holds_its_root_and_no_other(chosen: set[Fraction], rest: Polynomial) -> None:
    for root in isolate_positive(integral(multiply(product_of(chosen), rest))):
        low, high = fraction(root.low), fraction(root.high)
        assert 0 < low <= high
        assert len([x for x in chosen if low <= x <= high]) == 1
        assert low == high or not {low, high} & chosen


@given(chosen=st.sets(sizes, min_size=1, max_size=4), rest=without_positive_root, bits=st.integers(1, 600))
@settings(max_examples=40)
def test_a_ball_holds_the_root_as_accurately_as_asked(
    chosen: set[Fraction], rest: Polynomial, bits: int
) -> None:
    found = isolate_positive(integral(multiply(product_of(chosen), rest)))
    for root, value in zip(found, sorted(chosen), strict=True):
        ball = root.ball(bits)
        assert accurate_bits(ball) >= bits
        assert holds(ball, value)


@given(squares=st.sets(st.integers(2, 400).filter(lambda n: int(n**0.5) ** 2 != n), min_size=1, max_size=4))
@settings(max_examples=40)
def test_square_roots_that_are_no_integers_are_irrational(squares: set[int]) -> None:
    p = multiply(*(polynomial(1, 0, -square) for square in squares))
    found = isolate_positive(integral(p))
    assert [root.rational for root in found] == [None] * len(squares)
    for root, square in zip(found, sorted(squares), strict=True):
        low, high = bounds(root.ball(200))
        assert low**2 < square < high**2


@given(
    centre=st.fractions(1, 9, max_denominator=20),
    steps=st.sets(st.integers(-5, 5), min_size=2, max_size=5),
    decade=st.integers(20, 80),
)
@settings(max_examples=20)
def test_roots_far_closer_than_doubles_are_told_apart(centre: Fraction, steps: set[int], decade: int) -> None:
    chosen = {centre + Fraction(step, 10**decade) for step in steps}
    found = isolate_positive(integral(product_of(chosen)))
    assert [fraction(root.rational) for root in found if root.rational is not None] == sorted(chosen)


@pytest.mark.parametrize("n", [4, 11, 30])
def test_mignotte_roots_are_parted_on_their_own_sides(n: int) -> None:
    """The polynomial is positive at 1/a and negative a little way off: one root on either side."""
    p = mignotte(n)
    below, above, large = isolate_positive(integral(p))
    middle, reach = Fraction(1, WIDTH), Fraction(1, 2 ** (95 * (n + 2)))
    assert evaluate(p, middle) > 0 > max(evaluate(p, middle - reach), evaluate(p, middle + reach))
    lower, upper = (bounds(root.ball(95 * n + 80)) for root in (below, above))
    assert middle - reach < lower[0] <= lower[1] < middle < upper[0] <= upper[1] < middle + reach
    assert bounds(large.ball(8))[0] > 1


@pytest.mark.parametrize("sharpness", [60, 180, 400, 900])
def test_two_roots_near_a_power_of_two_are_refined(sharpness: int) -> None:
    """2^2k (x - 1)^2 = 2: halving, which isolates the roots, stops long before Newton's step helps."""
    p = fmpz_poly([4**sharpness - 2, -2 * 4**sharpness, 4**sharpness])
    below, above = (bounds(root.ball(2 * sharpness)) for root in isolate_positive(p))
    reach = Fraction(3, 2 ** (sharpness + 1))
    assert 1 - reach < below[0] <= below[1] < 1 < above[0] <= above[1] < 1 + reach


@pytest.mark.parametrize("coefficients", [[1], [1, 1], [1, 0, 1], [1, -1, 1], [-5], [1, -2, 3, 4]], ids=str)
def test_where_no_root_is_positive_none_is_found(coefficients: list[int]) -> None:
    assert isolate_positive(fmpz_poly(coefficients[::-1])) == []


@given(chosen=st.sets(sizes, max_size=5), rest=without_positive_root)
@settings(max_examples=30)
def test_positive_roots_are_counted(chosen: set[Fraction], rest: Polynomial) -> None:
    assert count_positive(integral(multiply(product_of(chosen), rest))) == len(chosen)


TRICKY = integral(multiply(product_of({Fraction(1), Fraction(2), Fraction("2.0000000001"), Fraction(7)}),
                           polynomial(1, 0, -3), polynomial(1, -4, 5)))  # fmt: skip


@pytest.mark.parametrize(
    "guesses",
    [
        pytest.param([], id="none"),
        pytest.param([fmpq(1, 100), fmpq(6), fmpq(1000)], id="wrong ones"),
        pytest.param([fmpq(3, 2)] * 4, id="the same again and again"),
        pytest.param([fmpq(1), fmpq(2)], id="some missing"),
    ],
)
def test_bad_guesses_cost_no_root(guesses: list[fmpq], monkeypatch: pytest.MonkeyPatch) -> None:
    expected = [root.rational for root in isolate_positive(TRICKY)]
    monkeypatch.setattr(module, "_guesses", lambda _p: guesses)
    assert [root.rational for root in isolate_positive(TRICKY)] == expected
    assert len(expected) == 5


def test_where_halving_takes_too_long_all_roots_are_enclosed(monkeypatch: pytest.MonkeyPatch) -> None:
    expected = [root.rational for root in isolate_positive(TRICKY)]
    monkeypatch.setattr(module, "_guesses", lambda _p: [])
    monkeypatch.setattr(module, "_MOST_CUTS", 1)
    assert [root.rational for root in isolate_positive(TRICKY)] == expected


def test_asking_for_more_accuracy_keeps_the_root() -> None:
    """Each ball meets the one before; the last is as accurate as the most demanding question."""
    (root,) = isolate_positive(fmpz_poly([-2, 0, 1]))
    balls = [root.ball(bits) for bits in (10, 300, 20, 2000)]
    assert all(one.overlaps(other) for one in balls for other in balls)
    assert accurate_bits(root.ball(10)) >= 2000


@pytest.mark.parametrize(
    ("low", "high"),
    [(fmpq(1, 10**9), fmpq(10**9)), (fmpq(1), fmpq(3, 2)), (fmpq(7, 5), fmpq(10**40))],
    ids=["both wide", "near", "wide above"],
)
def test_refinement_ends_from_any_bracket(low: fmpq, high: fmpq) -> None:
    """Newton's step is of no use in a wide bracket: halving narrows it first."""
    ball = PositiveRoot(fmpz_poly([-2, 0, 1]), low, high).ball(100)
    assert accurate_bits(ball) >= 100
    assert (ball * ball - 2).contains(0)


def test_a_rational_root_met_by_halving_is_known_at_once() -> None:
    root = PositiveRoot(fmpz_poly([-1, 0, 0, 1]) * fmpz_poly([2, 1]), fmpq(1, 2**20), fmpq(2**20))
    assert root.ball(4000).is_exact()
    assert root.rational == 1


def test_roots_compare_by_value_and_only_the_very_same_are_equal() -> None:
    small, large = isolate_positive(integral(product_of({Fraction(1), 1 + Fraction(1, 10**50)})))
    assert compare_roots(small, large) == -1
    assert compare_roots(large, small) == 1
    assert compare_roots(small, small) == 0


@given(value=sizes)
def test_the_binary_order_brackets_a_value(value: Fraction) -> None:
    k = floor_log2(rational(value))
    assert fraction(power_of_two(k)) <= value < fraction(power_of_two(k + 1))


@given(low=sizes, ratio=st.fractions(Fraction(10**9 + 1, 10**9), 10**9))
def test_a_short_cut_lies_well_inside_and_is_dyadic(low: Fraction, ratio: Fraction) -> None:
    high = low * ratio
    cut = fraction(short_between(rational(low), rational(high)))
    assert low < cut < high
    assert cut.denominator & (cut.denominator - 1) == 0
