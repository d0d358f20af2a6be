"""Asking a running service: the question goes out as it is, the answer comes back byte for byte."""

import json
from collections.abc import Iterator, Mapping
from time import monotonic
from typing import Any

import requests

from service.command.refusals import BadInput, Unreachable
from service.command.table import table_text

CONNECT_TIMEOUT_S = 5.0
READ_TIMEOUT_S = 30.0
WHOLE_TIMEOUT_S = 60.0
ANSWER_BYTES = 64 * 1024 * 1024
CHUNK_BYTES = 64 * 1024

PROBLEM_TYPE = "application/problem+json"

# The statuses that are about the question; whatever else comes is about the service.
REFUSALS = frozenset({400, 413, 422})


def remote_answer(service: str, question: bytes) -> bytes:
    """Ask the service at the base address ``service``, and give its answer document as its bytes.

    Raises `BadInput` where the question is at fault, and `Unreachable` where the service does not answer,
    has no room, fails, or is no Halfturn service.
    """
    address = f"{service.rstrip('/')}/v1/stability"
    try:
        with requests.post(
            address,
            data=question,
            headers={"Content-Type": "application/json", "Accept": f"application/json, {PROBLEM_TYPE}"},
            timeout=(CONNECT_TIMEOUT_S, READ_TIMEOUT_S),
            allow_redirects=False,
            stream=True,
        ) as response:
            return _checked(response, _body(response))
    except requests.RequestException as error:
        raise Unreachable(f"No service answers at {address}: {_reason(error)}") from error


def _body(response: requests.Response) -> bytes:
    """Read the body, and give up where it outgrows any answer or trickles."""
    deadline = monotonic() + WHOLE_TIMEOUT_S
    body = bytearray()
    for chunk in response.iter_content(CHUNK_BYTES):
        body += chunk
        if len(body) > ANSWER_BYTES or monotonic() > deadline:
            raise Unreachable(f"{response.url} sends more, or longer, than any answer takes.")
    return bytes(body)


def _checked(response: requests.Response, body: bytes) -> bytes:
    document = _document(body)
    if response.status_code == requests.codes.ok and _is_answer(document):
        return body
    if not _is_problem(response, document):
        status = response.status_code
        raise Unreachable(f"{response.url} answers with status {status}, and not as a Halfturn service does.")
    problem = f"{document['title']}. {document['detail']}"
    if response.status_code in REFUSALS:
        raise BadInput(problem, _faults(document))
    raise Unreachable(f"The service cannot answer ({response.status_code}). {problem}")


def _document(body: bytes) -> dict[str, Any]:
    try:
        document = json.loads(body)
    except (ValueError, RecursionError):
        return {}
    return document if isinstance(document, dict) else {}


def _is_answer(document: Mapping[str, Any]) -> bool:
    """Tell whether ``document`` says it is an answer and reads as one; a newer service may say more."""
    try:
        table_text(document)
    except (KeyError, IndexError, TypeError, ValueError):
        return False
    return str(document.get("engine")).startswith("halfturn ")


def _is_problem(response: requests.Response, document: Mapping[str, Any]) -> bool:
    return response.headers.get("Content-Type", "").startswith(PROBLEM_TYPE) and all(
        isinstance(document.get(member), str) for member in ("type", "title", "detail")
    )


def _faults(problem: Mapping[str, Any]) -> Iterator[tuple[str, str]]:
    errors = problem.get("errors")
    for fault in errors if isinstance(errors, list) else ():
        if isinstance(fault, dict):
            yield str(fault.get("pointer", "")), str(fault.get("detail", ""))


def _reason(error: requests.RequestException) -> str:
    """Find the innermost cause: what the operating system or the URL's reader said."""
    cause: BaseException = error
    while (inner := cause.__cause__ or cause.__context__) is not None:
        cause = inner
    return str(cause)
