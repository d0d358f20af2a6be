"""The stylesheet and the mark, sent from memory so that their tags are the same on every machine."""

from pathlib import Path
from typing import Final

from flask import Response, request

from service.http import problem_types as types
from service.http.negotiation import tagged
from service.http.problems import Problem

_FOLDER: Final = Path(__file__).parents[1] / "page" / "assets"
_FORMS: Final = {"halfturn.css": "text/css; charset=utf-8", "mark.svg": "image/svg+xml"}


class Assets:
    """The resources under ``/assets``."""

    def __init__(self) -> None:
        self.contents = {name: (_FOLDER / name).read_bytes() for name in _FORMS}

    def get(self, name: str) -> Response:
        """Send the asset called ``name``."""
        if name not in _FORMS:
            raise Problem(types.NOT_FOUND, types.NOT_FOUND.example.detail)
        return tagged(request, self.contents[name], _FORMS[name], "no-cache")
