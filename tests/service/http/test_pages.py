"""The pages: readable without any other host, and every link leads somewhere."""

import json
import re
from html.parser import HTMLParser

import pytest
from flask.testing import FlaskClient
from hypothesis import given
from hypothesis import strategies as st

from service.http.operations import CAUTION
from service.http.pages import pretty
from service.http.problem_types import PROBLEM_TYPES
from tests.wire import HOIST

PAGES = ["/", "/reference", "/problems", *(kind.reference for kind in PROBLEM_TYPES.values())]
VOID = {"meta", "link", "br"}


class Page(HTMLParser):
    """A page's links, anchors, elements and text; it holds every element to be closed."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.links: set[str] = set()
        self.anchors: set[str] = set()
        self.elements: set[str] = set()
        self.attributes: set[str] = set()
        self.open: list[str] = []
        self.text = ""
        self.feed(text)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.elements.add(tag)
        self.attributes |= {name for name, _ in attrs}
        if tag not in VOID:
            self.open.append(tag)
        for name, value in attrs:
            if name in {"href", "src", "action"}:
                self.links.add(value or "")
            if name == "id":
                assert value not in self.anchors
                self.anchors.add(value or "")

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.text += data


def read(client: FlaskClient, address: str) -> Page:
    """The page at ``address``."""
    response = client.get(address)
    assert response.status_code == 200
    page = Page(response.text)
    assert page.open == []
    return page


@pytest.mark.parametrize("address", PAGES)
def test_a_page_needs_nothing_from_elsewhere_and_runs_nothing(client: FlaskClient, address: str) -> None:
    page = read(client, address)
    assert all(link.startswith(("/", "#")) and not link.startswith("//") for link in page.links)
    assert not page.elements & {"script", "style", "iframe", "object", "embed", "img", "base", "form"}
    assert not {name for name in page.attributes if name == "style" or name.startswith("on")}
    policy = client.get(address).headers["Content-Security-Policy"]
    assert "default-src 'none'" in policy
    assert "style-src 'self'" in policy
    assert "unsafe" not in policy


@pytest.mark.parametrize("address", PAGES)
def test_every_page_carries_the_caution(client: FlaskClient, address: str) -> None:
    assert CAUTION in " ".join(read(client, address).text.split())


def test_the_caution_is_the_one_in_every_answer(client: FlaskClient) -> None:
    cautions = client.post("/v1/stability", json=dict(HOIST)).json["cautions"]
    assert {"code": "linear_model_only", "text": CAUTION} in cautions


def test_every_link_leads_somewhere(client: FlaskClient) -> None:
    for address in PAGES:
        page = read(client, address)
        for link in page.links:
            target, _, anchor = link.partition("#")
            if target:
                assert client.get(target).status_code == 200, link
            else:
                assert anchor in page.anchors


def test_the_start_page_links_to_an_answer(client: FlaskClient) -> None:
    (link,) = (link for link in read(client, "/").links if link.startswith("/v1/stability?"))
    assert client.get(link).json["commissioned"]["verdict"] == "stable"


def test_the_reference_shows_every_address_schema_field_limit_and_problem(client: FlaskClient) -> None:
    document = client.get("/openapi.json").json
    page = read(client, "/reference")
    assert {f"get{address}" for address in document["paths"]} | {"post/v1/stability"} <= page.anchors
    assert {f"schema-{name}" for name in document["components"]["schemas"]} <= page.anchors
    names = {
        name for each in document["components"]["schemas"].values() for name in each.get("properties", {})
    }
    names |= {limit["name"] for limit in document["x-limits"]} | set(PROBLEM_TYPES)
    assert {name for name in names if name not in page.text} == set()
    assert document["info"]["description"].split("\n\n")[0] in page.text


def test_nothing_of_the_document_is_shown_as_markup_or_as_python(client: FlaskClient) -> None:
    text = client.get("/reference").text.replace("If-None-Match", "")
    assert "&#39;" in text or "&#34;" in text
    assert not re.search(r"\bNone\b|\bTrue\b|\bFalse\b|&lt;function|Undefined", text)


@pytest.mark.parametrize(
    ("address", "mimetype"), [("/assets/halfturn.css", "text/css"), ("/assets/mark.svg", "image/svg+xml")]
)
def test_assets_are_ours_and_ask_no_other_host(client: FlaskClient, address: str, mimetype: str) -> None:
    response = client.get(address)
    assert (response.status_code, response.mimetype) == (200, mimetype)
    assert not re.findall(r"url\(|@import|https?://(?!www\.w3\.org/2000/svg)", response.text)


def test_there_are_no_other_assets(client: FlaskClient) -> None:
    for name in ("no-such.css", "../templates/base.html", "%2e%2e/templates/base.html", ""):
        response = client.get(f"/assets/{name}")
        assert (response.status_code, response.mimetype) == (404, "application/problem+json")


@given(
    st.recursive(
        st.none() | st.booleans() | st.integers() | st.text(max_size=30),
        lambda inner: st.lists(inner, max_size=8) | st.dictionaries(st.text(max_size=9), inner, max_size=8),
        max_leaves=30,
    )
)
def test_what_is_written_for_people_is_still_the_document(node: object) -> None:
    assert json.loads(pretty(node)) == node


def test_what_fits_on_a_line_stands_on_a_line() -> None:
    node = {"a": [1, 2, 3], "b": {"c": "x" * 80}}
    assert pretty(node) == '{\n  "a": [1, 2, 3],\n  "b": {\n    "c": "' + "x" * 80 + '"\n  }\n}'
