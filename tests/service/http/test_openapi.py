"""The OpenAPI document says what the service does, and the service does what it says."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import pytest
from flask.testing import FlaskClient
from hypothesis import HealthCheck, given, settings
from jsonschema import Draft202012Validator
from openapi_spec_validator import OpenAPIV31SpecValidator
from referencing import Registry, Resource
from referencing.jsonschema import DRAFT202012

from schemas.limits import QuestionLimits
from schemas.question import QuestionSchema
from service.http import probes, stability
from service.http.limits import limit_list
from service.http.openapi import openapi_document
from service.http.operations import PLAIN_QUERY, QUESTION
from service.http.problem_types import PROBLEM_TYPES
from service.settings import Limits
from tests.service.http.test_problems import failing
from tests.wire import HOIST, body, questions

JSON = "application/json"
DOCUMENT = openapi_document(Limits())


def validator(component: str) -> Draft202012Validator:
    """A validator of one of the document's schemas."""
    resource = Resource.from_contents(DOCUMENT, default_specification=DRAFT202012)
    registry: Registry[Any] = Registry().with_resource("openapi", resource)
    return Draft202012Validator({"$ref": f"openapi#/components/schemas/{component}"}, registry=registry)


def test_the_document_is_valid_openapi() -> None:
    assert DOCUMENT["openapi"].startswith("3.1")
    assert list(OpenAPIV31SpecValidator(DOCUMENT).iter_errors()) == []


def test_the_document_is_what_is_sent(client: FlaskClient) -> None:
    assert client.get("/openapi.json").json == DOCUMENT


def test_every_schema_is_described() -> None:
    for schema in DOCUMENT["components"]["schemas"].values():
        assert schema["description"]
        for node in schema.get("properties", {}).values():
            assert node["description"]


def test_every_field_of_a_question_is_documented() -> None:
    documented = DOCUMENT["components"]["schemas"]["Question"]["properties"]
    assert set(documented) == set(QuestionSchema(QuestionLimits()).fields)


def test_the_limits_in_force_are_stated() -> None:
    assert DOCUMENT["x-limits"] == limit_list(Limits())["limits"]
    tight = openapi_document(Limits(question=QuestionLimits(blocks=3, list_entries=7)))["components"][
        "schemas"
    ]
    assert tight["Question"]["properties"]["blocks"]["maxItems"] == 3
    assert tight["Block"]["properties"]["poles"]["maxItems"] == 7


def test_examples_are_what_the_service_answers(client: FlaskClient) -> None:
    post = DOCUMENT["paths"]["/v1/stability"]["post"]
    question = post["requestBody"]["content"][JSON]["examples"]["hoist"]["value"]
    answer = post["responses"]["200"]["content"][JSON]["examples"]["hoist"]["value"]
    assert question == QUESTION
    assert client.post("/v1/stability", json=question).json == answer
    assert client.get(f"/v1/stability?{PLAIN_QUERY}").json == {
        **answer,
        "loop": {**answer["loop"], "name": None},
    }


@given(document=questions())
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=60)
def test_question_and_answer_are_as_their_schemas_say(client: FlaskClient, document: dict[str, Any]) -> None:
    response = client.post("/v1/stability", data=body(document), content_type=JSON)
    assert list(validator("Question").iter_errors(document)) == []
    assert list(validator("Answer").iter_errors(response.json)) == []


@pytest.mark.parametrize(
    "document",
    [
        {},
        {"numerator": [1]},
        {"numerator": [1], "denominator": [1], "blocks": [{"factor": 1}]},
        {"blocks": []},
        {"blocks": [{}]},
        {"blocks": [{"numerator": [1], "denominator": [1], "factor": 1}]},
        {"blocks": [{"poles": [[1]]}]},
        {**HOIST, "numerator": []},
        {**HOIST, "numerator": [True]},
        {**HOIST, "numerator": ["1 "]},
        {**HOIST, "numerator": ["1E5"]},
        {**HOIST, "numerator": [0] * 257},
        {**HOIST, "gian": 1},
        {**HOIST, "feedback": "both"},
        {**HOIST, "curve": True},
        {**HOIST, "curve": {"points": 9}},
        {**HOIST, "gain_window": [1]},
        {**HOIST, "name": "x" * 201},
        {**HOIST, "evidence": None},
    ],
    ids=lambda each: str(each)[-40:],
)
def test_what_the_service_refuses_for_its_form_the_schema_refuses_too(
    client: FlaskClient, document: dict[str, Any]
) -> None:
    response = client.post("/v1/stability", data=body(document), content_type=JSON)
    assert response.status_code == 422
    assert list(validator("Problem").iter_errors(response.json)) == []
    assert not validator("Question").is_valid(document)


