"""Exact polynomial operations, each against its definition."""

from fractions import Fraction

import pytest
from flint import fmpq, fmpz_poly
from hypothesis import given
from hypothesis import strategies as st

from service.analysis.polynomials import (
    axis_parts,
    descending,
    mirrored,
    parity_parts,
    primitive,
    shifted,
    sign,
    sign_variations,
    squarefree_levels,
    strip_origin,
    without_factor,
)

coefficient_lists = st.lists(st.integers(-50, 50), min_size=1, max_size=9)
polynomials = coefficient_lists.map(fmpz_poly)
non_zero = polynomials.filter(lambda p: not p.is_zero())
roots = st.integers(-6, 6)
S = fmpz_poly([0, 1])


def with_roots(chosen: dict[int, int]) -> fmpz_poly:
    """Give the product of (s - root)^multiplicity."""
    product = fmpz_poly([1])
    for root, multiplicity in chosen.items():
        product *= fmpz_poly([-root, 1]) ** multiplicity
    return product


@pytest.mark.parametrize(
    ("value", "expected"), [(fmpq(-1, 3), -1), (0, 0), (fmpq(7, 2), 1)], ids=["below", "zero", "above"]
)
def test_a_sign_is_one_of_three(value: fmpq | int, expected: int) -> None:
    assert sign(value) == expected


@given(p=non_zero, times=st.integers(0, 4))
def test_stripping_the_origin_gives_back_what_was_multiplied(p: fmpz_poly, times: int) -> None:
    rest, m = strip_origin(p * S**times)
    assert rest[0] != 0
    assert m >= times
    assert rest * S**m == p * S**times


@given(p=polynomials)
def test_parity_parts_add_up_to_the_polynomial(p: fmpz_poly) -> None:
    even, odd = parity_parts(p)
    assert even(S * S) + S * odd(S * S) == p


@given(coefficients=coefficient_lists, w=st.integers(-5, 5))
def test_axis_parts_are_the_value_on_the_axis(coefficients: list[int], w: int) -> None:
    re, im = 0, 0
    for c in reversed(coefficients):
        re, im = c - im * w, re * w
    even, odd = axis_parts(fmpz_poly(coefficients))
    assert (even(w * w), w * odd(w * w)) == (re, im)


@given(p=polynomials, x=st.integers(-9, 9))
def test_the_mirrored_polynomial_has_the_values_of_the_other_side(p: fmpz_poly, x: int) -> None:
    assert mirrored(p)(x) == p(-x)


@given(p=polynomials, factor=st.integers(1, 20))
def test_dividing_by_the_content_keeps_the_sign(p: fmpz_poly, factor: int) -> None:
    small = primitive(p * factor)
    assert small.content() == (0 if p.is_zero() else 1)
    assert small * (p * factor).content() == p * factor


@given(own=st.sets(roots), common=st.sets(roots), other=st.sets(roots), often=st.integers(1, 3))
def test_splitting_off_a_factor_parts_the_roots(
    own: set[int], common: set[int], other: set[int], often: int
) -> None:
    p = with_roots(dict.fromkeys(own | common, 1))
    factor = with_roots(dict.fromkeys(common | (other - own), often))
    coprime, shared = without_factor(p, factor)
    assert shared == with_roots(dict.fromkeys(common, 1))
    assert coprime == with_roots(dict.fromkeys(own - common, 1))


@given(chosen=st.dictionaries(roots, st.integers(1, 4)))
def test_squarefree_levels_sort_the_roots_by_multiplicity(chosen: dict[int, int]) -> None:
    levels = {m: q if q.leading_coefficient() > 0 else -q for q, m in squarefree_levels(with_roots(chosen))}
    assert levels == {
        m: with_roots({root: 1 for root, often in chosen.items() if often == m}) for m in set(chosen.values())
    }


@pytest.mark.parametrize("p", [fmpz_poly([7]), fmpz_poly([0])], ids=["constant", "zero"])
def test_a_constant_has_no_squarefree_level(p: fmpz_poly) -> None:
    assert list(squarefree_levels(p)) == []


def test_a_level_keeps_its_integer_coefficients() -> None:
    assert list(squarefree_levels(fmpz_poly([2, 3]))) == [(fmpz_poly([2, 3]), 1)]


@pytest.mark.parametrize(
    ("coefficients", "changes"),
    [([1, 2, 3], 0), ([1, -2, 3], 2), ([-1, 0, 0, 1], 1), ([1, 0, 1, 0, -1, 0, -1, 2], 2), ([0, 5], 0)],
)
def test_sign_variations_skip_zeros(coefficients: list[int], changes: int) -> None:
    assert sign_variations(fmpz_poly(coefficients)) == changes


@given(
    positive=st.lists(st.integers(1, 6), max_size=4),
    others=st.lists(st.tuples(st.integers(-9, 9), st.integers(1, 99)), max_size=2),
)
def test_variations_exceed_the_positive_roots_by_an_even_number(
    positive: list[int], others: list[tuple[int, int]]
) -> None:
    """Descartes' rule; each of the other factors (s + a)^2 + b has a complex pair."""
    p = fmpz_poly([1])
    for root in positive:
        p *= fmpz_poly([-root, 1])
    for a, b in others:
        p *= fmpz_poly([a * a + b, 2 * a, 1])
    excess = sign_variations(p) - len(positive)
    assert excess >= 0
    assert excess % 2 == 0


def test_descending_coefficients_are_python_integers() -> None:
    coefficients = descending(fmpz_poly([3, 0, -2]))
    assert coefficients == (-2, 0, 3)
    assert {type(c) for c in coefficients} == {int}


@given(value=st.integers(-(10**9), 10**9), bits=st.integers(-40, 40))
def test_shifting_multiplies_by_a_power_of_two_toward_zero(value: int, bits: int) -> None:
    exact = value * Fraction(2) ** bits
    found = shifted(value, bits)
    assert abs(found) <= abs(exact) < abs(found) + 1
    assert found * value >= 0
