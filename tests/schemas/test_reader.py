"""Reading JSON exactly."""

import json
import time

import pytest
from hypothesis import given
from hypothesis import strategies as st

from schemas.reader import NotFinite, NotJson, NumberText, RepeatedKeys, read_json


@pytest.mark.parametrize("text", ["0", "-0", "0.1", "1e5", "1E+5", "-2.50", "123456789012345678901234567890"])
def test_a_number_keeps_its_text(text: str) -> None:
    assert read_json(text.encode()) == NumberText(text)


@pytest.mark.parametrize("text", ["NaN", "Infinity", "-Infinity"])
def test_what_is_not_finite_is_told_apart(text: str) -> None:
    assert read_json(f"[{text}]".encode()) == [NotFinite(text)]


def test_a_repeated_key_is_remembered() -> None:
    document = read_json(b'{"a": 1, "b": 2, "a": 3, "a": 4}')
    assert isinstance(document, RepeatedKeys)
    assert document.repeated == ["a"]


def test_an_object_without_repeated_keys_is_a_plain_dict() -> None:
    assert type(read_json(b'{"a": {"b": null}}')) is dict


@pytest.mark.parametrize(
    ("body", "reason"),
    [
        pytest.param(b"", "empty", id="nothing"),
        pytest.param(b" \n", "empty", id="white space"),
        pytest.param(b"\xef\xbb\xbf{}", "byte order mark", id="byte order mark"),
        pytest.param(b'{"name": "\xff"}', "Not UTF-8: byte 10", id="not UTF-8"),
        pytest.param('{"name": "é"}'.encode("utf-16"), "Not UTF-8", id="UTF-16"),
        pytest.param(b'{"name": "\xed\xa0\x80"}', "Not UTF-8", id="surrogate in UTF-8"),
        pytest.param(b'{"gain": 1', "Expecting ',' delimiter at line 1, column 11", id="cut off"),
        pytest.param(b"{} {}", "Extra data at line 1, column 4", id="two documents"),
        pytest.param(b"[01]", "Expecting ',' delimiter", id="leading zero"),
        pytest.param(b"[1.]", "Expecting ',' delimiter", id="no digits after the point"),
        pytest.param(b"[+1]", "Expecting value", id="plus sign"),
        pytest.param(b"{'a': 1}", "Expecting property name", id="single quotes"),
        pytest.param(b'"a\nb"', "Invalid control character", id="bare line feed"),
        pytest.param(b"\x00", "Expecting value", id="zero byte"),
    ],
)
def test_what_is_no_json_is_refused_with_the_reason(body: bytes, reason: str) -> None:
    with pytest.raises(NotJson, match=reason):
        read_json(body)


def test_nesting_is_read_to_the_limit_and_no_deeper() -> None:
    assert read_json(b"[" * 32 + b"]" * 32)
    with pytest.raises(NotJson, match="more than 32 deep") as refusal:
        read_json(b"[" * 33 + b"]" * 33)
    assert (refusal.value.limit, refusal.value.allowed) == ("depth", 32)


def test_brackets_in_strings_are_no_nesting() -> None:
    text = '[{"\\"' * 100
    assert read_json(json.dumps([text, "]" * 99]).encode()) == [text, "]" * 99]


@pytest.mark.parametrize(
    "body",
    [
        pytest.param(b"[" * 1_000_000, id="opening brackets"),
        pytest.param(b'{"a":' * 200_000, id="objects in objects"),
        pytest.param(b'["' + b'\\"' * 500_000, id="an endless string of quotes"),
        pytest.param(b"[" * 33 + b'"' + b"\\" * 1_000_000, id="an endless escape"),
    ],
)
def test_a_hostile_megabyte_is_refused_in_little_time(body: bytes) -> None:
    started = time.process_time()
    with pytest.raises(NotJson, match=r"deep|Unterminated|Invalid"):
        read_json(body)
    assert time.process_time() - started < 1


@given(st.binary(max_size=60))
def test_any_bytes_are_read_or_refused(body: bytes) -> None:
    try:
        document = read_json(body)
    except NotJson as refusal:
        document = refusal.detail
    assert document is None or isinstance(document, dict | list | str | bool | NumberText | NotFinite)


def _as_read(value: object) -> object:
    """What the reader makes of ``value`` written by the standard library."""
    if isinstance(value, list):
        return [_as_read(each) for each in value]
    if isinstance(value, dict):
        return {key: _as_read(each) for key, each in value.items()}
    return NumberText(str(value)) if type(value) is int else value


@given(
    st.recursive(
        st.none() | st.booleans() | st.integers() | st.text(),
        lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=4),
        max_leaves=12,
    )
)
def test_every_document_is_read_as_it_was_written(document: object) -> None:
    assert read_json(json.dumps(document).encode()) == _as_read(document)
