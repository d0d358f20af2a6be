"""The engine against SymPy's exact roots, mpmath's 60 digits and, where well conditioned, NumPy and SciPy."""

from decimal import Decimal
from fractions import Fraction

import mpmath  # type: ignore[import-untyped]  # mpmath ships no types
import numpy as np
import pytest
import scipy.linalg
import sympy  # type: ignore[import-untyped]  # SymPy ships no types
from hypothesis import assume, given
from hypothesis import strategies as st

from tests.asking import DIGITS, ask, band_ends, edge_gain, gains_inside
from tests.effort import examples
from tests.oracle import Loop, closed_loop, event_polynomial, is_lossless, real_roots, reduced
from tests.polynomials import degree, polynomial, squarefree_factors
from tests.strategies import FAMILIES, negative_lead, non_zeros, plain, poles_on_the_axis

PRECISION = 60
"""Decimal digits of the values compared with."""

X = sympy.Symbol("x")

modest = st.one_of(
    *(FAMILIES[name] for name in ("plain", "poles_on_the_axis", "zeros_on_the_axis", "biproper", "improper"))
).filter(lambda loop: bool(loop.numerator) and not is_lossless(loop))
"""Families whose crossing polynomial is none that vanishes, and solved by SymPy in milliseconds."""


def rational(value: Fraction) -> sympy.Rational:
    return sympy.Rational(value.numerator, value.denominator)


def axis_parts(p: sympy.Poly) -> tuple[sympy.Poly, sympy.Poly]:
    """Give E and O in x = w^2 of p(jw) = E(x) + jw O(x)."""
    ascending = p.all_coeffs()[::-1]
    even = [c * (-1) ** i for i, c in enumerate(ascending[::2])]
    odd = [c * (-1) ** i for i, c in enumerate(ascending[1::2])]
    return sympy.Poly(even[::-1], X), sympy.Poly(odd[::-1] or [0], X)


def positive_roots(h: sympy.Poly) -> list[sympy.Rational]:
    """Find the distinct positive roots to 120 digits; SymPy's exact count guards the real among them.

    As fractions: evaluated at a SymPy Float, a polynomial over the rationals would fall back to doubles.
    """
    found: list[sympy.Rational] = []
    for factor, _ in h.factor_list()[1]:
        numeric = [root for root in factor.nroots(n=2 * PRECISION, maxsteps=500) if root.is_real and root > 0]
        assert len(numeric) == factor.count_roots(0) - (factor.eval(0) == 0)
        found += map(sympy.Rational, numeric)
    return found


def crossings_by_sympy(loop: Loop) -> list[tuple[Fraction, Fraction]]:
    """Find gain and frequency of each crossing at w > 0 to 60 digits at least.

    SymPy cancels, forms the crossing polynomial, divides out axis poles and zeros and finds its roots.
    """
    s = sympy.Symbol("s")
    numerator, denominator = (sympy.Poly([rational(c) for c in p] or [0], s) for p in loop)
    _, numerator, denominator = numerator.cofactors(denominator)
    (ne, no), (de, do) = axis_parts(numerator), axis_parts(denominator)
    h = de * no - do * ne
    for special in (ne.gcd(no), de.gcd(do)):
        while h.gcd(special).degree() > 0:
            h = h.quo(h.gcd(special))
    return [
        (
            fraction(
                -(de.eval(x) * ne.eval(x) + x * do.eval(x) * no.eval(x))
                / (ne.eval(x) ** 2 + x * no.eval(x) ** 2)
            ),
            square_root(x),
        )
        for x in positive_roots(h)
    ]


def fraction(value: sympy.Expr) -> Fraction:
    return Fraction(*map(int, sympy.Rational(value).as_numer_denom()))


def square_root(value: sympy.Rational) -> Fraction:
    """Give a square root to 120 digits (SymPy's own would try to factor the integers first)."""
    with mpmath.workdps(2 * PRECISION):
        mantissa, exponent = mpmath.sqrt(mpmath.mpf(int(value.p)) / int(value.q)).man_exp
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def correctly_rounded(decimal: str, value: Fraction) -> bool:
    """Tell whether a decimal is within half a unit of its 30th significant digit."""
    exponent = Decimal(decimal).adjusted()
    unit = Fraction(10) ** (exponent - DIGITS + 1)
    return abs(Fraction(Decimal(decimal)) - value) <= unit / 2 * (1 + Fraction(1, 10**20))


