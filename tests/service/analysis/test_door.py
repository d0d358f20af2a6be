"""The one door: what comes back, what is refused, and that nothing is left behind."""

import doctest
import importlib
from fractions import Fraction
from pathlib import Path

import pytest
from flint import ctx
from hypothesis import given, settings

import service.analysis
from service.analysis import POLYNOMIAL_BITS, answer
from service.analysis import survey as survey_module
from service.analysis.counts import Counts
from service.analysis.errors import AnalysisError, CountsDisagree, InvalidLoop, OutOfRange, TooLarge
from service.analysis.question import PolynomialBlock, Question
from tests.asking import ask
from tests.oracle import Loop
from tests.polynomials import multiply, polynomial, power
from tests.strategies import any_loops, non_zeros

P = polynomial
F = Fraction
MODULES = sorted(path.stem for path in Path(service.analysis.__file__).parent.glob("*.py"))
THREE_LAGS = Loop(P(1), P(1, 3, 3, 1))


def test_the_answer_has_all_its_parts() -> None:
    found = ask(THREE_LAGS, gain=F(2), evidence=True)
    assert found.loop.denominator == ("1", "3", "3", "1")
    assert len(found.bands) == len(found.edges) + 1 == 3
    assert found.commissioned is not None
    assert found.evidence is not None
    assert len(found.evidence.edges) == len(found.edges)
    assert found.summary.startswith("Stable for -1 < K < 8.")
    assert found.cautions[-1].code == "linear_model_only"


def test_parts_not_asked_for_are_left_out() -> None:
    found = ask(THREE_LAGS)
    assert (found.commissioned, found.evidence) == (None, None)


@given(loop=any_loops, gain=non_zeros)
@settings(max_examples=40)
def test_the_same_question_has_the_same_answer(loop: Loop, gain: Fraction) -> None:
    assert ask(loop, gain=gain, evidence=True) == ask(loop, gain=gain, evidence=True)


@given(loop=any_loops)
@settings(max_examples=30)
def test_the_precision_outside_neither_matters_nor_changes(loop: Loop) -> None:
    expected = ask(loop, gain=F(1))
    before = ctx.prec
    try:
        ctx.prec = 11
        assert ask(loop, gain=F(1)) == expected
        assert ctx.prec == 11
    finally:
        ctx.prec = before


@pytest.mark.parametrize(
    ("loop", "refusal", "text"),
    [
        pytest.param(Loop(P(1), (F(0),)), InvalidLoop, "The denominator is zero", id="no loop"),
        pytest.param(Loop(P(1), P(1, F(10) ** 400)), OutOfRange, "beyond the range of double", id="range"),
        pytest.param(
            Loop(P(2**POLYNOMIAL_BITS), P(1)), TooLarge, "at most 20000 are allowed", id="too large"
        ),
    ],
)
def test_what_cannot_be_answered_is_refused_and_the_precision_put_back(
    loop: Loop, refusal: type[AnalysisError], text: str
) -> None:
    before = ctx.prec
    with pytest.raises(refusal, match=text) as raised:
        ask(loop, gain=F(1))
    assert isinstance(raised.value, AnalysisError)
    assert ctx.prec == before


def test_counts_that_disagree_are_never_an_answer(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("service.analysis.bands.count_roots", lambda _p: Counts(1, 0))
    with pytest.raises(CountsDisagree, match="clockwise encirclements say otherwise"):
        ask(THREE_LAGS)


def test_a_curve_that_disagrees_is_never_an_answer(monkeypatch: pytest.MonkeyPatch) -> None:
    true = survey_module.encirclements
    monkeypatch.setattr(survey_module, "encirclements", lambda *a: tuple(n + 1 for n in true(*a)))
    with pytest.raises(CountsDisagree, match=r"0 enclosed .* and \d clockwise encirclements say otherwise"):
        ask(THREE_LAGS)


def test_the_limit_on_bits_can_be_set() -> None:
    question = Question((PolynomialBlock(THREE_LAGS.numerator, THREE_LAGS.denominator),))
    assert answer(question, 6) == answer(question)
    with pytest.raises(TooLarge, match="hold 6 bits; at most 5 are allowed"):
        answer(question, 5)


def fibonacci_loop(length: int) -> Loop:
    """Give a loop whose edges at zero and infinity are neighbouring ratios of Fibonacci numbers."""
    a, b = 0, 1
    for _ in range(length):
        a, b = b, a + b
    return Loop(P(F(b), F(a + b)), P(F(a), F(b)))


@pytest.mark.parametrize("length", [20, 1064])
def test_edges_with_long_continued_fractions_are_no_obstacle(length: int) -> None:
    """1064 is within the limits on digits: each number is a quotient of two of at most 120 digits."""
    found = ask(fibonacci_loop(length))
    assert [edge.causes for edge in found.edges] in (
        [("infinity",), ("origin",)],
        [("origin",), ("infinity",)],
    )


@pytest.mark.parametrize("sharpness", [20, 190])
def test_frequencies_that_nearly_coincide_are_no_obstacle(sharpness: int) -> None:
    """The imaginary part on the axis vanishes where 4^k (x - 1)^2 = 2, x = w^2."""
    near = multiply(P(2**sharpness), P(1, 0, 1))
    denominator = multiply(P(1, 0), power(near, 2))
    odd = (*denominator[:-2], denominator[-2] - 2, denominator[-1])
    found = ask(Loop(P(1), (*odd[:-3], odd[-3] + 1, odd[-2], odd[-1] + 3)))
    assert [edge.causes for edge in found.edges] == [("origin",), ("crossing",), ("crossing",)]


@pytest.mark.parametrize("name", MODULES)
def test_the_examples_in_the_docstrings_hold(name: str) -> None:
    module = importlib.import_module("service.analysis" if name == "__init__" else f"service.analysis.{name}")
    assert doctest.testmod(module).failed == 0


def test_some_docstrings_have_examples() -> None:
    """Otherwise the test above would hold of nothing."""
    examples = {
        name: sum(len(found.examples) for found in doctest.DocTestFinder().find(
            importlib.import_module(f"service.analysis.{name}")))
        for name in ("counts", "roots", "bands")
    }  # fmt: skip
    assert min(examples.values()) >= 1
