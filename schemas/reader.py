"""JSON bytes to a Python document, exactly: no number passes through a double, no fault passes unseen.

The standard library's reader does the work, with hooks where it would lose something: number tokens
keep their text, NaN and the infinities become values every field refuses, and an object that names a
key twice says so.
"""

import json
import re
from dataclasses import dataclass

from schemas.limits import DEPTH_LIMIT

# A string (possessive, closing quote optional, so that no input makes it backtrack) or one bracket.
_STRING_OR_BRACKET = re.compile(r'"(?:[^"\\]++|\\.)*+"?|[\[{]|[\]}]', re.DOTALL)


class NotJson(Exception):
    """The bytes are no JSON text this service reads; the message says why and where."""

    def __init__(self, detail: str, limit: str | None = None, allowed: int | None = None) -> None:
        super().__init__(detail)
        self.detail = detail
        self.limit = limit
        self.allowed = allowed


@dataclass(frozen=True, slots=True)
class NumberText:
    """A JSON number, as written."""

    text: str


@dataclass(frozen=True, slots=True)
class NotFinite:
    """One of the tokens NaN, Infinity and -Infinity, which are no JSON (RFC 8259, section 6)."""

    text: str


class RepeatedKeys(dict[str, object]):
    """An object that names at least one key twice; ``repeated`` holds those keys."""

    def __init__(self, pairs: list[tuple[str, object]]) -> None:
        super().__init__(pairs)
        seen: set[str] = set()
        self.repeated = sorted({key for key, _ in pairs if key in seen or seen.add(key)})  # type: ignore[func-returns-value]


def read_json(body: bytes) -> object:
    """Read the document written in ``body``: UTF-8 without byte order mark, nested at most 32 deep.

    Returns dicts, lists, str, bool, None, and for numbers `NumberText` or `NotFinite`; raises `NotJson`.
    """
    try:
        text = body.decode("utf-8")
    except UnicodeDecodeError as error:
        raise NotJson(f"Not UTF-8: byte {error.start} cannot be decoded.") from error
    if not text or text.isspace():
        raise NotJson("There is nothing to read: the text is empty.")
    if text[0] == "\ufeff":
        raise NotJson("The text begins with a byte order mark; JSON is sent without (RFC 8259, section 8.1).")
    _refuse_depth(text)
    try:
        return _DECODER.decode(text)
    except json.JSONDecodeError as error:
        raise NotJson(f"{error.msg} at line {error.lineno}, column {error.colno}.") from error


def _refuse_depth(text: str) -> None:
    if text.count("[") + text.count("{") <= DEPTH_LIMIT:
        return
    depth = 0
    for match in _STRING_OR_BRACKET.finditer(text):
        bracket = match.group()
        depth += (bracket in "[{") - (bracket in "]}")
        if depth > DEPTH_LIMIT:
            raise NotJson(f"Nested more than {DEPTH_LIMIT} deep.", limit="depth", allowed=DEPTH_LIMIT)


def _object(pairs: list[tuple[str, object]]) -> dict[str, object]:
    members = dict(pairs)
    return members if len(members) == len(pairs) else RepeatedKeys(pairs)


_DECODER = json.JSONDecoder(
    object_pairs_hook=_object, parse_int=NumberText, parse_float=NumberText, parse_constant=NotFinite
)
