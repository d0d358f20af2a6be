"""The exact loop: multiplied out, cancelled, echoed, and refused where it is none or too large."""

from fractions import Fraction

import pytest
from flint import fmpq, fmpz_poly
from hypothesis import given, settings
from hypothesis import strategies as st

from service.analysis.answer import HiddenMode
from service.analysis.errors import AnalysisError, InvalidLoop, TooLarge
from service.analysis.loop import AxisView, ExactLoop, build_loop, hidden_modes
from service.analysis.question import Block, ComplexRoot, Feedback, PolynomialBlock, Question, RootBlock
from tests.exact import ENOUGH_BITS, exact_loop
from tests.oracle import Loop, reduced
from tests.polynomials import Polynomial, gcd, multiply, polynomial, power, scaled
from tests.strategies import any_loops, non_zeros

P = polynomial
F = Fraction


def built(*blocks: Block, feedback: Feedback = "negative") -> ExactLoop:
    return build_loop(Question(blocks, feedback=feedback), ENOUGH_BITS)[0]


@given(loop=any_loops)
@settings(max_examples=60)
def test_nothing_is_cancelled_in_what_was_sent(loop: Loop) -> None:
    """Both polynomials are multiplied by one and the same positive number."""
    exact = exact_loop(loop)
    factor = F(int(exact.sent_denominator.leading_coefficient())) / loop.denominator[0]
    assert factor > 0
    for sent, p in ((exact.sent_numerator, loop.numerator), (exact.sent_denominator, loop.denominator)):
        assert [F(int(c)) for c in reversed(sent.coeffs())] == list(scaled(p, factor))


@given(loop=any_loops.filter(lambda loop: bool(loop.numerator)))
@settings(max_examples=60)
def test_the_pair_left_is_coprime_and_the_shared_factor_gives_back_what_was_sent(loop: Loop) -> None:
    exact = exact_loop(loop)
    assert exact.numerator.gcd(exact.denominator).degree() < 1
    assert exact.numerator * exact.shared == exact.sent_numerator
    assert exact.denominator * exact.shared == exact.sent_denominator
    assert exact.shared.degree() == len(gcd(*loop)) - 1


@given(loop=any_loops, feedback=st.sampled_from(["negative", "positive"]), gain=non_zeros)
@settings(max_examples=60)
def test_the_closed_loop_is_a_positive_multiple_of_its_polynomial(
    loop: Loop, feedback: Feedback, gain: Fraction
) -> None:
    exact = exact_loop(loop, feedback)
    closed = exact.closed_at(fmpq(gain.numerator, gain.denominator))
    sign = 1 if feedback == "negative" else -1
    at = F(7, 3)
    value = sum(c * at ** (len(loop.denominator) - 1 - i) for i, c in enumerate(loop.denominator))
    value += sign * gain * sum(c * at ** (len(loop.numerator) - 1 - i) for i, c in enumerate(loop.numerator))
    found = closed(fmpq(7, 3))
    assert (found > 0) - (found < 0) == (value > 0) - (value < 0)
    assert exact.reduced_at(fmpq(gain.numerator, gain.denominator)) * exact.shared == closed


@pytest.mark.parametrize(
    "blocks",
    [
        pytest.param((PolynomialBlock((F(3), F(6)), (F(1), F(6), F(13), F(0))),), id="one block"),
        pytest.param(
            (PolynomialBlock((F(3),), (F(1), F(0))), PolynomialBlock((F(1), F(2)), (F(1), F(6), F(13)))),
            id="polynomials in series",
        ),
        pytest.param((RootBlock((F(-2),), (F(0), ComplexRoot(F(-3), F(2))), F(3)),), id="roots"),
        pytest.param(
            (
                RootBlock((), (ComplexRoot(F(-3), F(-2)),), F(1, 2)),
                PolynomialBlock((F(6), F(12)), (F(1), F(0))),
            ),
            id="roots and polynomials",
        ),
        pytest.param((PolynomialBlock((F(0), F(3, 7), F(6, 7)), (F(1, 7), F(6, 7), F(13, 7), F(0))),),
                     id="fractions and leading zeros"),
    ],
)  # fmt: skip
def test_the_same_loop_in_any_form_is_the_same(blocks: tuple[Block, ...]) -> None:
    loop = built(*blocks)
    assert (loop.numerator, loop.denominator) == (fmpz_poly([6, 3]), fmpz_poly([0, 13, 6, 1]))
    assert loop.excess == 2


