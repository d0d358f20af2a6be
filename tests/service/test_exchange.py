"""From a question document to its answer document."""

import json
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import pytest

from schemas.question import InvalidQuestion, read_question
from service.analysis.errors import TooLarge
from service.analysis.question import ComplexRoot, PolynomialBlock, Question, RootBlock
from service.exchange import analysed, answer_document, json_bytes, plain
from service.settings import Limits
from service.version import ENGINE
from tests.wire import HOIST


def test_a_question_goes_to_the_analysis_whole() -> None:
    sent = read_question(
        {
            "blocks": [
                {"numerator": [0, 1], "denominator": ["1/2", 3]},
                {"zeros": [1], "poles": [[-1, -2], "0.5"], "factor": 7},
            ],
            "gain": 4,
            "feedback": "positive",
            "detour": "left",
            "gain_window": [-5, 5],
            "evidence": True,
        }
    )
    assert analysed(sent) == Question(
        blocks=(
            PolynomialBlock((Fraction(1),), (Fraction(1, 2), Fraction(3))),
            RootBlock((Fraction(1),), (ComplexRoot(Fraction(-1), Fraction(2)), Fraction(1, 2)), Fraction(7)),
        ),
        gain=Fraction(4),
        feedback="positive",
        detour="left",
        gain_window=(Fraction(-5), Fraction(5)),
        evidence=True,
    )


def test_an_answer_says_what_was_asked_and_who_answered() -> None:
    answer = answer_document(HOIST)
    assert answer["loop"]["name"] == HOIST["name"]
    assert answer["question_digest"].startswith("sha256:")
    assert answer["engine"] == ENGINE
    assert {key for key, value in answer.items() if value is None} == {
        "curve",
        "root_paths",
        "step_response",
        "acceptance",
        "evidence",
    }


@pytest.mark.parametrize(
    ("one", "other"),
    [
        pytest.param(
            {"numerator": [2, 6], "denominator": [1, 2, 5, 0]},
            {"blocks": [{"zeros": [-3], "poles": [[-1, 2], 0], "factor": 2}]},
            id="polynomials and roots",
        ),
        pytest.param(
            {"numerator": [2, 6], "denominator": [1, 2, 5, 0]},
            {"blocks": [{"numerator": [2, 6], "denominator": [1, 0]}, {"poles": [[-1, 2]]}]},
            id="polynomials and blocks",
        ),
    ],
)
def test_one_loop_has_one_analysis_in_every_form(one: dict[str, Any], other: dict[str, Any]) -> None:
    first, second = answer_document({**one, "gain": 1}), answer_document({**other, "gain": 1})
    assert first.pop("question_digest") != second.pop("question_digest")
    assert first == second


def test_what_is_no_question_is_refused() -> None:
    with pytest.raises(InvalidQuestion, match="/gain"):
        answer_document({**HOIST, "gain": "x"})


def test_the_limits_given_are_the_limits_kept() -> None:
    with pytest.raises(TooLarge, match="at most 64"):
        answer_document({"numerator": ["9" * 30], "denominator": [1, 1]}, Limits(polynomial_bits=64))


@dataclass(frozen=True)
class Leaf:
    """One field."""

    value: object


@dataclass(frozen=True)
class Tree:
    """Two fields."""

    leaves: tuple[Leaf, ...]
    label: str | None


def test_dataclasses_become_dicts_and_tuples_lists_all_the_way_down() -> None:
    assert plain(Tree((Leaf(1.5), Leaf((("0", "0"), None))), None)) == {
        "leaves": [{"value": 1.5}, {"value": [["0", "0"], None]}],
        "label": None,
    }


@pytest.mark.parametrize("text", ["é", "\ud800", "a\ud83d", '\x00\n"\\'], ids=ascii)
def test_every_text_is_written_as_json(text: str) -> None:
    assert json.loads(json_bytes({"name": text})) == {"name": text}


def test_what_is_no_json_is_never_written() -> None:
    with pytest.raises(ValueError, match="not JSON compliant"):
        json_bytes({"gain": float("inf")})
