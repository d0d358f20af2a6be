"""What must not change, or change in a known way, when the same loop is put differently."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from service.analysis import answer
from service.analysis.answer import Answer
from service.analysis.question import ComplexRoot, PolynomialBlock, Question, RootBlock
from tests.asking import ask, edge_gain, is_rational
from tests.oracle import Loop, counts, is_lossless, reduced
from tests.polynomials import Polynomial, multiply, polynomial, scaled, stretched
from tests.strategies import any_loops, decades, feedbacks, mirrored, non_zeros, positives

roots = st.one_of(
    st.fractions(-9, 9, max_denominator=5),
    st.builds(ComplexRoot, st.fractions(-3, 3, max_denominator=4), positives),
)


def shape(found: Answer) -> list[tuple[object, ...]]:
    """What no scaling may change: counts and encirclements of the bands, causes of the edges."""
    bands = [(b.verdict, b.rhp_poles, b.axis_poles, b.clockwise_encirclements) for b in found.bands]
    edges = [(e.causes, e.counts_equal, len(e.frequencies)) for e in found.edges]
    return [*bands, *edges]


def close(gain: Fraction, expected: Fraction) -> bool:
    """Tell whether two gains agree to the 30 digits an irrational one is given with."""
    return abs(gain - expected) <= abs(expected) * Fraction(1, 10**29)


@given(loop=any_loops)
def test_positive_feedback_mirrors_the_gain_axis(loop: Loop) -> None:
    negative, positive = ask(loop), ask(loop, feedback="positive")
    mirrored_edges = [replace(e, gain=-e.gain if e.gain else 0.0) for e in reversed(negative.edges)]
    assert [(e.gain, e.causes, e.frequencies) for e in positive.edges] == [
        (e.gain, e.causes, e.frequencies) for e in mirrored_edges
    ]
    assert [(b.verdict, b.rhp_poles, b.axis_poles, b.clockwise_encirclements) for b in positive.bands] == [
        (b.verdict, b.rhp_poles, b.axis_poles, b.clockwise_encirclements) for b in reversed(negative.bands)
    ]
    assert positive.open_loop == negative.open_loop


@given(loop=any_loops, factor=non_zeros, feedback=feedbacks)
def test_a_common_factor_changes_nothing_but_the_echo(loop: Loop, factor: Fraction, feedback: str) -> None:
    found = ask(loop, feedback=feedback, gain=factor)
    other = ask(
        Loop(scaled(loop.numerator, factor), scaled(loop.denominator, factor)), feedback=feedback, gain=factor
    )
    assert replace(other, loop=found.loop) == found


@given(loop=any_loops, factor=st.one_of(positives, decades))
def test_a_gain_in_the_loop_divides_the_edges(loop: Loop, factor: Fraction) -> None:
    found = ask(loop)
    louder = ask(Loop(scaled(loop.numerator, factor), loop.denominator))
    assert shape(louder) == shape(found)
    for edge, moved in zip(found.edges, louder.edges, strict=True):
        assert close(edge_gain(moved), edge_gain(edge) / factor)
        assert is_rational(moved) == is_rational(edge)
        assert moved.frequencies == edge.frequencies


@given(loop=any_loops, sign=st.just(Fraction(-1)))
def test_a_reversed_loop_mirrors_the_edges(loop: Loop, sign: Fraction) -> None:
    reversed_loop = ask(Loop(scaled(loop.numerator, sign), loop.denominator))
    assert [e.gain for e in reversed_loop.edges] == [e.gain for e in ask(loop, feedback="positive").edges]


@given(loop=any_loops, exponent=st.integers(-20, 20))
def test_time_scaling_keeps_gains_and_scales_frequencies(loop: Loop, exponent: int) -> None:
    """Powers of two, so that the doubles of the frequencies scale without rounding."""
    factor = Fraction(2) ** exponent
    found = ask(loop)
    faster = ask(Loop(stretched(loop.numerator, 1 / factor), stretched(loop.denominator, 1 / factor)))
    assert shape(faster) == shape(found)
    assert [(e.gain, e.decimal, e.exact) for e in faster.edges] == [
        (e.gain, e.decimal, e.exact) for e in found.edges
    ]
    expected = [f.rad_per_s and f.rad_per_s * 2.0**exponent for e in found.edges for f in e.frequencies]
    assert [f.rad_per_s for e in faster.edges for f in e.frequencies] == expected


@given(loop=any_loops)
def test_the_detour_s_side_moves_poles_and_encirclements_alone(loop: Loop) -> None:
    right, left = ask(loop), ask(loop, detour="left")
    taken_in = counts(reduced(loop).denominator).axis if loop.numerator else 0
    assert left.open_loop.enclosed_poles == right.open_loop.enclosed_poles + taken_in
    assert left.edges == right.edges
    for one, other in zip(left.bands, right.bands, strict=True):
        n = other.clockwise_encirclements
        assert one == replace(other, clockwise_encirclements=None if n is None else n - taken_in)


@given(loop=any_loops)
def test_running_the_loop_backwards_in_time_mirrors_the_plane(loop: Loop) -> None:
    """With -s for s, roots right of the axis and left of it change places; edges stay."""
    found, backwards = ask(loop), ask(Loop(mirrored(loop.numerator), mirrored(loop.denominator)))
    assert [(e.gain, e.causes, e.frequencies) for e in backwards.edges] == [
        (e.gain, e.causes, e.frequencies) for e in found.edges
    ]
    size = max(len(loop.numerator), len(loop.denominator)) - 1
    for one, other in zip(found.bands, backwards.bands, strict=True):
        assert one.axis_poles == other.axis_poles
        assert one.rhp_poles + one.axis_poles + other.rhp_poles == size


@given(loop=any_loops, hidden=st.sampled_from([polynomial(1, 3), polynomial(1, -3), polynomial(1, 0, 7)]))
def test_a_hidden_mode_adds_its_own_roots_to_every_band(loop: Loop, hidden: Polynomial) -> None:
    if not loop.numerator or is_lossless(loop):
        return
    found = ask(loop)
    covered = ask(Loop(multiply(loop.numerator, hidden), multiply(loop.denominator, hidden)))
    added = counts(hidden)
    assert [e.gain for e in covered.edges] == [e.gain for e in found.edges]
    for one, other in zip(found.bands, covered.bands, strict=True):
        assert other.rhp_poles == one.rhp_poles + added.rhp
        assert other.axis_poles == one.axis_poles + added.axis
        assert other.clockwise_encirclements == one.clockwise_encirclements


@given(first=any_loops, second=any_loops, feedback=feedbacks)
def test_blocks_in_series_are_their_product(first: Loop, second: Loop, feedback: str) -> None:
    if len(first.denominator) + len(second.denominator) > 10:
        return
    in_series = answer(
        Question(
            (PolynomialBlock(*first), PolynomialBlock(*second)),
            feedback="positive" if feedback == "positive" else "negative",
        )
    )
    product = Loop(
        multiply(first.numerator, second.numerator), multiply(first.denominator, second.denominator)
    )
    assert in_series == ask(product, feedback=feedback)


@given(zeros=st.lists(roots, max_size=2), poles=st.lists(roots, min_size=1, max_size=3), factor=non_zeros)
def test_zeros_and_poles_are_the_polynomials_they_multiply_to(
    zeros: list[Fraction | ComplexRoot], poles: list[Fraction | ComplexRoot], factor: Fraction
) -> None:
    def expanded(of: list[Fraction | ComplexRoot]) -> Polynomial:
        return multiply(
            *(
                polynomial(1, -2 * root.re, root.re**2 + root.im**2)
                if isinstance(root, ComplexRoot)
                else polynomial(1, -root)
                for root in of
            )
        )

    by_roots = answer(Question((RootBlock(tuple(zeros), tuple(poles), factor),)))
    assert by_roots == ask(Loop(scaled(expanded(zeros), factor), expanded(poles)))


def test_leading_zeros_are_no_degree() -> None:
    zero, one, three = Fraction(0), Fraction(1), Fraction(3)
    padded = PolynomialBlock((zero, zero, one), (zero, one, three, three, one))
    assert answer(Question((padded,))) == ask(Loop(polynomial(1), polynomial(1, 3, 3, 1)))


@pytest.mark.parametrize("value", ["1", "-1/3", "1e12", "1e-12"])
def test_a_gain_of_any_size_is_echoed_exactly(value: str) -> None:
    found = ask(Loop(polynomial(1), polynomial(1, 3, 3, 1)), gain=Fraction(value))
    assert found.commissioned is not None
    assert Fraction(found.commissioned.exact) == Fraction(value)
    assert found.commissioned.gain == float(Fraction(value))
