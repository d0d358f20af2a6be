"""What the answer says of exact values: nearest doubles, 30 digits, exact forms."""

from fractions import Fraction
from math import pi, sqrt

import pytest
from flint import fmpq, fmpz_poly
from hypothesis import given
from hypothesis import strategies as st

from service.analysis.answer import AxisPole, Frequency
from service.analysis.edges import INFINITY, ORIGIN
from service.analysis.errors import OutOfRange
from service.analysis.gains import Gain, GainMap
from service.analysis.roots import isolate_positive
from service.analysis.survey import Survey, survey
from service.analysis.writing import (
    frequency,
    gain_double,
    gain_exact,
    ratio_double,
    write_bands,
    write_edges,
    write_open_loop,
)
from tests.exact import exact_loop, rational
from tests.oracle import Loop
from tests.polynomials import Polynomial, multiply, polynomial, power

P = polynomial
positives = st.fractions(Fraction(1, 1000), 1000, max_denominator=1000)


def surveyed(numerator: Polynomial, denominator: Polynomial, *window: int) -> Survey:
    limits = (fmpq(window[0]), fmpq(window[1])) if window else None
    return survey(exact_loop(Loop(numerator, denominator)), "right", limits)


def gain_at(f: fmpz_poly, top: fmpz_poly) -> Gain:
    gains = GainMap(f, top, fmpz_poly([1]))
    (root,) = isolate_positive(f)
    return Gain((gains, root))


SQRT2 = gain_at(fmpz_poly([-2, 0, 1]), fmpz_poly([0, -1]))
MINUS_SQRT2 = gain_at(fmpz_poly([-2, 0, 1]), fmpz_poly([0, 1]))
ONE_MORE = gain_at(fmpz_poly([-2, 0, 1]), fmpz_poly([-1, -1]))


@pytest.mark.parametrize(
    ("gain", "value", "exact"),
    [
        pytest.param(Gain(fmpq(8, 55)), 8 / 55, "8/55", id="fraction"),
        pytest.param(Gain(fmpq(-3)), -3.0, "-3", id="whole"),
        pytest.param(Gain(fmpq(0)), 0.0, "0", id="zero"),
        pytest.param(SQRT2, sqrt(2), "sqrt(2)", id="root of a number"),
        pytest.param(MINUS_SQRT2, -sqrt(2), "-sqrt(2)", id="the negative one"),
        pytest.param(ONE_MORE, 1 + sqrt(2), None, id="neither"),
    ],
)
def test_a_gain_is_written_with_its_exact_form(gain: Gain, value: float, exact: str | None) -> None:
    assert gain_double(gain) == value
    assert gain_exact(gain) == exact


@pytest.mark.parametrize(
    ("end", "gain", "ratio"),
    [(Gain(fmpq(8)), fmpq(3), 8 / 3), (SQRT2, fmpq(-2), -sqrt(2) / 2), (SQRT2, fmpq(1, 2), 2 * sqrt(2))],
    ids=["rational", "irrational", "irrational, exact power of two"],
)
def test_a_ratio_is_that_of_the_exact_values(end: Gain, gain: fmpq, ratio: float) -> None:
    assert ratio_double(end, gain) == ratio


@given(w=positives)
def test_a_rational_frequency_is_exact(w: Fraction) -> None:
    (root,) = isolate_positive(fmpz_poly([-(w.numerator**2), w.denominator**2]))
    written = frequency(root)
    assert (written.rad_per_s, written.exact) == (float(w), str(w))
    assert written.hz == pytest.approx(float(w) / (2 * pi), rel=3e-16)


def test_the_square_root_of_a_fraction_is_written_so() -> None:
    (root,) = isolate_positive(fmpz_poly([-48, 11]))
    assert frequency(root) == Frequency(2.088931871468374, 0.3324638331263955, "sqrt(48/11)")


def test_any_other_frequency_has_no_exact_form() -> None:
    _, root = isolate_positive(fmpz_poly([5, -5, 1]))
    assert frequency(root) == Frequency(sqrt((5 + sqrt(5)) / 2), frequency(root).hz, None)


def test_origin_and_infinity_are_places_too() -> None:
    assert frequency(ORIGIN) == Frequency(0.0, 0.0, "0")
    assert frequency(INFINITY) == Frequency(None, None, None)


def test_edges_are_written_in_order_with_their_frequencies() -> None:
    (first, second) = write_edges(surveyed(P("2.5", 10), P(1, "1/3", 4, 0)))
    assert (first.gain, first.decimal, first.exact, first.causes) == (0.0, "0", "0", ("open_loop",))
    assert second.gain == 0.14545454545454545
    assert second.decimal == "0.145454545454545454545454545455"
    assert second.causes == ("crossing",)
    assert second.frequencies == (Frequency(2.088931871468374, 0.3324638331263955, "sqrt(48/11)"),)


@pytest.mark.parametrize(
    ("numerator", "denominator", "equal"),
    [
        pytest.param(P(1, 1, 1), P(1, 2, 1, 1, 0), [False, True], id="a touch"),
        pytest.param(P(1), P(1, 3, 3, 1), [False, False], id="crossings"),
        pytest.param(P(1), P(1, 0, 1), [False, True], id="zero inside a lossless band"),
    ],
)
def test_edges_tell_whether_the_counts_beside_them_are_equal(
    numerator: Polynomial, denominator: Polynomial, equal: list[bool]
) -> None:
    assert [edge.counts_equal for edge in write_edges(surveyed(numerator, denominator))] == equal


def test_edges_of_one_double_differ_in_their_decimals() -> None:
    """The touch moved apart by 2e-20: three edges, two of them 1.0."""
    written = write_edges(surveyed(P(1, 1, 1), P(1, 2, 1, 1 + Fraction(1, 10**20), 0)))
    near = [edge for edge in written if edge.gain == 1.0]
    assert len(near) == 2
    assert near[0].decimal != near[1].decimal
    assert near[0].exact != near[1].exact


def test_bands_end_at_the_window() -> None:
    bands = write_bands(surveyed(P(1), P(1, 3, 3, 1), 0, 10))
    assert [(band.lower, band.upper, band.verdict) for band in bands] == [
        (0.0, 8.0, "stable"),
        (8.0, 10.0, "unstable"),
    ]


def test_outer_bands_are_unbounded_without_one() -> None:
    bands = write_bands(surveyed(P(1), P(1, 3, 3, 1)))
    assert [(band.lower, band.upper) for band in bands] == [(None, -1.0), (-1.0, 8.0), (8.0, None)]


def test_the_open_loop_is_that_of_the_denominator_as_sent() -> None:
    """Hidden axis poles are listed with the others, by frequency."""
    pair = P(1, 0, 4)
    loop = write_open_loop(surveyed(pair, multiply(power(pair, 2), P(1, 0), P(1, -1))))
    assert loop.axis_poles == (AxisPole(0.0, 0.0, "0", 1), AxisPole(2.0, 1 / pi, "2", 2))
    assert (loop.rhp_poles, loop.enclosed_poles) == (1, 1)
    assert [mode.polynomial for mode in loop.hidden_modes] == [("1", "0", "4")]


@pytest.mark.parametrize("decade", [400, -400])
def test_an_edge_beyond_the_doubles_is_refused(decade: int) -> None:
    lead = rational(Fraction(10) ** decade)
    with pytest.raises(OutOfRange, match=rf"near -1E[+]?{decade} lies beyond the range"):
        write_edges(surveyed(P(1), P(1, Fraction(int(lead.numer()), int(lead.denom())))))
