"""Gains are exact: rational or not, equal or not is decided, however near they lie."""

from fractions import Fraction
from itertools import pairwise
from math import isqrt

import pytest
from flint import arb, fmpq, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import gains as module
from service.analysis.gains import Gain, GainMap, by_gain, compare, enclose_square_root, square_root
from service.analysis.precision import accurate_bits, working
from service.analysis.roots import isolate_positive
from tests.exact import bounds, fraction, integral, rational
from tests.polynomials import Polynomial, multiply, polynomial

ONE = polynomial(1)
SQRT2 = polynomial(1, 0, -2)
fractions = st.fractions(-9, 9, max_denominator=50)


def gains(f: Polynomial, top: Polynomial, bottom: Polynomial = ONE) -> list[Gain]:
    """Give K = -top/bottom at the positive roots of f, ascending in x; all coefficients are integers."""
    p, q = (fmpz_poly([int(c) for c in reversed(part)]) for part in (top, bottom))
    one_map = GainMap(integral(f), p, q)
    return [Gain((one_map, root)) for root in isolate_positive(one_map.f)]


def only(f: Polynomial, top: Polynomial, bottom: Polynomial = ONE) -> Gain:
    (gain,) = gains(f, top, bottom)
    return gain


@given(
    x=st.fractions(Fraction(1, 9), 9, max_denominator=9), slope=st.integers(1, 9), offset=st.integers(1, 9)
)
@settings(max_examples=40)
def test_at_a_rational_place_the_gain_is_rational(x: Fraction, slope: int, offset: int) -> None:
    gain = only(polynomial(1, -x), polynomial(slope, offset), polynomial(1, 0))
    assert gain.rational is not None
    assert fraction(gain.rational) == -(slope * x + offset) / x
    assert gain.square is None


def test_a_gain_can_be_rational_where_its_place_is_not() -> None:
    """K = -(x^2 + 1) at x = sqrt(2) is -3."""
    gain = only(SQRT2, polynomial(1, 0, 1))
    assert gain.rational == -3
    assert gain.square is None


def test_a_square_can_be_rational_where_the_gain_is_not() -> None:
    """K = -3x at x = sqrt(2): K^2 = 18."""
    gain = only(SQRT2, polynomial(3, 0))
    assert (gain.rational, gain.square, gain.sign) == (None, 18, -1)


def test_a_gain_may_have_neither_form() -> None:
    """K = -(x + 1) at x = sqrt(2): K^2 = 3 + 2 sqrt(2)."""
    gain = only(SQRT2, polynomial(1, 1))
    assert (gain.rational, gain.square) == (None, None)


def test_a_square_that_two_places_share_is_not_taken_for_a_fraction() -> None:
    """x^4 - 10 x^2 + 1 has the roots sqrt(3) +- sqrt(2); K = x^2 - 5 takes +-2 sqrt(6) there: K^2 = 24."""
    low, high = gains(polynomial(1, 0, -10, 0, 1), polynomial(-1, 0, 5))
    assert (low.rational, high.rational, low.square, high.square) == (None, None, 24, 24)
    assert compare(low, high) == -1


def test_the_certificate_and_the_factors_say_the_same(monkeypatch: pytest.MonkeyPatch) -> None:
    cases = [
        (polynomial(1, 1), ONE),
        (polynomial(3, 0), ONE),
        (polynomial(1, 0, 1), ONE),
        (ONE, polynomial(1, 3)),
    ]
    f = multiply(SQRT2, polynomial(1, 0, -3, -1))
    quick = [(g.rational, g.square) for case in cases for g in gains(f, *case)]
    monkeypatch.setattr(module.GainMap, "squares_distinct", False)
    assert [(g.rational, g.square) for case in cases for g in gains(f, *case)] == quick
    assert (None, fmpq(18)) in quick
    assert (fmpq(-3), None) in quick


