"""Every limit in force, with what it means."""

from typing import Any, Final

from flask import Response, request

from schemas.limits import DEPTH_LIMIT, FAULTS_LISTED, MEMBERS, MOST_POINTS, NAME_LENGTH
from service.exchange import json_bytes
from service.http.negotiation import JSON, require_acceptable, tagged
from service.settings import SETTINGS, Limits

_FIXED: Final = (
    ("depth", DEPTH_LIMIT, "levels", "nesting of lists and objects in the question's JSON"),
    ("members", MEMBERS, "members", "members of one object in the question's JSON"),
    ("name_length", NAME_LENGTH, "characters", "length of a name"),
    ("points", MOST_POINTS, "points", "points of a curve"),
    ("faults_listed", FAULTS_LISTED, "faults", "faults of a question that its problem document lists"),
)


def limit_list(limits: Limits) -> dict[str, list[dict[str, Any]]]:
    """List every limit in force: those that can be set, then the fixed ones."""
    values = limits.values()
    rows: list[tuple[Any, ...]] = [
        (each.name, values[each.name], each.unit, each.meaning, each.variable) for each in SETTINGS
    ]
    rows += [(*fixed, None) for fixed in _FIXED]
    names = ("name", "value", "unit", "meaning", "setting")
    return {"limits": [dict(zip(names, row, strict=True)) for row in rows]}


class LimitList:
    """The resource ``/v1/limits``."""

    def __init__(self, limits: Limits) -> None:
        self.body = json_bytes(limit_list(limits))

    def get(self) -> Response:
        """Send the list."""
        require_acceptable(request, JSON)
        return tagged(request, self.body, JSON, "no-cache")
