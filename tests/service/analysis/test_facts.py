"""Facts of the trade the engine must bear out. Common practice, no source, unless a test names one."""

from fractions import Fraction
from typing import Any, Literal

import pytest

from tests.asking import ask, band_ends, edge_gain, gains_inside
from tests.contour import (
    clockwise_encirclements,
    clockwise_turn,
    closing_arc,
    contour,
    curve,
    image,
    ray_crossings,
)
from tests.oracle import Loop, is_lossless
from tests.polynomials import multiply, polynomial, power

Side = Literal["right", "left"]

P = polynomial
LAGS = {n: Loop(P(1), power(P(1, 1), n)) for n in (1, 2, 3, 4, 5)}
INTEGRATORS = {m: Loop(P(1), power(P(1, 0), m)) for m in (1, 2, 3, 4, 5)}

WELL_SEPARATED = {
    "lag": LAGS[1],
    "three lags": LAGS[3],
    "five lags": LAGS[5],
    "integrator": INTEGRATORS[1],
    "double integrator with lead": Loop(P(1, 1), P(1, 0, 0)),
    "double integrator with lag": Loop(P(1), P(1, 1, 0, 0)),
    "triple integrator with leads": Loop(P(1, 2, 1), P(1, 0, 0, 0)),
    "integrator and lags": Loop(P(1), P(1, 3, 2, 0)),
    "integrator and resonance": Loop(P(1), P(1, 0, 1, 0)),
    "resonance with zero at the origin": Loop(P(1, 0), P(1, 0, 1)),
    "two resonances": Loop(P(1, 1), multiply(P(1, 0, 1), P(1, 0, 4))),
    "double resonance": Loop(P(1, 2), power(P(1, 0, 1), 2)),
    "unstable lag": Loop(P(2), P(1, -1)),
    "unstable pole beside an integrator": Loop(P(1, 1), P(1, -1, 0)),
    "unstable pair": Loop(P(1, 1), P(1, -1, 2)),
    "zeros on the axis": Loop(P(1, 0, 1), P(1, 3, 2, 0)),
    "zero at the origin": Loop(P(1, 0, 0), P(1, 3, 3, 1)),
    "all-pass": Loop(P(1, -1), P(1, 1)),
    "biproper": Loop(P(1, -2, 2), P(1, 2, 2)),
    "differentiator": Loop(P(1, 0), P(1)),
    "improper by two": Loop(P(1, 1, 3, 2), P(1, 4)),
    "improper by three": Loop(P(1, 0, 0, 0, 0), P(1, 1)),
    "improper with integrator": Loop(P(1, 2, 3), P(1, 0)),
    "touch": Loop(P(1, 1, 1), P(1, 2, 1, 1, 0)),
    "stable in a window": Loop(P(1, 1), P(1, 3, 12, -16, 0)),
    "negative lead": Loop(P(-1, -2), P(1, 1, 5, 0)),
}

well_separated = pytest.mark.parametrize("loop", WELL_SEPARATED.values(), ids=WELL_SEPARATED)
both_sides = pytest.mark.parametrize("side", ["right", "left"])


def encirclements(loop: Loop, **fields: Any) -> list[int | None]:
    return [band.clockwise_encirclements for band in ask(loop, **fields).bands]


def drawable_gains(loop: Loop, side: Side) -> list[tuple[float, int | None]]:
    """Give a gain well inside each band, with the engine's encirclements there."""
    found = ask(loop, detour=side)
    return [
        (float(gains_inside(*ends, Fraction(5, 7))[1]), band.clockwise_encirclements)
        for band, ends in zip(found.bands, band_ends(found), strict=True)
    ]


@well_separated
@both_sides
def test_encirclements_are_those_of_the_drawn_contour(loop: Loop, side: Side) -> None:
    for gain, expected in drawable_gains(loop, side):
        assert expected is not None
        assert clockwise_encirclements(loop, gain, side) == pytest.approx(expected, abs=1e-6)


@well_separated
@both_sides
@pytest.mark.parametrize("direction", [0.3, 2.0, 4.4])
def test_signed_crossings_of_any_ray_count_the_encirclements(
    loop: Loop, side: Side, direction: float
) -> None:
    for gain, expected in drawable_gains(loop, side):
        assert ray_crossings(loop, gain, direction, side) == expected


@pytest.mark.parametrize("multiplicity", INTEGRATORS)
def test_a_detour_turns_the_image_by_half_a_turn_for_each_pole(multiplicity: int) -> None:
    """Clockwise when it passes on the right, anticlockwise when it passes on the left."""
    loop = INTEGRATORS[multiplicity]
    for side, sense in (("right", 1), ("left", -1)):
        _, detour, *_ = contour(loop, "right" if side == "right" else "left")
        assert clockwise_turn(image(loop, detour, 0)) == pytest.approx(sense * multiplicity / 2)


@pytest.mark.parametrize("multiplicity", INTEGRATORS)
def test_passing_integrators_on_the_other_side_costs_a_turn_for_each(multiplicity: int) -> None:
    loop = INTEGRATORS[multiplicity]
    for right, left in zip(encirclements(loop), encirclements(loop, detour="left"), strict=True):
        assert left == (None if right is None else right - multiplicity)


def test_half_a_turn_at_infinity_encircles_the_side_it_sweeps() -> None:
    """1/s: on the right the arc sweeps the right half plane clockwise, where -1/K lies for K < 0."""
    assert encirclements(INTEGRATORS[1]) == [1, 0]
    assert encirclements(INTEGRATORS[1], detour="left") == [0, -1]


