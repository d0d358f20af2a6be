"""The question over HTTP."""

import json
from collections.abc import Mapping
from typing import Any
from urllib.parse import quote, urlencode

import pytest
from flask.testing import FlaskClient
from hypothesis import HealthCheck, given, settings

from schemas.answer import AnswerSchema
from service import create_app
from service.settings import Limits
from tests.wire import HOIST, body, questions

JSON = "application/json"
PLAIN = "/v1/stability?numerator=2.5,10&denominator=1,1/3,4,0&gain=0.1&curve=false"


def post(client: FlaskClient, data: bytes) -> bytes:
    """The answer to the question in ``data``."""
    response = client.post("/v1/stability", data=data, content_type=JSON)
    assert response.status_code == 200, response.text
    return response.data


def get(client: FlaskClient, address: str) -> bytes:
    """The answer to the question in ``address``."""
    response = client.get(address)
    assert response.status_code == 200, response.text
    return response.data


def test_the_question_of_the_contract_gets_its_answer(client: FlaskClient) -> None:
    answer = json.loads(post(client, body(HOIST)))
    assert answer["loop"] == {
        "name": "hoist drive, speed loop",
        "numerator": ["5/2", "10"],
        "denominator": ["1", "1/3", "4", "0"],
        "relative_degree": 2,
        "feedback": "negative",
        "detour": "right",
        "sample_time_s": None,
        "dead_time_s": "0",
    }
    assert [(edge["exact"], edge["causes"]) for edge in answer["edges"]] == [
        ("0", ["open_loop"]),
        ("8/55", ["crossing"]),
    ]
    assert [(band["verdict"], band["rhp_poles"]) for band in answer["bands"]] == [
        ("unstable", 1),
        ("stable", 0),
        ("unstable", 2),
    ]
    assert answer["commissioned"]["verdict"] == "stable"


@pytest.mark.parametrize("name", [None, "", "Förderband ≥ 3 µs", "a\nb\u0000c", "😀"], ids=ascii)
def test_a_name_comes_back_as_it_was_sent(client: FlaskClient, name: str | None) -> None:
    assert json.loads(post(client, body({**HOIST, "name": name})))["loop"]["name"] == name


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(
            b'{"gain":0.1,"curve":false,"denominator":[1,"1/3",4,0],"numerator":[2.5,10]}', id="order"
        ),
        pytest.param(
            b'\n{ "numerator" : [25e-1 , 1.0E1],\t"denominator": ["1", "2/6", "4.00", -0], '
            b'"gain": "1/10", "curve": false } ',
            id="numbers and space",
        ),
        pytest.param(
            b'{"numerator": [0, 2.5, 10], "denominator": [0, 1, "1/3", 4, 0], "gain": 0.1, "curve": false}',
            id="leading zeros",
        ),
    ],
)
def test_one_question_has_one_answer_however_it_is_written(client: FlaskClient, data: bytes) -> None:
    assert post(client, data) == get(client, PLAIN)


@given(document=questions())
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
def test_the_address_and_the_body_get_the_same_bytes(client: FlaskClient, document: dict[str, Any]) -> None:
    data = body(document)
    assert get(client, f"/v1/stability?question={quote(data)}") == post(client, data)


def _plain(document: Mapping[str, Any]) -> str:
    """The plain fields of a question about polynomials, without what they cannot say."""
    fields = {}
    for key, value in document.items():
        if isinstance(value, list):
            fields[key] = ",".join(map(str, value))
        elif isinstance(value, bool):
            fields[key] = str(value).lower()
        elif value is not None and not isinstance(value, dict):
            fields[key] = str(value)
    return urlencode(fields)


@given(document=questions().filter(lambda each: "blocks" not in each))
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
def test_plain_fields_and_the_body_get_the_same_bytes(client: FlaskClient, document: dict[str, Any]) -> None:
    asked = {**document, "curve": False}
    assert get(client, f"/v1/stability?{_plain(asked)}") == post(client, body(asked))


@given(document=questions())
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
def test_every_answer_is_as_documented(client: FlaskClient, document: dict[str, Any]) -> None:
    answer = json.loads(post(client, body(document)))
    assert AnswerSchema().validate(answer) == {}
    assert len(answer["bands"]) == len(answer["edges"]) + 1
    assert (answer["commissioned"] is None) == (document.get("gain") is None)
    assert (answer["evidence"] is None) == (not document.get("evidence", False))


def test_another_instance_gives_the_same_bytes(client: FlaskClient) -> None:
    other = create_app(Limits()).test_client()
    for document in (HOIST, {**HOIST, "evidence": True}, {**HOIST, "gain": "8/55", "feedback": "positive"}):
        assert post(client, body(document)) == post(other, body(document))


@pytest.mark.parametrize(
    "condition", ["{tag}", "W/{tag}", '"other", {tag}', "*"], ids=["it", "weak", "list", "any"]
)
@pytest.mark.parametrize("method", ["GET", "HEAD"])
def test_what_the_client_has_already_is_not_sent_again(
    client: FlaskClient, method: str, condition: str
) -> None:
    tag = client.get(PLAIN).headers["ETag"]
    response = client.open(PLAIN, method=method, headers={"If-None-Match": condition.format(tag=tag)})
    assert (response.status_code, response.data) == (304, b"")
    assert response.headers["ETag"] == tag
    assert response.headers["Cache-Control"] == "public, max-age=3600"
    assert "Content-Type" not in response.headers


def test_another_tag_gets_the_answer(client: FlaskClient) -> None:
    assert client.get(PLAIN, headers={"If-None-Match": '"other"'}).data == get(client, PLAIN)


def test_a_tag_is_strong_and_over_the_bytes(client: FlaskClient) -> None:
    first, second = (client.get(f"{PLAIN}&evidence={flag}") for flag in ("false", "true"))
    assert first.data != second.data
    assert first.headers["ETag"] != second.headers["ETag"]
    assert first.headers["ETag"].startswith('"')
    assert first.headers["ETag"] == client.post("/v1/stability", json=HOIST | {"name": None}).headers["ETag"]


def test_a_body_is_answered_whatever_the_client_has(client: FlaskClient) -> None:
    response = client.post("/v1/stability", json=dict(HOIST), headers={"If-None-Match": "*"})
    assert response.status_code == 200
    assert response.headers["Cache-Control"] == "no-store"


def test_head_says_what_get_would_send(client: FlaskClient) -> None:
    head, whole = client.head(PLAIN), client.get(PLAIN)
    assert (head.status_code, head.data) == (200, b"")
    assert dict(head.headers) == dict(whole.headers)
    assert head.headers["Content-Length"] == str(len(whole.data))