def test_positive_feedback_negates_the_numerator_alone() -> None:
    block = PolynomialBlock((F(2), F(1)), (F(1), F(5)))
    loop = built(block, feedback="positive")
    assert (loop.numerator, loop.denominator) == (fmpz_poly([-1, -2]), fmpz_poly([5, 1]))


def test_the_echo_is_multiplied_out_and_not_cancelled() -> None:
    question = Question(
        (
            RootBlock((F(1),), (F(1), F(-1, 2)), F("2.5")),
            PolynomialBlock((F(0), F(1, 3)), (F(2), F(0))),
        ),
        feedback="positive",
        detour="left",
    )
    _, echo = build_loop(question, ENOUGH_BITS)
    assert echo.numerator == ("5/6", "-5/6")
    assert echo.denominator == ("2", "-1", "-1", "0")
    assert (echo.relative_degree, echo.feedback, echo.detour) == (2, "positive", "left")


def test_a_zero_numerator_has_no_relative_degree() -> None:
    loop, echo = build_loop(Question((PolynomialBlock((F(0),), (F(1), F(0), F(1))),)), ENOUGH_BITS)
    assert echo.numerator == ("0",)
    assert echo.relative_degree is None
    assert loop.zero
    assert hidden_modes(loop) == ()


@pytest.mark.parametrize(
    ("numerator", "denominator", "excess"),
    [(P(1), P(1, 2, 3), 2), (P(1, 5), P(1, 2), 0), (P(1, 0, 0, 5), P(1, 2), -2)],
    ids=["proper", "biproper", "improper"],
)
def test_the_excess_is_negative_for_an_improper_loop(
    numerator: Polynomial, denominator: Polynomial, excess: int
) -> None:
    assert exact_loop(Loop(numerator, denominator)).excess == excess


def test_a_zero_denominator_is_refused() -> None:
    with pytest.raises(InvalidLoop, match=r"^The denominator is zero\.$"):
        built(PolynomialBlock((F(1),), (F(1), F(1))), PolynomialBlock((F(1),), (F(0), F(0))))


@pytest.mark.parametrize("side", ["numerator", "denominator"])
def test_bits_are_held_to_the_limit_in_each_polynomial(side: str) -> None:
    """255 s + 1 holds 8 + 1 bits: allowed at 9, refused at 8."""
    long, short = (F(255), F(1)), (F(1), F(1))
    block = PolynomialBlock(*((long, short) if side == "numerator" else (short, long)))
    assert build_loop(Question((block,)), 9)[0].excess == 0
    with pytest.raises(TooLarge, match=r"hold 9 bits; at most 8 are allowed") as refusal:
        build_loop(Question((block,)), 8)
    assert (refusal.value.allowed, refusal.value.received) == (8, 9)
    assert isinstance(refusal.value, AnalysisError)


def test_the_limit_is_held_block_by_block() -> None:
    """Before a product grows beyond it: 64 blocks would hold far more than the refusal names."""
    block = PolynomialBlock((F(2) ** 100,), (F(1),))
    with pytest.raises(TooLarge, match="hold 301 bits; at most 300 are allowed"):
        build_loop(Question((block,) * 64), 300)


def test_hidden_modes_stand_once_for_each_multiplicity() -> None:
    shared = multiply(power(P(2, -4), 2), P(1, 0, 3))
    loop = exact_loop(Loop(shared, multiply(shared, P(1, 1))))
    assert hidden_modes(loop) == (
        HiddenMode(("1", "0", "3"), 0, 2),
        HiddenMode(("1", "-2"), 1, 0),
        HiddenMode(("1", "-2"), 1, 0),
    )


def test_a_hidden_polynomial_is_monic_with_fractions() -> None:
    loop = exact_loop(Loop(P(3, 1), multiply(P(3, 1), P(1, 1))))
    assert hidden_modes(loop) == (HiddenMode(("1", "1/3"), 0, 0),)


@given(loop=any_loops, w=st.integers(1, 9))
@settings(max_examples=40)
def test_the_axis_view_gives_the_values_on_the_axis(loop: Loop, w: int) -> None:
    exact = exact_loop(reduced(loop))
    view = AxisView.of(exact.numerator, exact.denominator)
    for p, even, odd in (
        (exact.numerator, view.numerator_even, view.numerator_odd),
        (exact.denominator, view.denominator_even, view.denominator_odd),
    ):
        re, im = 0, 0
        for c in reversed(p.coeffs()):
            re, im = c - im * w, re * w
        assert (even(w * w), w * odd(w * w)) == (re, im)
