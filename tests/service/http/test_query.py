"""The question in an address."""

import pytest
from flask.testing import FlaskClient

from schemas.question import InvalidQuestion
from schemas.reader import NotJson, NumberText, RepeatedKeys
from service.http.query import question_document


@pytest.mark.parametrize(
    ("query", "document"),
    [
        ("", {}),
        ("numerator=1,2&denominator=1", {"numerator": ["1", "2"], "denominator": ["1"]}),
        ("gain_window=-1,1/2", {"gain_window": ["-1", "1/2"]}),
        ("gain=&name=", {"gain": "", "name": ""}),
        ("numerator=", {"numerator": [""]}),
        ("name=a%2Cb+c", {"name": "a,b c"}),
        ("name=%C3%A9", {"name": "é"}),
        ("evidence=true&curve=false", {"evidence": True, "curve": False}),
        ("evidence=yes", {"evidence": "yes"}),
        ("gian=1", {"gian": "1"}),
        ("question=%7B%22gain%22:%200.1%7D", {"gain": NumberText("0.1")}),
    ],
    ids=lambda value: repr(value)[:40],
)
def test_a_query_is_the_document_a_body_would_give(query: str, document: object) -> None:
    assert question_document(query.encode()) == document


def test_a_repeated_field_is_a_repeated_key() -> None:
    document = question_document(b"gain=1&gain=1&numerator=1")
    assert isinstance(document, RepeatedKeys)
    assert document.repeated == ["gain"]


@pytest.mark.parametrize(
    ("query", "pointers"),
    [
        ("question={}&gain=1&a/b=2", ["/a~1b", "/gain"]),
        ("question={}&question={}", ["/question"]),
        ("question={}&question={}&gain=1", ["/question", "/gain"]),
    ],
)
def test_nothing_stands_beside_a_whole_question(query: str, pointers: list[str]) -> None:
    with pytest.raises(InvalidQuestion, match="question") as refused:
        question_document(query.encode())
    assert [fault.pointer for fault in refused.value.faults] == pointers


@pytest.mark.parametrize(
    ("query", "reason"),
    [
        ("question=", "empty"),
        ("question={", "Expecting property name"),
        ("question=%FF", "Not UTF-8: byte 0"),
        ("question=%EF%BB%BF{}", "byte order mark"),
    ],
)
def test_a_whole_question_is_json(query: str, reason: str) -> None:
    with pytest.raises(NotJson, match=reason):
        question_document(query.encode())


@pytest.mark.parametrize(
    ("query", "pointer"),
    [
        ("numerator=1&denominator=1,1&gain=1e+5", "/gain"),
        ("numerator=1&denominator=1,1&gain=1&gain=1", "/gain"),
        ("numerator=1&denominator=1,0,x", "/denominator/2"),
        ("numerator=1&denominator=1,,1", "/denominator/1"),
        ("numerator=1&denominator=1,1&gain_window=1", "/gain_window"),
        ("numerator=1&denominator=1,1&evidence=1", "/evidence"),
        ("numerator=1&denominator=1,1&curve=300", "/curve"),
        ("blocks=1", "/blocks"),
        ("numerator=1&denominator=1,1&name=%FF", "/name"),
        ("numerator=1&denominator=1,1&%FF=1", "/\udcff"),
        ("denominator=1,1", "/numerator"),
        ("numerator=1&denominator=1,1&dead_time_s=1", "/dead_time_s"),
        ("question=[]", ""),
    ],
)
def test_a_faulty_field_is_pointed_at(client: FlaskClient, query: str, pointer: str) -> None:
    response = client.get(f"/v1/stability?{query}")
    assert response.status_code == 422
    assert [each["pointer"] for each in response.json["errors"]] == [pointer]