@given(loop=modest)
@examples(60)
def test_crossings_are_the_exact_roots_sympy_finds(loop: Loop) -> None:
    unmatched = crossings_by_sympy(loop)
    for edge in ask(loop).edges:
        for frequency in edge.frequencies if "crossing" in edge.causes else ():
            if frequency.rad_per_s:
                at = edge_gain(edge), Fraction(frequency.rad_per_s)
                gain, w = min(unmatched, key=lambda pair: abs(pair[0] - at[0]) + abs(pair[1] - at[1]))
                unmatched.remove((gain, w))
                assert edge.gain == float(gain)
                assert correctly_rounded(edge.decimal, gain)
                assert frequency.rad_per_s == float(w)
                assert frequency.hz == float(w / fraction(2 * sympy.pi.evalf(PRECISION)))
    assert unmatched == []


@given(loop=modest)
@examples(40)
def test_exact_forms_are_those_sympy_would_write(loop: Loop) -> None:
    """An exact text is the value; a gain without one is no fraction of a few digits, nor is its square."""
    for edge in ask(loop).edges:
        for value, exact in [(edge.gain, edge.exact), *((f.rad_per_s, f.exact) for f in edge.frequencies)]:
            if exact is not None:
                assert value == float(fraction(sympy.sympify(exact, rational=True).evalf(PRECISION)))
        if edge.exact is None:
            square = Fraction(edge.decimal) ** 2
            assert abs(square - square.limit_denominator(10**6)) > square / 10**25


def closed_loop_roots(loop: Loop, gain: Fraction) -> list[mpmath.mpc]:
    """Find the closed-loop poles at a gain to 60 digits; distinct ones, as a multiple root has no digits."""
    roots = []
    with mpmath.workdps(2 * PRECISION):
        for factor, _ in squarefree_factors(closed_loop(loop, gain)):
            coefficients = [mpmath.mpf(c.numerator) / c.denominator for c in factor]
            roots += mpmath.polyroots(coefficients, maxsteps=500, extraprec=8 * PRECISION)
    return roots


@given(loop=st.one_of(plain(), poles_on_the_axis(), negative_lead()))
@examples(60)
def test_at_an_edge_s_decimal_a_root_lies_on_the_axis_at_its_frequency(loop: Loop) -> None:
    """30 digits of a gain pin a simple root to nearly as many; a multiple one to a third of them."""
    small = reduced(loop)
    for edge in ask(loop).edges:
        gain = edge_gain(edge)
        finite = [frequency.rad_per_s for frequency in edge.frequencies if frequency.rad_per_s is not None]
        assert finite or set(edge.causes) <= {"infinity", "open_loop"}
        roots = closed_loop_roots(small, gain) if finite else []
        for w in finite:
            apart = min(max(abs(root.imag - w), abs(root.real)) for root in roots)
            assert apart <= 1e-9 * (1 + w)


def axis_gains(loop: Loop) -> list[Fraction]:
    """Find the gains with a root on the axis: candidates from the resultant, judged by mpmath's roots.

    Candidates are known to 1e-50, so that an axis root of multiplicity up to four shows within 1e-12.
    """
    event = event_polynomial(loop)
    found = []
    for factor, _ in squarefree_factors(event):
        for low, high in real_roots(factor, Fraction(1, 10**50)):
            roots = closed_loop_roots(loop, (low + high) / 2) if high else closed_loop_roots(loop, high)
            if any(abs(root.real) <= 1e-11 for root in roots):
                found.append(high)
    return sorted(found)


@pytest.mark.parametrize("family", ["touching", "touching_irrationally", "meeting", "tied", "plain"])
@given(data=st.data())
@examples(25)
def test_edges_are_all_the_gains_with_a_root_on_the_axis(family: str, data: st.DataObject) -> None:
    """Touches included, which change no count, and gains that are no fractions."""
    loop = data.draw(FAMILIES[family])
    small = reduced(loop)
    assume(not is_lossless(loop) and degree(small.denominator) > 0)
    gains = [edge_gain(edge) for edge in ask(loop).edges if set(edge.causes) != {"infinity"}]
    if degree(small.numerator) > degree(small.denominator):
        gains.remove(Fraction(0))
    expected = axis_gains(small)
    expected = [gain for gain in expected if gain or degree(small.numerator) <= degree(small.denominator)]
    assert len(gains) == len(expected)
    assert all(abs(a - b) <= abs(b) / 10**29 for a, b in zip(gains, expected, strict=True))


