"""What a request may bring and what it will take."""

import pytest
from flask.testing import FlaskClient

from tests.wire import HOIST, body


@pytest.mark.parametrize(
    "content_type",
    [
        "application/json",
        "application/json; charset=utf-8",
        'Application/JSON;charset="UTF-8"',
        "application/json;",
    ],
)
def test_json_in_utf8_is_read(client: FlaskClient, content_type: str) -> None:
    response = client.post("/v1/stability", data=body(HOIST), content_type=content_type)
    assert response.status_code == 200


@pytest.mark.parametrize(
    "headers",
    [
        pytest.param({}, id="none"),
        pytest.param({"Content-Type": ""}, id="empty"),
        pytest.param({"Content-Type": "text/plain"}, id="text"),
        pytest.param({"Content-Type": "application/x-www-form-urlencoded"}, id="form"),
        pytest.param({"Content-Type": "application/jsonp"}, id="nearly"),
        pytest.param({"Content-Type": "application/json; charset=latin-1"}, id="charset"),
        pytest.param({"Content-Type": "application/json", "Content-Encoding": "gzip"}, id="compressed"),
        pytest.param({"Content-Type": "é\x00" * 200}, id="garbage"),
    ],
)
def test_any_other_body_is_refused(client: FlaskClient, headers: dict[str, str]) -> None:
    response = client.post("/v1/stability", data=body(HOIST), headers=headers)
    assert response.status_code == 415
    assert response.json["type"] == "/problems/unsupported-media-type"


@pytest.mark.parametrize(
    "accept",
    [
        "*/*",
        "application/json",
        "application/*",
        "text/html, */*;q=0.1",
        "application/problem+json, application/json;q=0.5",
        "application/json;q=1.0, text/html",
        "",
    ],
)
def test_who_takes_json_gets_it(client: FlaskClient, accept: str) -> None:
    response = client.post("/v1/stability", json=dict(HOIST), headers={"Accept": accept})
    assert response.status_code == 200
    assert response.content_type == "application/json"
    assert response.headers["Vary"] == "Accept"


@pytest.mark.parametrize(
    "accept", ["text/html", "application/json;q=0", "application/json;q=0, */*", "image/*", "application/xml"]
)
@pytest.mark.parametrize("method", ["POST", "GET"])
def test_who_does_not_take_json_is_told(client: FlaskClient, method: str, accept: str) -> None:
    response = client.open("/v1/stability", method=method, headers={"Accept": accept})
    assert response.status_code == 406
    assert response.content_type == "application/problem+json"
    assert "application/json" in response.json["detail"]


@pytest.mark.parametrize("address", ["/v1/limits", "/openapi.json"])
def test_documents_are_json_alone(client: FlaskClient, address: str) -> None:
    assert client.get(address, headers={"Accept": "text/html"}).status_code == 406
    assert client.get(address, headers={"Accept": "application/json"}).status_code == 200


@pytest.mark.parametrize("address", ["/", "/reference", "/problems", "/problems/not-json"])
def test_pages_are_html_alone(client: FlaskClient, address: str) -> None:
    assert client.get(address, headers={"Accept": "application/json"}).status_code == 406
    assert client.get(address, headers={"Accept": "text/html,*/*;q=0.8"}).status_code == 200


@pytest.mark.parametrize("address", ["/v1/limits", "/openapi.json", "/", "/reference", "/problems/not-json"])
def test_every_document_and_page_has_a_tag(client: FlaskClient, address: str) -> None:
    first = client.get(address)
    assert first.headers["Cache-Control"] == "no-cache"
    assert client.get(address, headers={"If-None-Match": first.headers["ETag"]}).status_code == 304
