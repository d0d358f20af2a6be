"""Guesses are near the roots where floating point can find them, and none where it cannot."""

import numpy as np
import pytest
from flint import acb, arb, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis.guesses import companion_roots, exactly, guess_roots
from service.analysis.precision import working

scales = st.integers(-1500, 1500)


@given(ones=st.sets(st.integers(1, 9), min_size=1, max_size=4), scale=scales)
@settings(max_examples=50)
def test_real_guesses_are_near_the_roots_at_any_scale(ones: set[int], scale: int) -> None:
    """The polynomial of 2^scale times these integers, far outside the range of doubles."""
    p = fmpz_poly([1])
    for root in ones:
        p *= fmpz_poly([-root << scale, 1] if scale >= 0 else [-root, 1 << -scale])
    found = guess_roots(p)
    assert all(u.imag == 0 for u, _ in found)
    levelled = sorted(u.real * 2.0 ** (exponent - scale) for u, exponent in found)
    assert levelled == pytest.approx(sorted(ones), rel=1e-6)


def test_complex_guesses_come_in_conjugate_pairs() -> None:
    found = guess_roots(fmpz_poly([5, -4, 1]) * fmpz_poly([3, 1]))
    values = sorted((u * 2.0**exponent for u, exponent in found), key=lambda u: (u.real, u.imag))
    assert values == pytest.approx([-3, 2 - 1j, 2 + 1j])


def test_where_doubles_do_not_reach_guesses_lie_on_circles_of_the_right_size() -> None:
    """x^4 - 2^3000 x^2 + 1: two roots of size 2^1500, two of size 2^-1500."""
    found = guess_roots(fmpz_poly([1, 0, -(1 << 3000), 0, 1]))
    assert sorted(exponent for _, exponent in found) == [-1500, -1500, 1500, 1500]
    assert [abs(u) for u, _ in found] == pytest.approx([1] * 4)


@pytest.mark.parametrize(
    "coefficients",
    [
        pytest.param([1.0, 0.0], id="the last has vanished"),
        pytest.param([1e308, 1.0, 1e-308], id="the ratio overflows"),
        pytest.param([float("inf"), 1.0], id="not finite"),
    ],
)
def test_nothing_is_guessed_where_doubles_do_not_reach(coefficients: list[float]) -> None:
    with np.errstate(all="ignore"):
        assert companion_roots(coefficients).size == 0


def test_the_companion_matrix_takes_complex_coefficients() -> None:
    """(u - j)(u - 2) = u^2 - (2 + j) u + 2j."""
    found = sorted(companion_roots([2j, -2 - 1j, 1 + 0j]), key=abs)
    assert found == pytest.approx([1j, 2])


def test_a_guess_becomes_exact() -> None:
    with working(64):
        z = exactly(0.75 - 3j, -2000)
        assert z == acb(arb(3), arb(-12)) * arb(2) ** -2002
        assert z.is_exact()
