"""Every problem type has its page, and the page's example is what really comes."""

import pytest
from flask.testing import FlaskClient

from schemas.problem import ProblemSchema
from service.http.problem_types import PROBLEM_TYPES, ProblemType
from service.http.problems import problem_document

STABLE_NAMES = {
    "not-json",
    "bad-request",
    "not-found",
    "method-not-allowed",
    "not-acceptable",
    "too-large",
    "unsupported-media-type",
    "invalid-question",
    "question-too-heavy",
    "out-of-range",
    "counts-disagree",
    "internal-error",
    "not-ready",
}

KINDS = [pytest.param(kind, id=kind.name) for kind in PROBLEM_TYPES.values()]


def test_the_names_are_those_the_contract_promises() -> None:
    assert set(PROBLEM_TYPES) == STABLE_NAMES


@pytest.mark.parametrize("kind", KINDS)
def test_a_type_is_the_address_of_the_page_that_explains_it(client: FlaskClient, kind: ProblemType) -> None:
    page = client.get(kind.reference)
    assert page.status_code == 200
    for heading in ("What happened", "What to do", "Example"):
        assert f"<h2>{heading}</h2>" in page.text
    assert kind.title in page.text


@pytest.mark.parametrize("kind", KINDS)
def test_an_example_is_a_valid_problem_document(kind: ProblemType) -> None:
    document = problem_document(kind, kind.example.detail, kind.example.members)
    assert ProblemSchema().validate(document) == {}


@pytest.mark.parametrize("kind", [each for each in KINDS if each.values[0].example.request])
def test_the_request_of_an_example_gets_the_document_of_the_example(
    client: FlaskClient, kind: ProblemType
) -> None:
    first, *lines = kind.example.request.splitlines()
    method, address = first.split(" ")
    headers = dict(line.split(": ") for line in lines)
    data = kind.example.body.encode() or b" " * int(headers.pop("Content-Length", 0))
    response = client.open(address, method=method, headers=headers, data=data)
    assert response.status_code == kind.status
    assert response.json == problem_document(kind, kind.example.detail, kind.example.members)


def test_there_is_no_page_for_an_unknown_type(client: FlaskClient) -> None:
    response = client.get("/problems/no-such")
    assert (response.status_code, response.json["type"]) == (404, "/problems/not-found")