@pytest.mark.parametrize(
    ("f", "distinct"),
    [
        pytest.param(polynomial(1, -3, 1), True, id="generates the field"),
        pytest.param(SQRT2, False, id="square is rational"),
        pytest.param(polynomial(2**61 - 1, -3, 1), False, id="no reduction modulo the prime"),
    ],
)
def test_squares_are_called_distinct_only_with_proof(f: Polynomial, distinct: bool) -> None:  # noqa: FBT001
    assert GainMap(integral(f), fmpz_poly([0, 1]), fmpz_poly([1])).squares_distinct is distinct


def test_a_denominator_that_vanishes_modulo_the_prime_proves_nothing() -> None:
    one_map = GainMap(fmpz_poly([1, -3, 1]), fmpz_poly([0, 1]), fmpz_poly([2**61 - 1]))
    assert one_map.squares_distinct is False
    assert [Gain((one_map, root)).rational for root in isolate_positive(one_map.f)] == [None, None]


def test_two_places_share_an_irrational_gain() -> None:
    """With x + 1/x = y for y^2 - 8y + 14 = 0 both x and 1/x give the gain y = 4 +- sqrt(2)."""
    folded = polynomial(1, -8, 16, -8, 1)
    values = gains(folded, polynomial(-1, 0, -1), polynomial(1, 0))
    smallest, second, third, largest = sorted(values, key=by_gain)
    assert compare(smallest, second) == compare(third, largest) == 0
    assert compare(second, third) == -1
    assert [int(c) for c in smallest.minimal_polynomial.coeffs()] == [14, -8, 1]
    assert {g.rational for g in values} == {None}


def test_places_on_different_polynomials_can_share_a_gain() -> None:
    """-x at sqrt(2) and 1 - x at 1 + sqrt(2) are both -sqrt(2)."""
    one = only(SQRT2, polynomial(1, 0))
    other = only(polynomial(1, -2, -1), polynomial(1, -1))
    assert compare(one, other) == 0
    assert one.minimal_polynomial == other.minimal_polynomial == fmpz_poly([-2, 0, 1])


def test_conjugates_of_one_polynomial_are_told_apart() -> None:
    """-x at the roots of x^2 - 3x + 1: one minimal polynomial, two gains."""
    nearer, further = gains(polynomial(1, -3, 1), polynomial(1, 0))
    assert nearer.minimal_polynomial == further.minimal_polynomial
    assert (compare(nearer, further), compare(further, nearer), compare(nearer, nearer)) == (1, -1, 0)


@pytest.mark.parametrize("decade", [20, 30, 200])
def test_near_ties_are_no_ties(decade: int) -> None:
    """sqrt(2) against a fraction, and against the root of another polynomial, 10^-decade away."""
    unit = 10**decade
    root = only(SQRT2, polynomial(-1, 0))
    below = fmpq(isqrt(2 * unit * unit), unit)
    shifted = only(polynomial(unit, -1, -2 * unit), polynomial(-1, 0))
    assert compare(Gain(below), root) == -1
    assert compare(root, Gain(below + fmpq(1, unit))) == -1
    assert compare(root, shifted) == -1
    assert compare(shifted, root) == 1
    with working(64 + 8 * decade):
        assert abs(shifted.ball(4 * decade) - root.ball(4 * decade)) < arb(10) ** -decade


@given(values=st.lists(fractions, min_size=2, max_size=6))
@settings(max_examples=50)
def test_rational_gains_sort_as_fractions(values: list[Fraction]) -> None:
    ordered = sorted((Gain(rational(value)) for value in values), key=by_gain)
    assert [fraction(g.rational) for g in ordered if g.rational is not None] == sorted(values)


@given(one=fractions, other=fractions)
@settings(max_examples=50)
def test_rational_gains_compare_as_fractions(one: Fraction, other: Fraction) -> None:
    expected = (one > other) - (one < other)
    assert compare(Gain(rational(one)), Gain(rational(other))) == expected


