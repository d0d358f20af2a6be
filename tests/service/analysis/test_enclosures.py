"""Every root in a ball of its own, however close the roots lie."""

from fractions import Fraction

import pytest
from flint import acb, arb, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis import enclosures as module
from service.analysis.enclosures import Disc, enclose_roots
from service.analysis.errors import TooHard
from service.analysis.precision import working
from tests.clustered import mignotte
from tests.exact import bounds, encloses, integral
from tests.polynomials import multiply, polynomial

places = st.fractions(-4, 4, max_denominator=8)
tiny = st.integers(10, 120).map(lambda decade: Fraction(1, 10**decade))


def product_of(real: set[Fraction], pairs: set[tuple[Fraction, Fraction]]) -> fmpz_poly:
    return integral(
        multiply(
            *(polynomial(1, -x) for x in real),
            *(polynomial(1, -2 * x, x * x + y * y) for x, y in pairs),
        )
    )


def check_one_ball_each(
    balls: list[acb], real: set[Fraction], pairs: set[tuple[Fraction, Fraction]], bits: int
) -> None:
    """Hold every ball against the roots it should enclose."""
    roots = [(x, Fraction(0)) for x in real] + [(x, s * y) for x, y in pairs for s in (1, -1)]
    inside = [[i for i, root in enumerate(roots) if encloses(ball, *root)] for ball in balls]
    assert sorted(inside) == [[i] for i in range(len(roots))]
    assert sum(ball.imag.is_zero() for ball in balls) == len(real)
    with working(bits + 64):
        assert all(ball.rad() * 2 ** (bits - 1) < abs(ball) for ball in balls)


@given(
    real=st.sets(places.filter(bool), max_size=3),
    pairs=st.sets(st.tuples(places, places.filter(lambda y: y > 0)), max_size=2),
    bits=st.integers(8, 400),
)
@settings(max_examples=40)
def test_chosen_roots_are_enclosed_one_by_one(
    real: set[Fraction], pairs: set[tuple[Fraction, Fraction]], bits: int
) -> None:
    if real or pairs:
        check_one_ball_each(enclose_roots(product_of(real, pairs), bits), real, pairs, bits)


@given(
    at=st.tuples(places.filter(bool), places.filter(lambda y: y > 0)),
    steps=st.sets(st.integers(0, 6), min_size=2, max_size=4),
    e=tiny,
)
@settings(max_examples=25)
def test_clusters_of_pairs_are_enclosed_one_by_one(
    at: tuple[Fraction, Fraction], steps: set[int], e: Fraction
) -> None:
    pairs = {(at[0] + k * e, at[1] + k * k * e) for k in steps}
    check_one_ball_each(enclose_roots(product_of(set(), pairs), 40), set(), pairs, 40)


@given(x=places.filter(bool), steps=st.sets(st.integers(-4, 4), min_size=1, max_size=4), e=tiny)
@settings(max_examples=25)
def test_real_roots_are_told_from_pairs_that_hug_the_axis(x: Fraction, steps: set[int], e: Fraction) -> None:
    """Beside real roots a pair whose imaginary part is as small as the gaps between them."""
    real = {x + k * e for k in steps}
    pairs = {(x + e / 3, e / 5)}
    check_one_ball_each(enclose_roots(product_of(real, pairs), 40), real, pairs, 40)


@pytest.mark.parametrize("n", [3, 8, 15, 22, 30])
def test_mignotte_roots_are_all_enclosed(n: int) -> None:
    """Three are positive; for even n one more is negative, and the others come in conjugate pairs."""
    balls = enclose_roots(integral(mignotte(n)), 64)
    assert len(balls) == n
    real = [ball for ball in balls if ball.imag.is_zero()]
    assert [len([b for b in real if b.real > 0]), len([b for b in real if b.real < 0])] == [
        3,
        1 - n % 2,
    ]
    upper = [ball for ball in balls if ball.imag > 0]
    assert 2 * len(upper) + len(real) == n
    assert not any(one.overlaps(other) for i, one in enumerate(balls) for other in balls[:i])


def test_a_ball_and_its_conjugate_mirror_each_other_exactly() -> None:
    upper, lower = sorted(enclose_roots(fmpz_poly([3, 1, 1]), 60), key=lambda ball: -float(ball.imag))
    assert bounds(upper.real) == bounds(lower.real)
    assert bounds(upper.imag) == tuple(-end for end in reversed(bounds(lower.imag)))


def test_roots_that_no_precision_tells_apart_are_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "_HIGHEST_BITS", 512)
    p = product_of({Fraction(1), 1 + Fraction(1, 10**600)}, set())
    with pytest.raises(TooHard, match=r"lie so close together that \d+ bits do not tell them apart"):
        enclose_roots(p, 40)


@pytest.mark.parametrize("centres", [(acb(2),), (acb(2, 1), acb(2, -1))], ids=["on the real axis", "off it"])
def test_a_disc_off_the_real_axis_stands_for_its_mirror_image_too(centres: tuple[acb, ...]) -> None:
    disc = Disc(centres[0], arb(2) ** -20)
    assert disc.images() == centres
    balls = list(disc.balls())
    assert [ball.contains(z) for ball, z in zip(balls, centres, strict=True)] == [True] * len(centres)
    assert all(ball.real.rad() >= arb(2) ** -20 for ball in balls)


@pytest.mark.parametrize(
    ("radius", "settled"),
    [(arb(2) ** -11, True), (arb(2) ** -8, False), (arb.pos_inf(), False)],
    ids=["small", "wide", "unbounded"],
)
def test_a_disc_is_settled_by_its_size_as_seen_from_the_origin(radius: arb, settled: bool) -> None:  # noqa: FBT001
    assert Disc(acb(1, 1), radius).settled(10) is settled