def test_a_pole_pair_on_the_axis_makes_an_arc_at_either_frequency() -> None:
    """s/(s^2 + 1): both arcs sweep the right half plane, twice round -1/K for K < 0."""
    assert encirclements(Loop(P(1, 0), P(1, 0, 1))) == [2, 0]


@pytest.mark.parametrize(
    "name", ["three lags", "integrator and lags", "unstable pair", "two resonances", "zero at the origin"]
)
def test_a_strictly_proper_loop_ends_at_the_origin(name: str) -> None:
    """Its closing arc is a point, so nothing happens to -1/K there and no edge is at infinity."""
    loop = WELL_SEPARATED[name]
    assert max(abs(point) for point in image(loop, closing_arc, -1e6)) < 2e-3
    assert all("infinity" not in edge.causes for edge in ask(loop).edges)


def test_a_biproper_loop_ends_at_its_gain_at_infinity() -> None:
    loop = Loop(P(3, 1), P(2, 5))
    assert all(abs(point - 1.5) < 1e-2 for point in image(loop, closing_arc, 0))
    (at_infinity,) = [edge for edge in ask(loop).edges if "infinity" in edge.causes]
    assert edge_gain(at_infinity) == -1 / Fraction(3, 2)


@pytest.mark.parametrize(
    ("excess", "name"), [(1, "differentiator"), (2, "improper by two"), (3, "improper by three")]
)
def test_an_improper_loop_closes_with_half_a_clockwise_turn_for_each_excess_zero(
    excess: int, name: str
) -> None:
    turn = clockwise_turn(image(WELL_SEPARATED[name], closing_arc, 0))
    assert turn == pytest.approx(excess / 2, abs=1e-2)


@well_separated
def test_arrows_do_not_reverse_at_zero_or_at_infinity(loop: Loop) -> None:
    """The half for negative frequencies mirrors the other and runs the other way: both turn alike.

    So each half contributes the same angle, and N is twice that of the upper half; reversed arrows on one
    half would make every count zero.
    """
    for gain, expected in drawable_gains(loop, "right"):
        pieces = contour(loop, "right")
        about = complex(-1 / gain)

        def turned(low: float, high: float, piece: Any, about: complex = about) -> float:
            return clockwise_turn(image(loop, lambda t: piece(low + (high - low) * t), about), about)

        middle = len(pieces[:-1]) // 2
        lower = sum(turned(0, 1, piece) for piece in pieces[:middle]) + turned(0, 0.5, pieces[middle])
        upper = sum(turned(0, 1, piece) for piece in pieces[middle + 1 : -1]) + turned(0.5, 1, pieces[middle])
        first, second = turned(0, 0.5, closing_arc), turned(0.5, 1, closing_arc)
        assert lower == pytest.approx(upper, abs=1e-6)
        assert first == pytest.approx(second, abs=1e-6)
        assert 2 * (upper + first) == pytest.approx(expected, abs=1e-6)


def test_the_curve_crosses_the_real_axis_at_right_angles_at_zero_frequency() -> None:
    step = 1e-6
    for loop in LAGS.values():
        along = (curve(loop, 1j * step) - curve(loop, -1j * step)) / (2 * step)
        assert abs(along.real) < 1e-8 < abs(along.imag)


def test_the_point_one_stands_for_gain_minus_one() -> None:
    """-1/K = 1 means K = -1: the lag starts at 1, and its pole passes the origin at that gain."""
    assert curve(LAGS[1], 0) == 1
    (edge,) = ask(LAGS[1]).edges
    assert (edge.exact, edge.causes) == ("-1", ("origin",))


@pytest.mark.parametrize(
    ("name", "point"), [("three lags", -0.125), ("integrator and lags", Fraction(-1, 6))]
)
def test_the_curve_meets_the_point_minus_one_over_k(name: str, point: float | Fraction) -> None:
    """The edge's frequency on the curve gives back -1/K."""
    loop = WELL_SEPARATED[name]
    (edge,) = [edge for edge in ask(loop).edges if edge.causes == ("crossing",)]
    (frequency,) = edge.frequencies
    assert frequency.rad_per_s is not None
    assert curve(loop, 1j * frequency.rad_per_s) == pytest.approx(float(point))
    assert -1 / edge_gain(edge) == point


def test_one_excess_pole_and_zeros_on_the_left_bear_any_high_gain() -> None:
    """The paths end in the zeros but for one, which runs out to the left."""
    for loop in (Loop(P(1, 3), P(1, -2, 5)), Loop(P(1, 4, 5), P(1, -1, 2, 0)), LAGS[1]):
        assert ask(loop).bands[-1].verdict == "stable"


def test_three_excess_poles_or_more_go_unstable_at_high_gain() -> None:
    """At least two of the paths to infinity lead to the right."""
    for loop in (LAGS[3], LAGS[4], LAGS[5], WELL_SEPARATED["integrator and lags"]):
        assert ask(loop).bands[-1].verdict == "unstable"


def test_lossless_loops_lie_on_the_ruler() -> None:
    """An even loop's image is real: on the bands it covers no winding number exists."""
    for loop in (INTEGRATORS[2], INTEGRATORS[4], Loop(P(1), P(1, 0, 1)), Loop(P(1), P(1, 0, -9))):
        assert is_lossless(loop)
        found = ask(loop).bands
        assert [band.clockwise_encirclements is None for band in found] == [
            band.axis_poles > 0 for band in found
        ]
