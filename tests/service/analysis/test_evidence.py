"""The evidence: the form of its intervals, and that they prove what they are there for."""

from fractions import Fraction
from itertools import pairwise

import pytest
from flint import fmpq
from hypothesis import given, settings

from service.analysis.answer import Edge, Evidence
from service.analysis.evidence import gather
from service.analysis.survey import survey
from tests.asking import ask
from tests.exact import exact_loop
from tests.oracle import Loop, is_lossless, real_roots
from tests.polynomials import Polynomial, evaluate, multiply, parts, polynomial, power, trimmed
from tests.strategies import FAMILIES, any_loops, folded

P = polynomial
Interval = tuple[Fraction, Fraction]


def evidence(loop: Loop) -> tuple[tuple[Edge, ...], Evidence]:
    found = ask(loop, evidence=True)
    assert found.evidence is not None
    return found.edges, found.evidence


def read(interval: tuple[str, str]) -> Interval:
    return Fraction(interval[0]), Fraction(interval[1])


def is_power_of_two(value: int) -> bool:
    return value & (value - 1) == 0


def significant_bits(interval: Interval) -> int | None:
    """Give the bits b of [m/2^k, (m+1)/2^k] with 2^b <= |m| < 2^(b+1) towards zero; None for another form."""
    low, high = interval
    unit = high - low
    if unit <= 0 or not is_power_of_two(unit.denominator) or not is_power_of_two(unit.numerator):
        return None
    near = low / unit if low >= 0 else -high / unit
    return near.numerator.bit_length() - 1 if near.denominator == 1 else None


