"""The question that goes to the engine or the service."""

import json
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from schemas.question import InvalidQuestion, read_question
from schemas.reader import read_json
from service.command.question import json_text, question_bytes

FILE = b'{"numerator": [0.1], "denominator": [1, 2e0], "gain": 3, "curve": {"points": 20}}'


def test_a_file_goes_out_as_it_is() -> None:
    assert question_bytes(FILE, {}) == FILE


def test_options_make_a_question_of_their_own() -> None:
    asked = question_bytes(None, {"numerator": ["1", "1/3"], "denominator": ["1"], "gain": "0.1"})
    assert json.loads(asked) == {
        "curve": False,
        "numerator": ["1", "1/3"],
        "denominator": ["1"],
        "gain": "0.1",
    }


def test_options_replace_the_fields_of_a_file_and_leave_the_rest_exact() -> None:
    asked = question_bytes(FILE, {"gain": "0.7"})
    assert asked.decode() == (
        '{"numerator": [0.1], "denominator": [1, 2e0], "gain": "0.7", "curve": {"points": 20}}'
    )


@pytest.mark.parametrize(
    "file",
    [
        pytest.param(b"{", id="not-json"),
        pytest.param(b"[1, 2]", id="no-object"),
        pytest.param(b"\xff", id="not-utf-8"),
    ],
)
def test_what_is_no_question_is_refused_by_the_engine_not_here(file: bytes) -> None:
    assert question_bytes(file, {"gain": "1"}) == file


def test_a_repeated_key_is_still_refused_after_a_replacement() -> None:
    asked = question_bytes(b'{"numerator": [1], "numerator": [2], "denominator": [1, 1]}', {"gain": "1"})
    with pytest.raises(InvalidQuestion, match="/numerator: The key stands more than once"):
        read_question(read_json(asked))


def test_what_is_no_number_is_still_refused_after_a_replacement() -> None:
    asked = question_bytes(b'{"numerator": [NaN], "denominator": [1, 1]}', {"gain": "1"})
    with pytest.raises(InvalidQuestion, match="/numerator/0: NaN is no number"):
        read_question(read_json(asked))


documents = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False, allow_infinity=False) | st.text(),
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=4),
    max_leaves=12,
)


@given(documents)
def test_a_document_read_and_written_again_is_the_same(document: Any) -> None:
    written = json_text(read_json(json.dumps(document).encode()))
    assert json.loads(written) == document


@given(st.from_regex(r"-?(0|[1-9][0-9]{0,9})(\.[0-9]{1,9})?([eE][+-]?[0-9]{1,3})?", fullmatch=True))
def test_a_number_read_and_written_again_keeps_its_text(token: str) -> None:
    assert json_text(read_json(token.encode())) == token