def float_counts(roots: np.ndarray, count: int) -> int | None:
    """Count roots right of the axis; None where one is too near it or two too near each other for floats."""
    size = np.abs(roots).max(initial=1.0)
    pairs = np.abs(roots[:, None] - roots[None, :]) + size * np.eye(len(roots))
    if (
        len(roots) != count
        or np.abs(roots.real).min(initial=1.0) < 1e-4 * size
        or pairs.min(initial=1.0) < 1e-3 * size
    ):
        return None
    return int((roots.real > 0).sum())


@given(loop=st.one_of(*FAMILIES.values()), gain=non_zeros)
@examples(200)
def test_well_conditioned_counts_are_those_of_numpy_and_scipy(loop: Loop, gain: Fraction) -> None:
    closed = closed_loop(loop, gain)
    assume(degree(closed) > 0)
    coefficients = np.array([float(c) for c in closed])
    by_numpy = float_counts(np.roots(coefficients), degree(closed))
    by_scipy = float_counts(
        scipy.linalg.eigvals(scipy.linalg.companion(coefficients)).astype(complex), degree(closed)
    )
    assume(by_numpy is not None and by_scipy is not None)
    commissioned = ask(loop, gain=gain).commissioned
    assert commissioned is not None
    assert commissioned.rhp_poles == by_numpy == by_scipy
    assert commissioned.axis_poles == 0


@given(loop=st.one_of(*FAMILIES.values()), gain=non_zeros)
@examples(60)
def test_closed_loop_poles_are_the_roots_mpmath_finds(loop: Loop, gain: Fraction) -> None:
    closed = closed_loop(loop, gain)
    commissioned = ask(loop, gain=gain).commissioned
    assert commissioned is not None
    if not closed:
        assert commissioned.closed_loop_poles == ()
        return
    expected = [
        (float(root.real), float(root.imag), multiplicity)
        for factor, multiplicity in squarefree_factors(closed)
        for root in closed_loop_roots(Loop((), factor), Fraction(0))
    ]
    listed = [(pole.re, pole.im, pole.multiplicity) for pole in commissioned.closed_loop_poles]
    assert len(listed) == len(expected)
    for re, im, multiplicity in listed:
        near = min(expected, key=lambda root: abs(root[0] - re) + abs(root[1] - im))
        expected.remove(near)
        assert near[2] == multiplicity
        assert abs(near[0] - re) + abs(near[1] - im) <= 4e-16 * abs(complex(re, im)) + 1e-30
    order = [(-re, -im) for re, im, _ in listed]
    assert order == sorted(order)


@pytest.mark.parametrize("lags", range(3, 13))
def test_equal_lags_have_their_edges_in_closed_form(lags: int) -> None:
    """(1 + jw)^n is real at w = tan(k pi/n), so K = -(-1)^k / cos(k pi/n)^n: first principles."""
    loop = Loop(polynomial(1), polynomial(*(sympy.binomial(lags, k) for k in range(lags + 1))))
    with mpmath.workdps(PRECISION):
        expected = sorted(
            -((-1) ** k) / mpmath.cos(k * mpmath.pi / lags) ** lags for k in range((lags + 1) // 2)
        )
        found = ask(loop)
        assert [edge.gain for edge in found.edges] == [float(gain) for gain in expected]
    for band, ends in zip(found.bands, band_ends(found), strict=True):
        inside = gains_inside(*ends, Fraction(1, 2))[1]
        # The roots are -1 + (-K)^(1/n): counted by their angles.
        angle = 0 if inside < 0 else 1
        radius = float(abs(inside)) ** (1 / lags)
        angles = [(2 * k + angle) * np.pi / lags for k in range(lags)]
        assert band.rhp_poles == sum(radius * np.cos(a) > 1 for a in angles)
