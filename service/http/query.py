"""The question in an address: whole as ``question=``, or as plain fields for polynomials."""

from urllib.parse import parse_qsl

from schemas.problem import Fault, pointer_token
from schemas.question import InvalidQuestion
from schemas.reader import RepeatedKeys, read_json

WHOLE = "question"

_LISTS = frozenset({"numerator", "denominator", "gain_window"})
_FLAGS = frozenset({"curve", "root_paths", "step_response", "evidence"})
_FLAG_WORDS = {"true": True, "false": False}


def question_document(query: bytes) -> object:
    """Read the query of an address as the document that a body with the same question would give.

    Plain fields hold texts: a list is parted at commas, a flag is true or false; what each may hold, and
    whether there is such a field, is checked where a body is checked. A repeated field becomes a repeated
    key. Raises `schemas.reader.NotJson` and `schemas.question.InvalidQuestion`.
    """
    # surrogateescape keeps bytes that are no UTF-8 apart until the reader refuses them
    text = query.decode("utf-8", "surrogateescape")
    pairs = parse_qsl(text, keep_blank_values=True, errors="surrogateescape")
    if any(key == WHOLE for key, _ in pairs):
        return _whole(pairs)
    document: list[tuple[str, object]] = [(key, _plain(key, value)) for key, value in pairs]
    members = dict(document)
    return members if len(members) == len(document) else RepeatedKeys(document)


def _whole(pairs: list[tuple[str, str]]) -> object:
    wholes = [value for key, value in pairs if key == WHOLE]
    faults = [Fault("The field stands more than once.", f"/{WHOLE}")] if len(wholes) > 1 else []
    beside = sorted({key for key, _ in pairs if key != WHOLE})
    faults += [Fault("Cannot stand beside question=.", f"/{pointer_token(key)}") for key in beside]
    if faults:
        raise InvalidQuestion(tuple(faults))
    return read_json(wholes[0].encode("utf-8", "surrogateescape"))


def _plain(key: str, value: str) -> object:
    if key in _LISTS:
        return value.split(",")
    return _FLAG_WORDS.get(value, value) if key in _FLAGS else value