@given(shift=st.integers(-5, 5), factor=st.integers(1, 5), bits=st.integers(1, 500))
@settings(max_examples=40)
def test_a_ball_holds_the_gain_as_accurately_as_asked(shift: int, factor: int, bits: int) -> None:
    """K = factor * sqrt(2) + shift satisfies (K - shift)^2 = 2 factor^2."""
    gain = only(SQRT2, polynomial(-factor, -shift))
    assert accurate_bits(gain.ball(bits)) >= bits
    low, high = (end - shift for end in bounds(gain.ball(bits)))
    assert low <= 0 or low**2 < 2 * factor**2 < high**2
    assert gain.sign == (1 if shift > -factor * 1.4142 else -1)


@pytest.mark.parametrize("value", ["-7/3", "0", "5"])
def test_a_rational_gain_has_a_sign_and_a_linear_minimal_polynomial(value: str) -> None:
    exact = Fraction(value)
    gain = Gain(rational(exact))
    assert gain.sign == (exact > 0) - (exact < 0)
    assert list(map(int, gain.minimal_polynomial.coeffs())) == [-exact.numerator, exact.denominator]


@pytest.mark.parametrize(
    ("f", "top", "bottom", "expected"),
    [
        pytest.param(SQRT2, polynomial(3, 0), ONE, [1, 0, -18], id="a square root"),
        pytest.param(SQRT2, polynomial(1, 1), ONE, [1, 2, -1], id="-1 - sqrt(2)"),
        pytest.param(SQRT2, polynomial(1, 0, 1), ONE, [1, 3], id="rational at an irrational place"),
        pytest.param(polynomial(1, 0, 0, -2), polynomial(1, 0), polynomial(2), [4, 0, 0, 1], id="cubic"),
        pytest.param(polynomial(1, 0, 0, 0, -2), polynomial(1, 0, 0), ONE, [1, 0, -2], id="in a subfield"),
    ],
)
def test_minimal_polynomials_are_primitive_with_positive_lead(
    f: Polynomial, top: Polynomial, bottom: Polynomial, expected: list[int]
) -> None:
    assert [int(c) for c in only(f, top, bottom).minimal_polynomial.coeffs()][::-1] == expected


def test_a_gain_is_alone_in_a_narrow_interval_and_not_in_a_wide_one() -> None:
    gain = only(SQRT2, polynomial(-1, 0))
    assert gain.alone_in((fmpq(14, 10), fmpq(15, 10)))
    assert not gain.alone_in((fmpq(-3, 2), fmpq(3, 2)))


def test_the_factor_of_a_root_is_the_one_that_vanishes_there() -> None:
    one_map = GainMap(integral(multiply(SQRT2, polynomial(1, 0, -3))), fmpz_poly([0, 1]), fmpz_poly([1]))
    found = [one_map.factor_of(root) for root in isolate_positive(one_map.f)]
    assert [abs(int(factor[0])) for factor in found] == [2, 3]


@given(values=st.lists(st.integers(2, 50), min_size=2, max_size=4, unique=True))
@settings(max_examples=30)
def test_distinct_gains_of_one_map_sort_strictly(values: list[int]) -> None:
    f = multiply(*(polynomial(1, 0, -value) for value in values))
    ordered = sorted(gains(f, polynomial(-1, 0)), key=by_gain)
    assert all(compare(one, other) == -1 for one, other in pairwise(ordered))


@pytest.mark.parametrize(
    ("value", "root"), [("9/4", "3/2"), ("0", "0"), ("2", None), ("8/9", None), ("1/3", None)]
)
def test_a_square_root_is_a_fraction_or_none(value: str, root: str | None) -> None:
    assert square_root(rational(value)) == (None if root is None else rational(root))


def test_an_enclosed_square_root_is_as_accurate_as_asked() -> None:
    enclose = enclose_square_root(Gain(fmpq(2)).ball)
    low, high = bounds(enclose(300))
    assert low**2 < 2 < high**2
    assert accurate_bits(enclose(300)) >= 300
