"""Whatever goes wrong becomes a problem document."""

import logging
from collections.abc import Callable
from typing import NoReturn

import pytest
from flask.testing import FlaskClient

from schemas.problem import ProblemSchema
from service.analysis.errors import CountsDisagree, InvalidLoop, OutOfRange, TooLarge
from service.http import stability
from tests.wire import HOIST

INNERMOST = "the innermost secret"


def failing(error: Exception) -> Callable[..., NoReturn]:
    """A function that fails with ``error``."""

    def fail(*_: object, **__: object) -> NoReturn:
        raise error

    return fail


@pytest.mark.parametrize(
    ("error", "status", "name"),
    [
        (InvalidLoop("The denominator is zero."), 422, "invalid-question"),
        (TooLarge(allowed=20_000, received=24_310), 422, "question-too-heavy"),
        (OutOfRange("An edge overflows."), 422, "out-of-range"),
        (CountsDisagree(INNERMOST), 500, "counts-disagree"),
        (ZeroDivisionError(INNERMOST), 500, "internal-error"),
        (RecursionError(INNERMOST), 500, "internal-error"),
        (MemoryError(INNERMOST), 500, "internal-error"),
    ],
    ids=lambda value: type(value).__name__ if isinstance(value, Exception) else str(value),
)
def test_each_error_of_the_analysis_is_a_problem_of_its_own(
    client: FlaskClient, monkeypatch: pytest.MonkeyPatch, error: Exception, status: int, name: str
) -> None:
    monkeypatch.setattr(stability, "answer_document", failing(error))
    response = client.post("/v1/stability", json=dict(HOIST))
    assert (response.status_code, response.json["type"]) == (status, f"/problems/{name}")
    assert ProblemSchema().validate(response.json) == {}
    assert (str(error) in response.text) == (status < 500)


def test_a_failure_of_the_service_goes_to_the_log_and_not_to_the_client(
    client: FlaskClient, monkeypatch: pytest.MonkeyPatch, caplog: pytest.LogCaptureFixture
) -> None:
    monkeypatch.setattr(stability, "answer_document", failing(ZeroDivisionError(INNERMOST)))
    with caplog.at_level(logging.ERROR):
        response = client.post("/v1/stability", json=dict(HOIST))
    assert INNERMOST in caplog.text
    assert INNERMOST not in response.text
    assert "Traceback" not in response.text


def test_a_refusal_does_not_go_to_the_log(client: FlaskClient, caplog: pytest.LogCaptureFixture) -> None:
    client.post("/v1/stability", data=b"{", content_type="application/json")
    assert caplog.text == ""


def test_a_question_beyond_the_limit_of_bits_names_it(client: FlaskClient) -> None:
    block = {"poles": [["1" * 60, "7" * 60]] * 30}
    response = client.post("/v1/stability", json={"blocks": [block]})
    assert response.status_code == 422
    assert response.json["type"] == "/problems/question-too-heavy"
    assert response.json["limit"] == "polynomial_bits"
    assert response.json["received"] > response.json["allowed"] == 20_000


def test_an_edge_beyond_the_doubles_is_out_of_range(client: FlaskClient) -> None:
    tiny = ["1e-60"] * 9
    question = {"blocks": [{"factor": each} for each in tiny] + [{"poles": [-1, -1, -1]}]}
    response = client.post("/v1/stability", json=question)
    assert (response.status_code, response.json["type"]) == (422, "/problems/out-of-range")


def test_every_fault_is_listed_with_its_pointer(client: FlaskClient) -> None:
    response = client.post("/v1/stability", json={"numerator": [True], "denominator": [0], "x": "1" * 500})
    assert response.status_code == 422
    assert response.content_type == "application/problem+json"
    assert [each["pointer"] for each in response.json["errors"]] == ["/denominator", "/numerator/0", "/x"]
    assert response.json["detail"] == "The question has 3 faults; errors lists them."


def test_one_fault_is_told_as_one(client: FlaskClient) -> None:
    response = client.post("/v1/stability", json={**HOIST, "gain": "x"})
    assert response.json["detail"] == "The question has one fault; errors names it."


def test_faults_without_number_make_no_endless_document(client: FlaskClient) -> None:
    response = client.post("/v1/stability", json={"blocks": [{"poles": [True] * 256}] * 64})
    assert response.status_code == 422
    assert response.json["detail"] == "The question has 16384 faults; errors lists the first."
    assert len(response.json["errors"]) == 500


def test_half_a_surrogate_pair_in_a_key_comes_back_as_its_escape(client: FlaskClient) -> None:
    response = client.post(
        "/v1/stability",
        data=b'{"numerator": [1], "denominator": [1], "\\ud800": 1}',
        content_type="application/json",
    )
    assert response.status_code == 422
    assert b'"/\\ud800"' in response.data


def test_a_problem_is_not_kept(client: FlaskClient) -> None:
    assert client.get("/v1/stability").headers["Cache-Control"] == "no-store"
