"""What a request may bring, what it will take, and whether it has it already (RFC 9110)."""

import hashlib

from flask import Request, Response

from service.http import problem_types as types
from service.http.problems import Problem, too_large

JSON = "application/json"
HTML = "text/html"

# What nearly every client of the interface sends; anything else is parsed.
_TAKES_JSON = frozenset({None, "*/*", JSON})


def require_json(request: Request) -> None:
    """Raise a problem unless the body is declared as plain JSON in UTF-8."""
    if request.headers.get("Content-Type") == JSON and "Content-Encoding" not in request.headers:
        return
    charset = request.mimetype_params.get("charset", "utf-8").lower()
    if request.mimetype != JSON or charset != "utf-8":
        declared = request.headers.get("Content-Type")
        says = f"Content-Type says {declared[:80]!r}" if declared else "there is no Content-Type"
        raise Problem(types.UNSUPPORTED_MEDIA_TYPE, f"The body must be {JSON} in UTF-8; {says}.")
    if request.headers.get("Content-Encoding", "identity").lower() != "identity":
        raise Problem(types.UNSUPPORTED_MEDIA_TYPE, "The body must be sent without Content-Encoding.")


def read_body(request: Request, limit: int) -> bytes:
    """Read the body; raise a problem where it has more than ``limit`` bytes."""
    if (request.content_length or 0) > limit:
        raise too_large("body", limit, request.content_length)
    # A body sent in chunks is cut off at this length without a word: one byte more tells that it went on.
    request.max_content_length = limit + 1
    body = request.get_data(cache=False)
    if len(body) > limit:
        raise too_large("body", limit, None)
    return body


def require_acceptable(request: Request, form: str) -> None:
    """Raise a problem where the Accept header excludes ``form``, a media type."""
    if form == JSON and request.headers.get("Accept") in _TAKES_JSON:
        return
    if request.accept_mimetypes and not request.accept_mimetypes.quality(form):
        detail = f"This resource is sent as {form}, which the Accept header excludes."
        raise Problem(types.NOT_ACCEPTABLE, detail)


def tagged(request: Request, body: bytes, form: str, cache_control: str) -> Response:
    """Send ``body`` as ``form`` with a strong ETag over its bytes; 304 where a GET or HEAD has it already."""
    tag = hashlib.sha256(body).hexdigest()[:32]
    asked = request.method in {"GET", "HEAD"} and "If-None-Match" in request.headers
    has_it = asked and request.if_none_match.contains_weak(tag)
    headers = [("ETag", f'"{tag}"'), ("Cache-Control", cache_control), ("Vary", "Accept")]
    if has_it:
        return Response(status=304, headers=headers)
    return Response(body, headers=[("Content-Type", form), *headers])