@given(loop=any_loops)
@settings(max_examples=80)
def test_intervals_are_points_or_dyadic_cells_of_the_first_bits_or_doublings_of_them(loop: Loop) -> None:
    edges, found = evidence(loop)
    for edge, shown in zip(edges, found.edges, strict=True):
        gain = read(shown.gain_between)
        assert (gain[0] == gain[1]) == (edge.exact is not None and "sqrt" not in edge.exact)
        for interval, first in [
            (gain, 64),
            *((read(square), 192) for square in shown.omega_squared_between if square),
        ]:
            if interval[0] != interval[1]:
                bits = significant_bits(interval)
                assert bits is not None
                assert bits % first == 0
                assert is_power_of_two(bits // first)


@given(loop=any_loops)
@settings(max_examples=60)
def test_squared_frequencies_stand_in_the_order_of_the_edge_s(loop: Loop) -> None:
    edges, found = evidence(loop)
    for edge, shown in zip(edges, found.edges, strict=True):
        for frequency, square in zip(edge.frequencies, shown.omega_squared_between, strict=True):
            if frequency.rad_per_s is None:
                assert square is None
            else:
                assert square is not None
                assert (square == ("0", "0")) == (frequency.rad_per_s == 0)
                low, high = read(square)
                near = Fraction(frequency.rad_per_s) ** 2
                assert low * (1 - Fraction(1, 2**51)) <= near <= high * (1 + Fraction(1, 2**51))


@given(loop=any_loops)
@settings(max_examples=60)
def test_intervals_of_one_kind_are_disjoint(loop: Loop) -> None:
    _, found = evidence(loop)
    gains = [read(shown.gain_between) for shown in found.edges]
    squares = sorted({read(s) for shown in found.edges for s in shown.omega_squared_between if s})
    for intervals in (gains, squares):
        assert all(one[1] < other[0] for one, other in pairwise(intervals))


def axis_parts(p: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Give E(x) and O(x) of p(jw) = E + jw O."""

    def alternated(q: Polynomial) -> Polynomial:
        return trimmed([c * (-1) ** (len(q) - 1 - i) for i, c in enumerate(q)])

    even, odd = parts(p)
    return alternated(even), alternated(odd)


def over(p: Polynomial, x: Interval) -> Interval:
    """Bound p over an interval of positive x, power by power."""
    low = high = Fraction(0)
    for i, c in enumerate(p):
        ends = [c * x[0] ** (len(p) - 1 - i), c * x[1] ** (len(p) - 1 - i)]
        low, high = low + min(ends), high + max(ends)
    return low, high


@given(loop=FAMILIES["plain"] | FAMILIES["poles_on_the_axis"] | FAMILIES["barely_damped"])
@settings(max_examples=60)
def test_interval_arithmetic_puts_an_irrational_gain_into_its_interval(loop: Loop) -> None:
    """K = -(De Ne + x Do No)/(Ne^2 + x No^2), over the interval of x, with every power of x taken apart."""
    (ne, no), (de, do) = axis_parts(loop.numerator), axis_parts(loop.denominator)
    top = add_up(multiply(de, ne), (*multiply(do, no), Fraction(0)))
    bottom = add_up(multiply(ne, ne), (*multiply(no, no), Fraction(0)))
    for shown in evidence(loop)[1].edges:
        gain = read(shown.gain_between)
        if gain[0] != gain[1] and len(shown.omega_squared_between) == 1:
            (square,) = shown.omega_squared_between
            assert square is not None
            above, below = over(top, read(square)), over(bottom, read(square))
            assert below[0] > 0
            quotients = [-a / b for a in above for b in below]
            assert gain[0] < min(quotients) <= max(quotients) < gain[1]


def add_up(p: Polynomial, q: Polynomial) -> Polynomial:
    size = max(len(p), len(q))
    padded = [(Fraction(0),) * (size - len(r)) + tuple(r) for r in (p, q)]
    return trimmed([a + b for a, b in zip(*padded, strict=True)])


@given(loop=any_loops)
@settings(max_examples=40)
def test_samples_are_gains_of_their_bands(loop: Loop) -> None:
    _, found = evidence(loop)
    gains = [read(shown.gain_between) for shown in found.edges]
    for i, band in enumerate(found.bands):
        assert band.sample_gain is not None
        sample = Fraction(band.sample_gain)
        assert i == 0 or gains[i - 1][1] < sample
        assert i == len(gains) or sample < gains[i][0]


def test_an_empty_band_has_no_sample() -> None:
    """The window ends on the edge: nothing of the band beyond is reported."""
    found = survey(exact_loop(Loop(P(1), P(1, 3, 3, 1))), "right", (fmpq(0), fmpq(8)))
    assert [band.sample_gain for band in gather(found).bands] == ["1", None]


@pytest.mark.parametrize(
    ("numerator", "denominator", "polynomials"),
    [
        pytest.param(P(1), P(1, 3, 3, 1), [None], id="one rational frequency each"),
        pytest.param(P(1, 2), P(1, 1, 5, 5, 3, 2), [("1", "-1")], id="two frequencies"),
        pytest.param(P(1, 1), P(1, 0, 5, 0, 5), [("1", "0")], id="irrational frequencies at zero"),
    ],
)
def test_a_gain_polynomial_is_given_where_intervals_alone_prove_nothing(
    numerator: Polynomial, denominator: Polynomial, polynomials: list[tuple[str, ...] | None]
) -> None:
    _, found = evidence(Loop(numerator, denominator))
    shown = [edge.gain_polynomial for edge in found.edges]
    assert [polynomial for polynomial in polynomials if polynomial not in shown] == []
    assert all(
        (edge.gain_polynomial is not None) == (len(edge.omega_squared_between) > 1) for edge in found.edges
    )


@pytest.mark.parametrize("lags", [3, 4, 5])
def test_a_gain_polynomial_has_exactly_one_root_in_the_interval(lags: int) -> None:
    """With s + 1/s for s in 1/(s + 1)^n every frequency is doubled."""
    loop = Loop(folded(P(1), Fraction(1), lags), folded(power(P(1, 1), lags), Fraction(1), lags))
    _, found = evidence(loop)
    shown = [edge for edge in found.edges if edge.gain_polynomial is not None]
    assert shown
    for edge in shown:
        assert edge.gain_polynomial is not None
        p = P(*edge.gain_polynomial)
        low, high = read(edge.gain_between)
        assert evaluate(p, low) * evaluate(p, high) < 0 or evaluate(p, low) == 0 == high - low
        roots = real_roots(p, Fraction(1, 10**60))
        assert len([ends for ends in roots if ends[1] >= low and ends[0] <= high]) == 1
        assert all(Fraction(c).denominator == 1 for c in edge.gain_polynomial)


def test_an_irrational_frequency_under_a_rational_gain_has_a_gain_polynomial() -> None:
    """s^4 + s^3 + 4 s^2 + ... closed at K = 1 has the factor s^4 + 4 s^2 + 2, which is irreducible."""
    closed = multiply(P(1, 0, 4, 0, 2), P(1, 1))
    numerator = P(1, 3)
    loop = Loop(numerator, add_up(closed, P(-1, -3)))
    edges, found = evidence(loop)
    (shown,) = [e for edge, e in zip(edges, found.edges, strict=True) if edge.exact == "1"]
    assert shown.gain_polynomial == ("1", "-1")
    assert len(shown.omega_squared_between) == 2
    for square in shown.omega_squared_between:
        assert square is not None
        low, high = read(square)
        assert evaluate(P(1, -4, 2), low) * evaluate(P(1, -4, 2), high) < 0


@given(loop=FAMILIES["lossless"].filter(is_lossless))
@settings(max_examples=30)
def test_lossless_loops_have_evidence_of_the_same_form(loop: Loop) -> None:
    edges, found = evidence(loop)
    assert len(found.edges) == len(edges)
    assert len(found.bands) == len(edges) + 1
    for edge, shown in zip(edges, found.edges, strict=True):
        assert len(shown.omega_squared_between) == len(edge.frequencies)
