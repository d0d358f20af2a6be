"""From whatever went wrong to a problem document: one place, one shape, nothing of the inside shown."""

from collections.abc import Mapping
from typing import Any

from flask import Flask, Response, current_app, request
from werkzeug.exceptions import HTTPException, MethodNotAllowed, NotFound

from schemas.problem import Fault, fault_document
from schemas.question import InvalidQuestion
from schemas.reader import NotJson
from service.analysis.errors import CountsDisagree, InvalidLoop, OutOfRange, TooHard, TooLarge
from service.exchange import json_bytes
from service.http import problem_types as types
from service.http.problem_types import ProblemType

PROBLEM_JSON = "application/problem+json"

_FIRST_FAILURE = 500


class Problem(Exception):
    """A problem to be sent: its type, this occurrence in words, further members, further headers."""

    def __init__(
        self,
        kind: ProblemType,
        detail: str,
        members: Mapping[str, Any] | None = None,
        headers: Mapping[str, str] | None = None,
    ) -> None:
        super().__init__(detail)
        self.kind = kind
        self.detail = detail
        self.members = members or {}
        self.headers = headers or {}

    def document(self) -> dict[str, Any]:
        """Give the problem document."""
        return problem_document(self.kind, self.detail, self.members)


def problem_document(kind: ProblemType, detail: str, members: Mapping[str, Any]) -> dict[str, Any]:
    """Write a problem document of ``kind`` (RFC 9457, section 3)."""
    return {
        "type": kind.reference,
        "title": kind.title,
        "status": kind.status,
        "detail": detail,
        **members,
    }


def register_problems(app: Flask) -> None:
    """Have every error of ``app`` answered with a problem document."""
    app.register_error_handler(Exception, problem_response)


def problem_response(error: Exception) -> Response:
    """Answer ``error``; what is the service's own failure goes to the log as well."""
    problem = problem_of(error)
    if problem.kind.status >= _FIRST_FAILURE and error is not problem:
        current_app.logger.error("%s %s failed", request.method, request.path, exc_info=error)
    response = Response(json_bytes(problem.document()), status=problem.kind.status, mimetype=PROBLEM_JSON)
    response.headers["Cache-Control"] = "no-store"
    response.headers.update(problem.headers)
    return response


def problem_of(error: Exception) -> Problem:  # noqa: PLR0911 (a return a problem)
    """Say which problem ``error`` is; the text of an unforeseen one is never shown."""
    match error:
        case Problem():
            return error
        case NotJson():
            limit = {"limit": error.limit, "allowed": error.allowed, "received": None} if error.limit else {}
            return Problem(types.NOT_JSON, error.detail, limit)
        case InvalidQuestion():
            return _invalid(error.faults, error.count)
        case InvalidLoop():
            return _invalid((Fault(str(error)),), 1)
        case TooLarge():
            members = {"limit": "polynomial_bits", "allowed": error.allowed, "received": error.received}
            return Problem(types.QUESTION_TOO_HEAVY, str(error), members)
        case TooHard():
            return Problem(types.QUESTION_TOO_HEAVY, str(error))
        case OutOfRange():
            return Problem(types.OUT_OF_RANGE, str(error))
        case CountsDisagree():
            return Problem(types.COUNTS_DISAGREE, types.COUNTS_DISAGREE.example.detail)
        case HTTPException():
            return _http_problem(error)
        case _:
            return Problem(types.INTERNAL_ERROR, types.INTERNAL_ERROR.example.detail)


def _invalid(faults: tuple[Fault, ...], count: int) -> Problem:
    detail = (
        f"The question has {count} faults; errors lists {'them' if count == len(faults) else 'the first'}."
    )
    if count == 1:
        detail = "The question has one fault; errors names it."
    return Problem(types.INVALID_QUESTION, detail, {"errors": [fault_document(fault) for fault in faults]})


def _http_problem(error: HTTPException) -> Problem:
    match error:
        case NotFound():
            return Problem(types.NOT_FOUND, "There is nothing at this address.")
        case MethodNotAllowed():
            allowed = ", ".join(sorted(error.valid_methods or ()))
            detail = f"This address takes {allowed}."
            return Problem(types.METHOD_NOT_ALLOWED, detail, headers={"Allow": allowed})
        case _:
            return Problem(types.BAD_REQUEST, types.BAD_REQUEST.example.detail)


def too_large(what: str, allowed: int, received: int | None) -> Problem:
    """Make the problem of a body or query beyond ``allowed`` bytes; ``received`` None: not counted."""
    counted = "more" if received is None else received
    return Problem(
        types.TOO_LARGE,
        f"The {what} is larger than allowed: body_bytes, allowed {allowed}, received {counted}.",
        {"limit": "body_bytes", "allowed": allowed, "received": received},
    )
