"""The pages: start, reference and problem types, and the OpenAPI document they are rendered from."""

import json
from functools import cached_property
from typing import Any, Final

from flask import Response, render_template, request

from service.exchange import json_bytes
from service.http import problem_types as types
from service.http.negotiation import HTML, JSON, require_acceptable, tagged
from service.http.openapi import openapi_document
from service.http.operations import CAUTION, PLAIN_QUERY
from service.http.problem_types import PROBLEM_TYPES, ProblemType
from service.http.problems import Problem, problem_document
from service.settings import Limits
from service.version import ENGINE

_LINE_LENGTH: Final = 80


class Pages:
    """Everything sent that is no answer; each is written once, when it is first asked for."""

    def __init__(self, limits: Limits) -> None:
        self.limits = limits

    def start(self) -> Response:
        """Send the start page."""
        return _page("start.html", query=PLAIN_QUERY)

    def openapi(self) -> Response:
        """Send the OpenAPI document."""
        require_acceptable(request, JSON)
        return tagged(request, json_bytes(self._openapi), JSON, "no-cache")

    def reference(self) -> Response:
        """Send the OpenAPI document as a page."""
        return _page("reference.html", document=self._openapi, problem_types=PROBLEM_TYPES.values())

    def problems(self) -> Response:
        """Send the list of all problem types."""
        return _page("problems.html", problem_types=PROBLEM_TYPES.values())

    def problem(self, name: str) -> Response:
        """Send the page of one problem type."""
        kind = PROBLEM_TYPES.get(name)
        if kind is None:
            raise Problem(types.NOT_FOUND, types.NOT_FOUND.example.detail)
        return _page("problem.html", kind=kind, example=_example(kind))

    @cached_property
    def _openapi(self) -> dict[str, Any]:
        return openapi_document(self.limits)


def _page(template: str, **values: Any) -> Response:
    require_acceptable(request, HTML)
    page = render_template(template, caution=CAUTION, engine=ENGINE, pretty=pretty, **values)
    return tagged(request, page.encode(), f"{HTML}; charset=utf-8", "no-cache")


def _example(kind: ProblemType) -> str:
    return pretty(problem_document(kind, kind.example.detail, kind.example.members))


def pretty(node: Any, indent: int = 0) -> str:
    """Write the JSON ``node`` for people to read: what fits on a line stands on a line."""
    line = json.dumps(node, ensure_ascii=False)
    if indent + len(line) <= _LINE_LENGTH or not isinstance(node, dict | list):
        return line
    inner, before = indent + 2, " " * (indent + 2)
    if isinstance(node, dict):
        entries = [f"{before}{json.dumps(key)}: {pretty(value, inner)}" for key, value in node.items()]
        return "{\n" + ",\n".join(entries) + "\n" + " " * indent + "}"
    return "[\n" + ",\n".join(before + pretty(each, inner) for each in node) + "\n" + " " * indent + "]"
