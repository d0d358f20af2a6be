"""The question as a whole."""

from fractions import Fraction

import pytest
from hypothesis import given

from schemas.blocks import PolynomialForm
from schemas.limits import QuestionLimits
from schemas.question import InvalidQuestion, QuestionSchema, SentQuestion, read_question
from schemas.reader import NotFinite, NumberText, read_json
from tests.wire import HOIST, body, faulty_questions, questions, refusal


def test_what_is_left_out_has_its_default() -> None:
    assert read_question({"numerator": [1], "denominator": [1, 1]}) == SentQuestion(
        name=None,
        blocks=(PolynomialForm((Fraction(1),), (Fraction(1), Fraction(1))),),
        gain=None,
        feedback="negative",
        detour="right",
        gain_window=None,
        curve=300,
        evidence=False,
    )


def test_what_is_given_stands() -> None:
    question = read_question(
        {**HOIST, "feedback": "positive", "detour": "left", "gain_window": ["-1/2", 1], "evidence": True}
    )
    assert question.name == "hoist drive, speed loop"
    assert question.gain == Fraction(1, 10)
    assert (question.feedback, question.detour) == ("positive", "left")
    assert question.gain_window == (Fraction(-1, 2), Fraction(1))
    assert question.curve is None
    assert question.evidence is True


@pytest.mark.parametrize("field", ["name", "gain", "sample_time_s", "gain_window", "require"])
def test_null_says_the_same_as_nothing_where_it_is_the_default(field: str) -> None:
    assert read_question({**HOIST, "gain": "0.1", field: None}) == read_question(
        {key: value for key, value in HOIST.items() if key != field}
    )


@pytest.mark.parametrize("document", [None, [], "x", NumberText("1"), NotFinite("NaN"), True], ids=repr)
def test_only_an_object_is_a_question(document: object) -> None:
    assert refusal(document)[""].detail == "Expected an object, the question."


def test_every_fault_is_told_at_once() -> None:
    document = {
        "numerator": [1, True, "1/0"],
        "denominator": [0, 0],
        "gain": NotFinite("NaN"),
        "feedback": "both",
        "detour": None,
        "dead_time_s": 1,
        "curve": {"points": 1, "every": 2},
        "evidence": 1,
        "gian": 1,
        "a/b~c": 1,
        "_schema": 1,
    }
    assert set(refusal(document)) == {
        "/numerator/1",
        "/numerator/2",
        "/denominator",
        "/gain",
        "/feedback",
        "/detour",
        "/dead_time_s",
        "/curve/points",
        "/curve/every",
        "/evidence",
        "/gian",
        "/a~1b~0c",
        "/_schema",
    }


def test_faults_without_number_are_counted_but_not_all_listed() -> None:
    with pytest.raises(InvalidQuestion, match="A boolean") as refused:
        read_question({"blocks": [{"poles": [True] * 200}] * 3})
    assert (refused.value.count, len(refused.value.faults)) == (600, 500)


@pytest.mark.parametrize("pointer", ["", "/blocks/0", "/curve"])
def test_an_object_with_a_crowd_of_members_is_refused_as_one(pointer: str) -> None:
    crowd = {f"k{index}": 1 for index in range(101)}
    documents: dict[str, object] = {
        "": crowd,
        "/blocks/0": {"blocks": [crowd]},
        "/curve": {"numerator": [1], "denominator": [1, 1], "curve": crowd},
    }
    fault = refusal(documents[pointer])[pointer]
    assert (fault.limit, fault.allowed, fault.received) == ("members", 100, 101)


def test_the_limits_given_are_the_limits_kept_in_every_part() -> None:
    tight = QuestionLimits(degree=2, digits=2, exponent=1, blocks=2, list_entries=3)
    assert refusal({"numerator": [1] * 4, "denominator": [123]}, tight).keys() == {
        "/numerator",
        "/denominator/0",
    }
    assert refusal({"blocks": [{"poles": [100]}, {"factor": "1e2"}]}, tight).keys() == {
        "/blocks/0/poles/0",
        "/blocks/1/factor",
    }
    assert refusal({"blocks": [{"poles": [1]}] * 3}, tight)["/blocks"].allowed == 2


@given(questions())
def test_every_valid_question_is_taken(document: dict[str, object]) -> None:
    question = read_question(read_json(body(document)))
    assert question.name == document.get("name")
    assert question.evidence == document.get("evidence", False)


@given(questions())
def test_numbers_are_the_same_as_json_numbers_and_as_texts(document: dict[str, object]) -> None:
    assert read_question(document) == read_question(read_json(body(document)))


def _holds(document: object, pointer: str) -> bool:
    """Whether the place is in the document, or is a member its parent lacks."""
    for token in pointer.split("/")[1:]:
        key = token.replace("~1", "/").replace("~0", "~")
        if isinstance(document, list):
            document = document[int(key)]
        elif isinstance(document, dict):
            document = document.get(key)
        else:
            return False
    return True


@given(faulty_questions())
def test_a_document_is_taken_or_refused_at_places_it_has(document: object) -> None:
    try:
        read_question(read_json(body(document)))
    except InvalidQuestion as refused:
        pointers = [fault.pointer for fault in refused.faults]
    else:
        pointers = [""]
    assert pointers
    assert all(_holds(document, pointer) for pointer in pointers)


def test_every_field_says_what_it_is() -> None:
    schema = QuestionSchema(QuestionLimits())
    assert all(field.metadata.get("description") for field in schema.fields.values())
