"""Blocks in series, in both of their forms."""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from schemas.blocks import ComplexPair, PolynomialForm, RootForm, without_leading_zeros
from schemas.question import read_question
from schemas.reader import RepeatedKeys
from tests.wire import refusal


def one_block(block: object) -> PolynomialForm | RootForm:
    """The one block of a question."""
    (form,) = read_question({"blocks": [block]}).blocks
    return form


def test_polynomials_lose_their_leading_zeros() -> None:
    form = one_block({"numerator": [0, "0/7", 2, 0], "denominator": [0, 1]})
    assert form == PolynomialForm((Fraction(2), Fraction(0)), (Fraction(1),))
    assert form.degrees == (1, 0)


@given(st.lists(st.fractions(), min_size=1, max_size=6))
def test_stripping_leading_zeros_leaves_a_leading_coefficient_or_one_zero(values: list[Fraction]) -> None:
    stripped = without_leading_zeros(values)
    assert stripped[0] != 0 or stripped == (Fraction(0),)
    assert [0] * (len(values) - len(stripped)) + list(stripped) == values


def test_roots_default_to_none_and_the_factor_to_one() -> None:
    assert one_block({"poles": [-1]}) == RootForm((), (Fraction(-1),), Fraction(1))
    assert one_block({"factor": "1/2"}) == RootForm((), (), Fraction(1, 2))
    assert one_block({"zeros": []}) == RootForm((), (), Fraction(1))


@pytest.mark.parametrize("im", [3, -3], ids=["above", "below"])
def test_a_complex_root_stands_for_its_conjugate_too(im: int) -> None:
    form = one_block({"zeros": [["-1/2", im], 4]})
    assert form == RootForm((ComplexPair(Fraction(-1, 2), Fraction(3)), Fraction(4)), (), Fraction(1))
    assert form.degrees == (3, 0)


def test_a_pair_may_stand_twice() -> None:
    pair = ComplexPair(Fraction(0), Fraction(2))
    assert one_block({"poles": [[0, 2], [0, 2]]}) == RootForm((), (pair, pair), Fraction(1))


@pytest.mark.parametrize(
    ("block", "pointer", "detail"),
    [
        pytest.param(
            {"zeros": [[1, 2], 5, [1, -2]]}, "/zeros/2", "conjugate of entry 0", id="both conjugates"
        ),
        pytest.param(
            {"poles": [[0, -1], [0, 1]]}, "/poles/1", "conjugate of entry 0", id="both, below first"
        ),
        pytest.param({"poles": [[1, 0]]}, "/poles/0", "write a plain number", id="no imaginary part"),
        pytest.param({"poles": [[1]]}, "/poles/0", "two numbers", id="one number"),
        pytest.param({"poles": [[1, 2, 3]]}, "/poles/0", "two numbers", id="three numbers"),
        pytest.param({"poles": [[1, True]]}, "/poles/0/1", "boolean", id="a boolean part"),
        pytest.param({"poles": [None]}, "/poles/0", "Expected a number or [re, im]", id="null"),
        pytest.param({"poles": ["x"]}, "/poles/0", "Not a number", id="a word"),
        pytest.param({"poles": 5}, "/poles", "Expected a list.", id="poles a number"),
        pytest.param({"poles": [], "factor": "1/0"}, "/factor", "over zero", id="factor over zero"),
        pytest.param({"numerator": [1], "denominator": [0, 0]}, "/denominator", "are zero", id="zero below"),
        pytest.param({"numerator": [1]}, "", "holds a denominator too", id="numerator alone"),
        pytest.param({"denominator": [1]}, "", "holds a denominator too", id="denominator alone"),
        pytest.param({}, "", "at least one of zeros, poles and factor", id="nothing"),
        pytest.param({"numerator": [1], "denominator": [1], "zeros": []}, "", "not both", id="mixed"),
        pytest.param({"numerator": [1], "factor": 2}, "", "not both", id="mixed by halves"),
        pytest.param({"poles": [1], "gain": 2}, "/gain", "Unknown key.", id="unknown key"),
        pytest.param(
            RepeatedKeys([("poles", [1]), ("poles", [2])]), "/poles", "more than once", id="repeated"
        ),
        pytest.param([1], "", "Expected an object.", id="a list"),
        pytest.param(None, "", "Expected an object.", id="null block"),
    ],
)
def test_a_faulty_block_is_refused_at_its_fault(block: object, pointer: str, detail: str) -> None:
    faults = refusal({"blocks": [{"poles": [-1]}, block]})
    assert list(faults) == [f"/blocks/1{pointer}"]
    assert detail in faults[f"/blocks/1{pointer}"].detail


def test_blocks_are_taken_to_their_limit() -> None:
    assert len(read_question({"blocks": [{"factor": 2}] * 64}).blocks) == 64
    fault = refusal({"blocks": [{"factor": 2}] * 65})["/blocks"]
    assert (fault.limit, fault.allowed, fault.received) == ("blocks", 64, 65)


def test_no_blocks_are_no_loop() -> None:
    assert refusal({"blocks": []})["/blocks"].detail == "An empty list."
