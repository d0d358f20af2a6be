"""Whether the process lives, and whether it still counts right."""

from typing import Any, Final

from flask import Response

from schemas.reader import read_json
from service.exchange import answer_document, json_bytes
from service.execution import Busy
from service.http import problem_types as types
from service.http.negotiation import JSON
from service.http.problems import Problem

# (s + 3)/(s (s - 1)), worked by hand: the closed loop s^2 + (K - 1) s + 3 K has both roots left of the axis
# for K > 1, one right of it for K < 0, and two for 0 < K < 1; at K = 1 they stand at +-j sqrt(3).
KNOWN_QUESTION: Final = b'{"numerator": [1, 3], "denominator": [1, -1, 0], "gain": 2, "curve": false}'
_KNOWN_EDGES: Final = [("0", "0"), ("1", "sqrt(3)")]
_KNOWN_COUNTS: Final = [1, 2, 0]


def known_answer_holds(document: dict[str, Any]) -> bool:
    """Tell whether ``document`` is the right answer to the known question, as far as its bands go."""
    edges = [(edge["exact"], edge["frequencies"][0]["exact"]) for edge in document["edges"]]
    counts = [band["rhp_poles"] for band in document["bands"]]
    return (
        edges == _KNOWN_EDGES and counts == _KNOWN_COUNTS and document["commissioned"]["verdict"] == "stable"
    )


class SelfTest:
    """The known-answer test; a probe does not wait behind an analysis, but takes the last outcome then."""

    def __init__(self) -> None:
        self._held = False

    def holds(self) -> bool:
        """Put the known question; False until it has been answered right once, and when it is not."""
        try:
            self._held = known_answer_holds(answer_document(read_json(KNOWN_QUESTION), wait=False))
        except Busy:
            return self._held
        return self._held


class Probes:
    """The resources ``/healthz`` and ``/readyz``."""

    def __init__(self) -> None:
        self.self_test = SelfTest()

    def alive(self) -> Response:
        """Say that the process answers."""
        return _status("alive")

    def ready(self) -> Response:
        """Say that it answers right, or meet the problem not-ready."""
        if not self.self_test.holds():
            raise Problem(types.NOT_READY, types.NOT_READY.example.detail)
        return _status("ready")


def _status(word: str) -> Response:
    response = Response(json_bytes({"status": word}), mimetype=JSON)
    response.headers["Cache-Control"] = "no-store"
    return response
