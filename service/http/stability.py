"""The question over HTTP: the same answer, byte for byte, whether it came as a body or in the address."""

from typing import Final

from flask import Response, request

from schemas.reader import read_json
from service.exchange import answer_document, json_bytes
from service.http.negotiation import JSON, read_body, require_acceptable, require_json, tagged
from service.http.problems import too_large
from service.http.query import question_document
from service.settings import Limits

# An answer changes with the engine alone; an hour is how long a new engine may take to be noticed.
_AN_HOUR: Final = "public, max-age=3600"


class Stability:
    """The resource ``/v1/stability``."""

    def __init__(self, limits: Limits) -> None:
        self.limits = limits

    def post(self) -> Response:
        """Answer the question in the body."""
        require_acceptable(request, JSON)
        require_json(request)
        return self._answer(read_json(read_body(request, self.limits.body_bytes)), "no-store")

    def get(self) -> Response:
        """Answer the question in the address."""
        require_acceptable(request, JSON)
        query = request.query_string
        if len(query) > self.limits.body_bytes:
            raise too_large("query", self.limits.body_bytes, len(query))
        return self._answer(question_document(query), _AN_HOUR)

    def _answer(self, document: object, cache_control: str) -> Response:
        return tagged(request, json_bytes(answer_document(document, self.limits)), JSON, cache_control)
