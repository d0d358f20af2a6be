"""Every limit in force is listed."""

from dataclasses import replace

from flask.testing import FlaskClient

from schemas.limits import LimitListSchema, QuestionLimits
from service import create_app
from service.settings import SETTINGS, Limits
from tests.wire import HOIST


def values(client: FlaskClient) -> dict[str, int]:
    """Each listed limit's value by its name."""
    return {each["name"]: each["value"] for each in client.get("/v1/limits").json["limits"]}


def test_the_defaults_are_those_of_the_contract(client: FlaskClient) -> None:
    assert values(client) == {
        "body_bytes": 1_048_576,
        "degree": 60,
        "digits": 120,
        "exponent": 60,
        "blocks": 64,
        "list_entries": 256,
        "polynomial_bits": 20_000,
        "depth": 32,
        "members": 100,
        "name_length": 200,
        "points": 5000,
        "faults_listed": 500,
    }


def test_the_list_is_as_documented(client: FlaskClient) -> None:
    listed = client.get("/v1/limits").json
    assert LimitListSchema().validate(listed) == {}
    assert {each["setting"] for each in listed["limits"]} == {None, *(each.variable for each in SETTINGS)}


def test_a_limit_that_is_set_is_listed_and_kept() -> None:
    limits = replace(Limits(), question=QuestionLimits(degree=2), polynomial_bits=64, body_bytes=2_000)
    client = create_app(limits).test_client()
    assert client.get("/reference").status_code == 200
    assert values(client) == {
        **values(create_app(Limits()).test_client()),
        "degree": 2,
        "polynomial_bits": 64,
        "body_bytes": 2_000,
    }
    assert client.post("/v1/stability", json=dict(HOIST)).json["errors"][0]["allowed"] == 2
    assert client.post("/v1/stability", data=b" " * 2_001).status_code == 415
    assert client.post("/v1/stability", data=b" " * 2_001, content_type="application/json").status_code == 413
    heavy = client.post("/v1/stability", json={"numerator": ["9" * 30], "denominator": [1, 1]})
    assert (heavy.json["type"], heavy.json["allowed"]) == ("/problems/question-too-heavy", 64)
