"""The oracle itself, against polynomials whose roots are known by construction and against SymPy."""

from fractions import Fraction

import pytest
import sympy  # type: ignore[import-untyped]  # SymPy ships no types
from hypothesis import given
from hypothesis import strategies as st

from tests.oracle import (
    Counts,
    Loop,
    closed_loop_counts,
    counts,
    event_polynomial,
    has_repeated_axis_root,
    is_lossless,
    real_roots,
    reduced,
    verdict,
)
from tests.polynomials import (
    Polynomial,
    degree,
    evaluate,
    multiply,
    polynomial,
    power,
    scaled,
    squarefree_factors,
)
from tests.strategies import (
    S,
    axis_pairs,
    folded,
    left_factors,
    meeting,
    mirrored,
    non_zeros,
    positives,
    products,
    right_factors,
    touching,
)

small_polynomials = (
    st.lists(st.integers(-4, 4), min_size=1, max_size=6).map(lambda c: polynomial(*c)).filter(bool)
)


def sympy_counts(p: Polynomial) -> Counts:
    """Count by SymPy: exact factors and axis roots, the other roots' sides to 30 digits."""
    s = sympy.Symbol("s")
    exact = sympy.Poly([sympy.Rational(c.numerator, c.denominator) for c in p], s)
    rhp = axis = 0
    for factor, multiplicity in exact.factor_list()[1]:
        on_axis = sympy_axis_roots(factor)
        axis += multiplicity * on_axis
        real_parts = sorted((sympy.re(root) for root in factor.nroots(n=30, maxsteps=200)), key=abs)
        rhp += multiplicity * sum(bool(part > 0) for part in real_parts[on_axis:])
    return Counts(rhp, axis)


def sympy_axis_roots(factor: sympy.Poly) -> int:
    """Count the axis roots of an irreducible polynomial: common real roots of Re and Im of p(jw)."""
    w = sympy.Symbol("w", real=True)
    real, imaginary = sympy.expand(factor.as_expr().subs(factor.gen, sympy.I * w)).as_real_imag()
    common = sympy.gcd(sympy.Poly(real, w), sympy.Poly(imaginary, w))
    return int(common.count_roots()) if common.degree() > 0 else 0


@given(small_polynomials)
def test_counts_equal_those_of_sympy(p: Polynomial) -> None:
    assert counts(p) == sympy_counts(p)


@given(
    left=products(left_factors, 0, 2),
    right=products(right_factors, 0, 2),
    pairs=st.builds(power, axis_pairs, st.integers(0, 3)),
    at_origin=st.integers(0, 3),
    lead=non_zeros,
)
def test_counts_are_those_the_factors_were_made_with(
    left: Polynomial, right: Polynomial, pairs: Polynomial, at_origin: int, lead: Fraction
) -> None:
    p = scaled(multiply(left, right, pairs, power(S, at_origin)), lead)
    assert counts(p) == Counts(degree(right), degree(pairs) + at_origin)
    assert has_repeated_axis_root(p) == (degree(pairs) > 2 or at_origin > 1)


@given(left=left_factors, often=st.integers(1, 3))
def test_pairs_mirrored_at_the_axis_are_not_on_it(left: Polynomial, often: int) -> None:
    p = power(multiply(left, mirrored(left)), often)
    assert counts(p) == Counts(often * degree(left), 0)


@pytest.mark.parametrize(
    ("p", "expected"),
    [
        pytest.param(polynomial(5), "stable", id="no root"),
        pytest.param(polynomial(1, 1), "stable", id="left"),
        pytest.param(polynomial(1, 0), "marginal", id="origin"),
        pytest.param(polynomial(1, 0, 0), "unstable", id="double origin"),
        pytest.param(polynomial(1, 0, 3), "marginal", id="pair"),
        pytest.param(polynomial(1, 0, 2, 0, 1), "unstable", id="double pair"),
        pytest.param(polynomial(1, 0, 5, 0, 4), "marginal", id="two pairs"),
        pytest.param(polynomial(1, 0, -1), "unstable", id="mirrored reals"),
    ],
)
def test_verdict(p: Polynomial, expected: str) -> None:
    assert verdict(p) == expected


def test_real_roots_are_isolated_to_the_width_asked_for() -> None:
    p = multiply(polynomial(1, 0, -2), polynomial(1, -7), polynomial(1, 0), polynomial(1, 0, 1))
    width = Fraction(1, 10**40)
    found = real_roots(p, width)
    assert len(found) == 4
    assert all(high - low <= width * min(abs(low), abs(high)) for low, high in found)
    exact = [-sympy.sqrt(2), sympy.Integer(0), sympy.sqrt(2), sympy.Integer(7)]
    assert all(
        sympy.Rational(low) <= root <= sympy.Rational(high)
        for (low, high), root in zip(found, exact, strict=True)
    )


def test_event_polynomial_holds_crossings_and_the_origin() -> None:
    loop = Loop(polynomial(1), polynomial(1, 3, 3, 1))
    event = event_polynomial(loop)
    assert degree(event) == 2
    assert evaluate(event, 8) == evaluate(event, -1) == 0


def test_event_polynomial_keeps_the_order_of_a_contact() -> None:
    loop = Loop(polynomial(2, 1, 4, 1), polynomial(1, 0, 1, -2, 0))
    assert (polynomial(1, -1), 3) in squarefree_factors(event_polynomial(loop))


def test_cancelling_leaves_what_is_not_shared() -> None:
    loop = Loop(polynomial(1, 3, 2), polynomial(1, 2, 1, 0))
    assert reduced(loop) == Loop(polynomial(1, 2), polynomial(1, 1, 0))


@pytest.mark.parametrize(
    ("loop", "expected"),
    [
        pytest.param(Loop(polynomial(1, 4), polynomial(1, 4, 0, 0)), True, id="even after cancelling"),
        pytest.param(Loop(polynomial(1), polynomial(1, 0)), False, id="odd"),
        pytest.param(Loop((), polynomial(1, 0, 1)), False, id="zero"),
        pytest.param(Loop(polynomial(1), polynomial(1, 0, 1)), True, id="even"),
    ],
)
def test_lossless_is_told_from_the_rest(loop: Loop, *, expected: bool) -> None:
    assert is_lossless(loop) == expected


@given(touching())
def test_a_touching_loop_has_a_multiple_event(loop: Loop) -> None:
    numerator, _ = reduced(loop)
    event = event_polynomial(reduced(loop))
    assert (
        is_lossless(loop)
        or not numerator
        or any(multiplicity > 1 for _, multiplicity in squarefree_factors(event))
    )


@given(meeting())
def test_a_meeting_loop_has_three_axis_roots_or_more_at_a_rational_gain(loop: Loop) -> None:
    event = event_polynomial(loop)
    drawn = {Fraction(sign * n, d) for sign in (1, -1) for n in range(1, 13) for d in (1, 2, 3, 5, 8, 10)}
    assert any(evaluate(event, gain) == 0 and closed_loop_counts(loop, gain).axis >= 3 for gain in drawn)


@given(p=small_polynomials, a=positives)
def test_folding_doubles_every_root_on_its_own_side(p: Polynomial, a: Fraction) -> None:
    once = counts(p)
    assert counts(folded(p, a, degree(p))) == Counts(2 * once.rhp, 2 * once.axis)
