"""What holds for every address and every response."""

import pytest
from flask.testing import FlaskClient

from service import create_app
from service.http import stability
from service.settings import BadSettings
from tests.service.http.test_problems import failing
from tests.wire import HOIST


@pytest.mark.parametrize(
    "address",
    [
        "/v1",
        "/v1/stability/",
        "//v1/stability",
        "/v1//stability",
        "/V1/stability",
        "/v2/stability",
        "/problems/",
        "/problems/not-json/",
        "/favicon.ico",
        "/static/halfturn.css",
        "/..%2f..%2fetc/passwd",
        "/\x00",
        "/é",
    ],
)
def test_another_address_is_a_problem_of_its_own(client: FlaskClient, address: str) -> None:
    response = client.get(address)
    assert (response.status_code, response.content_type) == (404, "application/problem+json")
    assert response.json["type"] == "/problems/not-found"


@pytest.mark.parametrize(
    ("address", "method", "allowed"),
    [
        ("/v1/stability", "DELETE", "GET, HEAD, OPTIONS, POST"),
        ("/v1/stability", "PUT", "GET, HEAD, OPTIONS, POST"),
        ("/v1/stability", "TRACE", "GET, HEAD, OPTIONS, POST"),
        ("/v1/limits", "POST", "GET, HEAD, OPTIONS"),
        ("/healthz", "POST", "GET, HEAD, OPTIONS"),
        ("/", "PATCH", "GET, HEAD, OPTIONS"),
        ("/assets/halfturn.css", "POST", "GET, HEAD, OPTIONS"),
    ],
)
def test_another_method_is_told_which_there_are(
    client: FlaskClient, address: str, method: str, allowed: str
) -> None:
    response = client.open(address, method=method)
    assert (response.status_code, response.content_type) == (405, "application/problem+json")
    assert response.headers["Allow"] == allowed
    assert allowed in response.json["detail"]


def test_every_response_is_closed_against_reinterpretation(
    client: FlaskClient, monkeypatch: pytest.MonkeyPatch
) -> None:
    responses = [
        client.get(address)
        for address in ("/", "/reference", "/v1/limits", "/healthz", "/nowhere", "/assets/halfturn.css")
    ]
    responses.append(client.post("/v1/stability", json=dict(HOIST)))
    responses.append(client.delete("/v1/stability"))
    responses.append(client.get("/v1/limits", headers={"If-None-Match": "*"}))
    monkeypatch.setattr(stability, "answer_document", failing(ValueError()))
    responses.append(client.post("/v1/stability", json=dict(HOIST)))
    assert {response.status_code for response in responses} == {200, 304, 404, 405, 500}
    for response in responses:
        assert response.headers["X-Content-Type-Options"] == "nosniff"
        assert response.headers["Referrer-Policy"] == "no-referrer"
        assert response.headers["X-Frame-Options"] == "DENY"
        assert response.headers["Content-Security-Policy"].startswith("default-src 'none'")
        assert "Set-Cookie" not in response.headers


def test_only_a_page_may_load_our_style(client: FlaskClient) -> None:
    assert "style-src" in client.get("/reference").headers["Content-Security-Policy"]
    assert "style-src" not in client.get("/v1/limits").headers["Content-Security-Policy"]
    assert "style-src" not in client.get("/nowhere").headers["Content-Security-Policy"]


def test_without_limits_the_environment_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HALFTURN_DEGREE", "2")
    refused = create_app().test_client().post("/v1/stability", json=dict(HOIST))
    assert refused.json["errors"][0]["allowed"] == 2


def test_an_application_is_not_built_from_settings_that_cannot_be(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HALFTURN_DEGREE", "many")
    with pytest.raises(BadSettings, match="HALFTURN_DEGREE is 'many'"):
        create_app()