Breaking = Callable[[pytest.MonkeyPatch], None]


def _as_it_is(_patch: pytest.MonkeyPatch) -> None:
    pass


def _fails(patch: pytest.MonkeyPatch) -> None:
    patch.setattr(stability, "answer_document", failing(ZeroDivisionError()))


def _unready(patch: pytest.MonkeyPatch) -> None:
    patch.setattr(probes, "known_answer_holds", lambda _: False)


@dataclass(frozen=True)
class Reach:
    """A request that reaches a documented status; ``more`` of the address, and what breaks first."""

    address: str
    method: str
    status: int
    more: str = ""
    request: Mapping[str, Any] = field(default_factory=dict)
    breaking: Breaking = _as_it_is

    def __str__(self) -> str:
        return f"{self.method} {self.address} {self.status}"


QUERY = f"?{PLAIN_QUERY}"
CSV = {"headers": {"Accept": "text/csv"}}
TAGGED = {"headers": {"If-None-Match": "*"}}
POSTED = {"data": body(HOIST), "content_type": JSON}
KEPT = ("/v1/limits", "/openapi.json", "/", "/reference", "/problems", "/problems/{name}")

REACHED = [
    Reach("/v1/stability", "post", 200, request=POSTED),
    Reach("/v1/stability", "post", 400, request={**POSTED, "data": b"{"}),
    Reach("/v1/stability", "post", 406, request={**POSTED, **CSV}),
    Reach("/v1/stability", "post", 413, request={**POSTED, "data": b" " * 1_048_577}),
    Reach("/v1/stability", "post", 415, request={"data": b"{}"}),
    Reach("/v1/stability", "post", 422, request={**POSTED, "data": b"{}"}),
    Reach("/v1/stability", "post", 500, request=POSTED, breaking=_fails),
    Reach("/v1/stability", "get", 200, QUERY),
    Reach("/v1/stability", "get", 304, QUERY, TAGGED),
    Reach("/v1/stability", "get", 400, "?question={"),
    Reach("/v1/stability", "get", 406, QUERY, CSV),
    Reach("/v1/stability", "get", 413, f"?name={'n' * 1_048_576}"),
    Reach("/v1/stability", "get", 422),
    Reach("/v1/stability", "get", 500, QUERY, breaking=_fails),
    Reach("/healthz", "get", 200),
    Reach("/readyz", "get", 200),
    Reach("/readyz", "get", 503, breaking=_unready),
    *(Reach(address, "get", 200) for address in KEPT),
    *(Reach(address, "get", 304, request=TAGGED) for address in KEPT),
    *(Reach(address, "get", 406, request=CSV) for address in KEPT),
    Reach("/problems/{name}", "get", 404),
]


@pytest.mark.parametrize("reach", REACHED, ids=str)
def test_a_documented_status_is_reached_and_is_as_documented(
    client: FlaskClient, monkeypatch: pytest.MonkeyPatch, reach: Reach
) -> None:
    reach.breaking(monkeypatch)
    address = reach.address.format(name="no-such" if reach.status == 404 else "not-json")
    response = client.open(address + reach.more, method=reach.method.upper(), **reach.request)
    assert response.status_code == reach.status
    documented = DOCUMENT["paths"][reach.address][reach.method]["responses"][str(reach.status)]
    forms = list(documented.get("content", {}))
    assert forms == ([] if reach.status == 304 else [response.mimetype])
    assert all(header in response.headers for header in documented.get("headers", {}))
    if response.mimetype == "application/problem+json":
        assert list(validator("Problem").iter_errors(response.json)) == []
        assert PROBLEM_TYPES[response.json["type"].removeprefix("/problems/")].status == reach.status


def test_every_documented_status_is_reached() -> None:
    documented = {
        (address, method, int(status))
        for address, operations in DOCUMENT["paths"].items()
        for method, operation in operations.items()
        if method in {"get", "post"}
        for status in operation["responses"]
    }
    assert documented == {(reach.address, reach.method, reach.status) for reach in REACHED}


def test_every_address_of_the_application_is_documented(client: FlaskClient) -> None:
    rules = {
        (rule.rule.replace("<", "{").replace(">", "}"), method.lower())
        for rule in client.application.url_map.iter_rules()
        for method in rule.methods - {"HEAD", "OPTIONS"}
        if not rule.rule.startswith("/assets/")
    }
    assert rules == {(reach.address, reach.method) for reach in REACHED}
