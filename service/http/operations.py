"""What each address does, in OpenAPI's terms; the words here are what /reference shows."""

from typing import Any, Final

from service.analysis.cautions import GENERAL
from service.exchange import answer_document
from service.http.problem_types import PROBLEM_TYPES

TITLE: Final = "Halfturn"

CAUTION: Final = GENERAL.text

DESCRIPTION: Final = (
    "For which gains is a feedback loop stable, and how near is the gain in service to the edge? A "
    "question holds a loop's transfer function L(s), continuous and without dead time; the answer "
    "holds every band of the gain K from minus to plus infinity with its count of unstable closed-loop"
    " poles, its encirclements and its verdict, and every edge between bands with its cause and "
    "frequency. Every count is exact: numbers are taken as they are written, no tolerance decides "
    "anything, and every count is made twice.\n\nAn answer is a function of the question alone: the "
    "same question gets the same bytes. Within /v1 fields are only ever added. Every error is a "
    "problem document (RFC 9457) whose type is the address of a page that explains it; an address that"
    " is not listed here answers 404, a method that is not listed 405.\n\n"
    f"{CAUTION}"
)

QUESTION: Final = {
    "name": "hoist drive, speed loop",
    "numerator": ["5/2", 10],
    "denominator": [1, "1/3", 4, 0],
    "gain": "0.1",
    "curve": False,
}
PLAIN_QUERY: Final = "numerator=2.5,10&denominator=1,1/3,4,0&gain=0.1&curve=false"

_JSON: Final = "application/json"
_PROBLEM: Final = "application/problem+json"


def paths() -> dict[str, dict[str, Any]]:
    """List every operation by its address and method."""
    listed = {
        "/v1/stability": {"post": _put(), "get": _put_in_address()},
        "/v1/limits": {"get": _document("Every limit in force", "LimitList", "limits")},
        "/healthz": {"get": _probe("Liveness", "alive", "The process answers.")},
        "/readyz": {"get": _ready()},
        "/openapi.json": {"get": _document("This document", None, "document")},
    }
    for address, summary in (
        ("/", "The start page"),
        ("/reference", "This document as a page"),
        ("/problems", "All problem types, as a page"),
    ):
        listed[address] = {"get": _page(summary)}
    listed["/problems/{name}"] = {"get": _page("One problem type explained", 404) | {"parameters": [_NAME]}}
    return listed


def _put() -> dict[str, Any]:
    return {
        "operationId": "answer",
        "summary": "Answer a question",
        "description": "The question is the body.",
        "requestBody": {
            "required": True,
            "content": {_JSON: {"schema": "Question", "examples": {"hoist": {"value": QUESTION}}}},
        },
        "responses": {"200": _answer()} | _problems(400, 406, 413, 415, 422, 500),
    }


def _put_in_address() -> dict[str, Any]:
    return {
        "operationId": "answerAddress",
        "summary": "Answer a question put in the address",
        "description": (
            "The same answer, byte for byte. The question stands whole in question, or in plain fields for "
            "polynomials; a field given twice is an error. In an address a plus sign means a space: write "
            f"1e5, or %2B. For example /v1/stability?{PLAIN_QUERY}"
        ),
        "parameters": [_parameter(*row) for row in _PARAMETERS],
        "responses": {"200": _answer() | {"headers": _ETAG}, "304": _UNCHANGED}
        | _problems(400, 406, 413, 422, 500),
    }


# name, what it holds, an example
_PARAMETERS: Final = (
    ("question", "The question as JSON, URL-encoded; no other field may stand beside it.", None),
    ("numerator", "Coefficients in descending powers of s, parted by commas.", "2.5,10"),
    ("denominator", "Coefficients in descending powers of s, parted by commas.", "1,1/3,4,0"),
    ("gain", "The commissioned gain.", "0.1"),
    ("feedback", "negative or positive.", "negative"),
    ("detour", "right or left.", "right"),
    ("gain_window", "Lowest and highest gain to report, parted by a comma.", "-1,1"),
    ("evidence", "true or false.", "false"),
    ("curve", "false; the answer's curve is null in this version.", "false"),
    ("name", "Free text, at most 200 characters.", "hoist drive"),
)


def _parameter(name: str, description: str, example: str | None) -> dict[str, Any]:
    shown = {} if example is None else {"example": example}
    return {"name": name, "in": "query", "description": description, "schema": {"type": "string"}, **shown}


_NAME: Final = {
    "name": "name",
    "in": "path",
    "required": True,
    "description": "The problem type.",
    "schema": {"type": "string", "enum": list(PROBLEM_TYPES)},
}
_ETAG: Final = {
    "ETag": {"description": "A strong tag over the bytes sent.", "schema": {"type": "string"}},
    "Cache-Control": {"description": "How long it may be kept.", "schema": {"type": "string"}},
}
_UNCHANGED: Final = {"description": "If-None-Match names the bytes that would be sent."}


def _answer() -> dict[str, Any]:
    example = answer_document(QUESTION)
    return {
        "description": "The answer.",
        "content": {_JSON: {"schema": "Answer", "examples": {"hoist": {"value": example}}}},
    }


def _document(summary: str, schema: str | None, identifier: str) -> dict[str, Any]:
    return {
        "operationId": identifier,
        "summary": summary,
        "responses": {
            "200": {
                "description": f"{summary}.",
                "headers": _ETAG,
                "content": {_JSON: {"schema": schema or {"type": "object"}}},
            },
            "304": _UNCHANGED,
        }
        | _problems(406),
    }


def _probe(summary: str, identifier: str, description: str) -> dict[str, Any]:
    return {
        "operationId": identifier,
        "summary": summary,
        "responses": {"200": {"description": description, "content": {_JSON: {"schema": "Probe"}}}},
    }


def _ready() -> dict[str, Any]:
    ready = _probe("Readiness", "ready", "The process answers, and gets a known answer right.")
    ready["responses"] |= _problems(503)
    return ready


def _page(summary: str, *statuses: int) -> dict[str, Any]:
    return {
        "summary": summary,
        "responses": {
            "200": {"description": "A page.", "headers": _ETAG, "content": {"text/html": {}}},
            "304": _UNCHANGED,
        }
        | _problems(*statuses, 406),
    }


def _problems(*statuses: int) -> dict[str, Any]:
    """Describe a response for each status: the problem types that come with it."""
    return {str(status): _problem(status) for status in statuses}


def _problem(status: int) -> dict[str, Any]:
    kinds = [kind for kind in PROBLEM_TYPES.values() if kind.status == status]
    return {
        "description": " Or: ".join(f"{kind.title} ({kind.reference})." for kind in kinds),
        "content": {_PROBLEM: {"schema": "Problem"}},
    }
