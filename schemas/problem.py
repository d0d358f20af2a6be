"""Problem documents (RFC 9457): the one shape of every refusal and failure."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace

from marshmallow import Schema, ValidationError, fields

Received = int | str | None


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing wrong with a document, and where: ``pointer`` is a JSON Pointer (RFC 6901).

    Where a limit is exceeded, ``limit`` is its name at ``/v1/limits``, ``allowed`` its value and
    ``received`` what was sent (a text where the number itself would be absurdly long).
    """

    detail: str
    pointer: str = ""
    limit: str | None = None
    allowed: int | None = None
    received: Received = None


def beyond(limit: str, allowed: int, received: int | str, what: str) -> ValidationError:
    """Make the validation error for ``received`` of ``what`` where at most ``allowed`` are."""
    detail = f"Over the limit {limit!r}: {what}, allowed {allowed}, received {received}."
    return ValidationError([Fault(detail, limit=limit, allowed=allowed, received=received)])


def faults_of(messages: object, pointer: str = "") -> Iterator[Fault]:
    """Flatten marshmallow's tree of messages, ``{key or index: tree} | [text or Fault]``, in a fixed order.

    Keys are sorted: the order in which marshmallow meets unknown keys differs from process to process.
    """
    if isinstance(messages, Mapping):
        for key in sorted(messages):
            yield from faults_of(messages[key], f"{pointer}/{pointer_token(str(key))}")
    elif isinstance(messages, list):
        for message in messages:
            yield from faults_of(message, pointer)
    elif isinstance(messages, Fault):
        yield replace(messages, pointer=pointer)
    else:
        yield Fault(str(messages), pointer)


def pointer_token(key: str) -> str:
    """``key`` as one reference token of a JSON Pointer (RFC 6901, section 3)."""
    return key.replace("~", "~0").replace("/", "~1")


def fault_document(fault: Fault) -> dict[str, object]:
    """``fault`` as it stands in a problem document: the limit's three members only where there is one."""
    document: dict[str, object] = {"pointer": fault.pointer, "detail": fault.detail}
    if fault.limit is not None:
        document |= {"limit": fault.limit, "allowed": fault.allowed, "received": fault.received}
    return document


class FaultSchema(Schema):
    """One entry of a problem's ``errors``."""

    pointer = fields.String(
        required=True,
        metadata={"description": "JSON Pointer (RFC 6901) into the question; empty for the whole of it."},
    )
    detail = fields.String(required=True, metadata={"description": "What is wrong there, for people."})
    limit = fields.String(metadata={"description": "Name of the limit exceeded, as at /v1/limits."})
    allowed = fields.Integer(metadata={"description": "The limit's value."})
    received = fields.Raw(
        metadata={
            "type": ["integer", "string"],
            "description": "What was received; a text where the number would be absurdly long.",
        }
    )


class ProblemSchema(Schema):
    """A problem document, ``application/problem+json`` (RFC 9457)."""

    type = fields.String(
        required=True,
        metadata={
            "format": "uri-reference",
            "description": "Which problem this is, and the address of a page that explains it.",
        },
    )
    title = fields.String(required=True, metadata={"description": "The problem type in a few words."})
    status = fields.Integer(required=True, metadata={"description": "The HTTP status."})
    detail = fields.String(required=True, metadata={"description": "This occurrence, for people."})
    errors = fields.List(
        fields.Nested(FaultSchema),
        metadata={"description": "Every faulty field at once, each with a pointer."},
    )
    limit = fields.String(metadata={"description": "Name of the limit exceeded, as at /v1/limits."})
    allowed = fields.Integer(metadata={"description": "The limit's value."})
    received = fields.Raw(
        allow_none=True,
        metadata={
            "type": ["integer", "string"],
            "description": "What was received; null where it was not counted to the end.",
        },
    )
