"""The question as the service takes it, from a file, from options, or from both."""

import json
from collections.abc import Mapping

from schemas.reader import NotFinite, NotJson, NumberText, RepeatedKeys, read_json


def question_bytes(file: bytes | None, stated: Mapping[str, object]) -> bytes:
    """Give the JSON text of the question in ``file``, its fields replaced by those ``stated``.

    Without a file the stated fields are the question. Nothing is checked here: what is no question goes
    to the engine or the service unchanged, and is refused there in the same words.
    """
    if file is None:
        return json_text({"curve": False, **stated}).encode()
    if not stated:
        return file
    try:
        document = read_json(file)
    except NotJson:
        return file
    if not isinstance(document, dict):
        return file
    document.update(stated)
    return json_text(document).encode()


def json_text(value: object) -> str:
    """Write what `schemas.reader.read_json` returned again, numbers and repeated keys as they came."""
    match value:
        case NumberText(text) | NotFinite(text):
            return text
        case dict():
            keys = [*value, *(value.repeated if isinstance(value, RepeatedKeys) else ())]
            return "{" + ", ".join(f"{json.dumps(key)}: {json_text(value[key])}" for key in keys) + "}"
        case list():
            return "[" + ", ".join(map(json_text, value)) + "]"
        case _:
            return json.dumps(value)
