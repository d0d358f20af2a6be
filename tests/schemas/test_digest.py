"""One question, one digest."""

import hashlib
from typing import Any

import pytest
from hypothesis import given

from schemas.digest import question_digest
from schemas.question import read_question
from schemas.reader import read_json
from tests.wire import body, questions


def digest(text: str) -> str:
    """The digest of the question written in ``text``."""
    return question_digest(read_question(read_json(text.encode())))


PLAIN = '{"numerator": [0.1, 1], "denominator": [1, 2]}'


@pytest.mark.parametrize(
    "text",
    [
        pytest.param('{"denominator": [1, 2], "numerator": [0.1, 1]}', id="other order"),
        pytest.param('{"numerator": ["1/10", "2/2"], "denominator": ["1e0", 2.0]}', id="other numbers"),
        pytest.param('{"numerator": [0, 0, 1e-1, 1], "denominator": [0, 1, 2]}', id="leading zeros"),
        pytest.param('{"numerator": [0.1, 1], "denominator": [1, 2], "name": "x"}', id="a name"),
        pytest.param('{"blocks": [{"numerator": [0.1, 1], "denominator": [1, 2]}]}', id="one block"),
        pytest.param(
            '{"numerator": [0.1, 1], "denominator": [1, 2], "gain": null, "feedback": "negative", '
            '"detour": "right", "sample_time_s": null, "dead_time_s": 0, "gain_window": null, '
            '"curve": {"points": 300}, "root_paths": false, "step_response": false, "evidence": false, '
            '"require": null}',
            id="defaults written out",
        ),
    ],
)
def test_two_ways_of_writing_one_question_have_one_digest(text: str) -> None:
    assert digest(text) == digest(PLAIN)


@pytest.mark.parametrize(
    "fields",
    [
        '"gain": 1',
        '"gain": 0',
        '"feedback": "positive"',
        '"detour": "left"',
        '"gain_window": [0, 1]',
        '"curve": false',
        '"curve": {"points": 301}',
        '"evidence": true',
    ],
)
def test_another_question_has_another_digest(fields: str) -> None:
    assert digest(f"{PLAIN[:-1]}, {fields}}}") != digest(PLAIN)


@pytest.mark.parametrize(
    ("one", "other"),
    [
        pytest.param({"poles": [[1, 2]]}, {"poles": [["1.0", -2]]}, id="either of two conjugates"),
        pytest.param({"poles": [1]}, {"poles": [1], "zeros": [], "factor": 1}, id="defaults of a block"),
    ],
)
def test_two_ways_of_writing_one_block_have_one_digest(one: dict[str, Any], other: dict[str, Any]) -> None:
    first, second = (question_digest(read_question({"blocks": [block]})) for block in (one, other))
    assert first == second


def test_the_digest_is_over_the_canonical_text_as_it_is_documented() -> None:
    canonical = (
        '{"blocks":[{"denominator":["1","2"],"numerator":["1/10","1"]}],"curve":{"points":300},'
        '"dead_time_s":"0","detour":"right","evidence":false,"feedback":"negative","gain":null,'
        '"gain_window":null,"require":null,"root_paths":false,"sample_time_s":null,"step_response":false}'
    )
    assert digest(PLAIN) == f"sha256:{hashlib.sha256(canonical.encode()).hexdigest()}"


@given(questions(), questions())
def test_digests_are_equal_where_questions_are(one: dict[str, Any], other: dict[str, Any]) -> None:
    first, second = (read_question(read_json(body({**each, "name": None}))) for each in (one, other))
    assert (question_digest(first) == question_digest(second)) == (first == second)
