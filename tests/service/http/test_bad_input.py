"""Bad input of every kind gets a problem document that says what and where, soon, and never a 5xx."""

import io
import time
from typing import Any

import pytest
from flask import Flask, Request
from flask.testing import FlaskClient
from hypothesis import HealthCheck, example, given, settings
from hypothesis import strategies as st
from werkzeug.test import EnvironBuilder, TestResponse, run_wsgi_app

from schemas.problem import ProblemSchema
from tests.wire import HOIST, JUNK, body, faulty_questions

MEBIBYTE = 1_048_576


def post(client: FlaskClient, data: bytes) -> TestResponse:
    """The response to ``data`` as a question."""
    return client.post("/v1/stability", data=data, content_type="application/json")


def assert_problem(response: TestResponse, *statuses: int) -> None:
    """Hold a response to be a problem document with one of the statuses."""
    assert response.status_code in statuses
    assert response.content_type == "application/problem+json"
    assert ProblemSchema().validate(response.json) == {}
    assert response.json["status"] == response.status_code
    assert "Traceback" not in response.text


WHOLE = body(HOIST)


@pytest.mark.parametrize(
    "data",
    [
        pytest.param(b"", id="nothing"),
        pytest.param(b"\x00" * 100, id="zero bytes"),
        pytest.param(bytes(range(256)), id="every byte"),
        pytest.param(b"\xef\xbb\xbf" + WHOLE, id="byte order mark"),
        pytest.param(WHOLE.decode().encode("utf-16"), id="UTF-16"),
        pytest.param(WHOLE + WHOLE, id="twice"),
        pytest.param(WHOLE.replace(b'"', b"'"), id="single quotes"),
        pytest.param(b"[" * 100_000, id="deep lists"),
        pytest.param(b'{"a":' * 100_000, id="deep objects"),
        pytest.param(b"numerator=1&denominator=1", id="a form"),
        pytest.param(b"\x1f\x8b\x08\x00", id="compressed"),
    ],
)
def test_what_is_no_json_is_400(client: FlaskClient, data: bytes) -> None:
    response = post(client, data)
    assert_problem(response, 400)
    assert response.json["type"] == "/problems/not-json"


@pytest.mark.parametrize("end", range(len(WHOLE)))
def test_a_question_cut_off_anywhere_is_400(client: FlaskClient, end: int) -> None:
    assert post(client, WHOLE[:end]).status_code == 400


@pytest.mark.parametrize("token", ["NaN", "Infinity", "-Infinity"])
@pytest.mark.parametrize("place", ["gain", "numerator", "name", "curve", "evidence", "dead_time_s"])
def test_what_is_not_finite_is_pointed_at(client: FlaskClient, place: str, token: str) -> None:
    data = body({**HOIST, place: 12321}).replace(b"12321", token.encode())
    response = post(client, data)
    assert_problem(response, 422)
    assert [each["pointer"] for each in response.json["errors"]] == [f"/{place}"]


@pytest.mark.parametrize(
    ("data", "pointer"),
    [
        (b'{"numerator": [1], "denominator": [1, 1], "gain": 1, "gain": 1}', "/gain"),
        (b'{"numerator": [1], "denominator": [1, 1], "denominator": [1]}', "/denominator"),
        (b'{"blocks": [{"poles": [1], "poles": [2]}]}', "/blocks/0/poles"),
        (b'{"numerator": [1], "denominator": [1], "curve": {"points": 20, "points": 20}}', "/curve/points"),
    ],
)
def test_a_duplicate_key_is_pointed_at(client: FlaskClient, data: bytes, pointer: str) -> None:
    response = post(client, data)
    assert_problem(response, 422)
    assert [each["pointer"] for each in response.json["errors"]] == [pointer]
    assert "more than once" in response.json["errors"][0]["detail"]


@pytest.mark.parametrize("junk", JUNK, ids=lambda value: repr(value)[:24])
@pytest.mark.parametrize(
    "field", [*HOIST, "feedback", "detour", "blocks", "gain_window", "evidence", "require"]
)
def test_a_field_of_a_wrong_type_is_no_failure(client: FlaskClient, field: str, junk: Any) -> None:
    response = post(client, body({**HOIST, field: junk}))
    assert response.status_code in {200, 422}
    pointers = [each["pointer"] for each in (response.json.get("errors") or [])]
    beside = {"/numerator", "/denominator"} if field == "blocks" else set()
    assert all(pointer.startswith(f"/{field}") or pointer in beside for pointer in pointers)
    assert bool(pointers) == (response.status_code == 422)


