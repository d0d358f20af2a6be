"""Root counts against products of factors whose places are known, and against the oracle."""

import pytest
from flint import fmpz_poly
from hypothesis import given
from hypothesis import strategies as st

from service.analysis import counts as module
from service.analysis.counts import Counts, count_roots
from tests import oracle
from tests.exact import integral
from tests.polynomials import Polynomial, degree, multiply, polynomial, power
from tests.strategies import axis_pairs, left_factors, mirrored, positives, right_factors

quadruplets = st.builds(
    lambda a, b: multiply(polynomial(1, 2 * a, a * a + b), polynomial(1, -2 * a, a * a + b)),
    positives,
    positives,
)
"""((s + a)^2 + b)((s - a)^2 + b): four roots symmetric to the origin, none on the axis."""

real_pairs = positives.map(lambda x: polynomial(1, 0, -x))
"""s^2 - x: one root on either side."""


@given(
    left=st.lists(left_factors, max_size=2),
    right=st.lists(right_factors, max_size=2),
    pairs=st.dictionaries(axis_pairs, st.integers(1, 3), max_size=2),
    at_origin=st.integers(0, 3),
    symmetric=st.lists(st.one_of(quadruplets, real_pairs), max_size=2),
    lead=st.sampled_from([1, -1, 7]),
)
def test_a_product_has_the_roots_of_its_factors(  # noqa: PLR0913, PLR0917 - one for each place
    left: list[Polynomial],
    right: list[Polynomial],
    pairs: dict[Polynomial, int],
    at_origin: int,
    symmetric: list[Polynomial],
    lead: int,
) -> None:
    on_axis = [power(pair, often) for pair, often in pairs.items()]
    p = multiply(*left, *right, *on_axis, *symmetric, polynomial(1, *[0] * at_origin))
    expected = Counts(
        rhp=sum(map(degree, right)) + sum(map(degree, symmetric)) // 2,
        axis=at_origin + sum(map(degree, on_axis)),
        repeated_axis=at_origin > 1 or any(often > 1 for often in pairs.values()),
    )
    assert count_roots(integral(p) * lead) == expected


def roots_of_unity(n: int, constant: int) -> Counts:
    """Count the roots of s^n + constant, constant 1 or -1, by their angles in units of pi/(2n)."""
    angles = [(4 * k + (2 if constant > 0 else 0)) % (4 * n) for k in range(n)]
    return Counts(
        rhp=sum(a < n or a > 3 * n for a in angles),
        axis=sum(a in {n, 3 * n} for a in angles),
    )


@pytest.mark.parametrize("constant", [1, -1])
@pytest.mark.parametrize("n", range(1, 17))
def test_roots_of_unity_vanish_from_most_rows_of_the_routh_scheme(n: int, constant: int) -> None:
    assert count_roots(fmpz_poly([constant, *[0] * (n - 1), 1])) == roots_of_unity(n, constant)


@pytest.mark.parametrize(
    ("descending", "expected"),
    [
        pytest.param([5], Counts(0, 0), id="a constant"),
        pytest.param([1, 0, 0], Counts(0, 2, repeated_axis=True), id="twice the origin"),
        pytest.param([1, 1, 2, 2, 3, 5], Counts(2, 0), id="zero in the first column"),
        pytest.param([1, 2, 24, 48, -25, -50], Counts(1, 2), id="a row of zeros"),
        pytest.param([-1, -2, -3], Counts(0, 0), id="negative lead"),
    ],
)
def test_irregular_schemes(descending: list[int], expected: Counts) -> None:
    """The third counts by the sign changes of 1, 1, e, 2 - 2/e, ...; the fourth is (s^2-1)(s^2+25)(s+2)."""
    assert count_roots(fmpz_poly(descending[::-1])) == expected


@given(coefficients=st.lists(st.integers(-4, 4), min_size=1, max_size=11).filter(any))
def test_any_small_polynomial_counts_as_the_oracle_says(coefficients: list[int]) -> None:
    """Small coefficients with many zeros: every kind of irregular scheme comes up."""
    p = polynomial(*coefficients)
    assert count_roots(integral(p)) == Counts(*oracle.counts(p), oracle.has_repeated_axis_root(p))


@given(coefficients=st.lists(st.integers(-(10**30), 10**30), min_size=2, max_size=13).filter(any))
def test_balls_and_exact_remainders_count_alike(coefficients: list[int]) -> None:
    p = fmpz_poly(coefficients)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "_right_of_axis_by_balls", lambda _even, _odd: None)
        exactly = count_roots(p)
    assert count_roots(p) == exactly


@pytest.mark.parametrize(("more", "rhp"), [(1, 2), (-1, 0)], ids=["right", "left"])
def test_a_routh_entry_of_1e_60_of_its_terms_has_a_sign(more: int, rhp: int) -> None:
    """s^3 + s^2 + s + 1 +- 1e-60: far below what balls of the first precision can tell."""
    unit = 10**60
    assert count_roots(fmpz_poly([unit + more, unit, unit, unit])) == Counts(rhp, 0)


@given(p=st.lists(st.integers(-9, 9), min_size=1, max_size=8).filter(any).map(lambda c: polynomial(*c)))
def test_mirroring_exchanges_left_and_right(p: Polynomial) -> None:
    here, there = count_roots(integral(p)), count_roots(integral(mirrored(p)))
    assert here.axis == there.axis
    assert here.rhp + here.axis + there.rhp == degree(p)


def test_counts_of_factors_add_up() -> None:
    assert Counts(1, 2) + Counts(3, 0, repeated_axis=True) == Counts(4, 2, repeated_axis=True)