@pytest.mark.parametrize(
    "number",
    [
        pytest.param("1e999999999", id="huge"),
        pytest.param("-1e-999999999", id="tiny"),
        pytest.param('"1e999999999"', id="huge text"),
        pytest.param("1e" + "9" * 5000, id="digits of the exponent"),
        pytest.param("9" * 5000, id="digits"),
        pytest.param('"1/' + "7" * 5000 + '"', id="digits of the denominator"),
    ],
)
@pytest.mark.parametrize("place", ["gain", "numerator", "gain_window", "points"])
def test_a_monster_is_refused_within_ten_milliseconds(client: FlaskClient, place: str, number: str) -> None:
    fields = {
        "gain": f'"numerator": [1], "denominator": [1, 1], "gain": {number}',
        "numerator": f'"numerator": [1, {number}], "denominator": [1, 1]',
        "gain_window": f'"numerator": [1], "denominator": [1, 1], "gain_window": [0, {number}]',
        "points": f'"numerator": [1], "denominator": [1, 1], "curve": {{"points": {number}}}',
    }
    spent = []
    for _ in range(5):
        started = time.process_time()
        response = post(client, f"{{{fields[place]}}}".encode())
        spent.append(time.process_time() - started)
        assert_problem(response, 422)
    assert min(spent) < 0.010


def test_a_body_is_read_to_its_limit_and_no_further(client: FlaskClient) -> None:
    assert post(client, WHOLE.ljust(MEBIBYTE)).status_code == 200
    response = post(client, WHOLE.ljust(MEBIBYTE + 1))
    assert_problem(response, 413)
    assert (response.json["limit"], response.json["allowed"]) == ("body_bytes", MEBIBYTE)
    assert response.json["received"] == MEBIBYTE + 1


@pytest.mark.parametrize(("size", "status"), [(MEBIBYTE, 200), (MEBIBYTE + 1, 413)], ids=["within", "beyond"])
def test_a_body_sent_in_chunks_has_the_same_limit(app: Flask, size: int, status: int) -> None:
    # A server hands on a chunked body without Content-Length, and marks its end itself.
    environment = EnvironBuilder(
        "/v1/stability", method="POST", content_type="application/json"
    ).get_environ()
    environment.pop("CONTENT_LENGTH", None)
    environment |= {
        "wsgi.input": io.BytesIO(WHOLE.ljust(size)),
        "wsgi.input_terminated": True,
        "HTTP_TRANSFER_ENCODING": "chunked",
    }
    response = TestResponse(*run_wsgi_app(app, environment), Request(environment))
    assert response.status_code == status
    if status == 413:
        assert_problem(response, 413)
        assert response.json["received"] is None


def test_a_body_that_breaks_off_is_a_bad_request(app: Flask) -> None:
    builder = EnvironBuilder("/v1/stability", method="POST", content_type="application/json")
    environment = builder.get_environ() | {"CONTENT_LENGTH": "500", "wsgi.input": io.BytesIO(WHOLE)}
    response = TestResponse(*run_wsgi_app(app, environment), Request(environment))
    assert_problem(response, 400)
    assert response.json["type"] == "/problems/bad-request"


def test_a_query_has_the_limit_of_a_body(client: FlaskClient) -> None:
    response = client.get(f"/v1/stability?numerator=1&denominator=1,1&name={'n' * MEBIBYTE}")
    assert_problem(response, 413)
    assert response.json["received"] == MEBIBYTE + len("numerator=1&denominator=1,1&name=")


@pytest.mark.parametrize(
    "query", ["question=%", "question=%ZZ", "%", "&&&", "=", "a=%00", "question=\xff", ";;"]
)
def test_a_query_out_of_shape_is_no_failure(client: FlaskClient, query: str) -> None:
    assert_problem(client.get(f"/v1/stability?{query}"), 400, 422)


@given(data=st.binary(max_size=200))
@example(data=b'{"numerator": [1], "denominator": [1], "name": "\\ud800"}')
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture])
def test_random_bytes_are_refused(client: FlaskClient, data: bytes) -> None:
    assert_problem(post(client, data), 400, 422)


@given(
    position=st.integers(0, len(WHOLE) - 1),
    replacement=st.binary(min_size=0, max_size=3),
    width=st.integers(0, 3),
)
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture])
def test_a_question_with_a_few_bytes_changed_is_answered_or_refused(
    client: FlaskClient, position: int, replacement: bytes, width: int
) -> None:
    response = post(client, WHOLE[:position] + replacement + WHOLE[position + width :])
    if response.status_code != 200:
        assert_problem(response, 400, 422)


@given(document=faulty_questions())
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=200)
def test_a_question_with_something_wrong_is_answered_or_refused(client: FlaskClient, document: Any) -> None:
    response = post(client, body(document))
    if response.status_code != 200:
        assert_problem(response, 400, 422)
