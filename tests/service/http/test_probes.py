"""Probes."""

from fractions import Fraction
from threading import Event, Thread
from typing import Any

import pytest
from flask.testing import FlaskClient

from schemas.reader import read_json
from service.analysis.answer import Answer
from service.analysis.question import PolynomialBlock, Question
from service.exchange import answer_document
from service.execution import here
from service.http import probes
from service.http.probes import SelfTest, known_answer_holds
from tests.wire import HOIST

QUESTION = Question((PolynomialBlock((Fraction(1),), (Fraction(1),)),))


def test_a_process_that_answers_is_alive(client: FlaskClient) -> None:
    response = client.get("/healthz")
    assert (response.status_code, response.json) == (200, {"status": "alive"})
    assert response.headers["Cache-Control"] == "no-store"


def test_a_process_that_counts_right_is_ready(client: FlaskClient) -> None:
    response = client.get("/readyz")
    assert (response.status_code, response.json) == (200, {"status": "ready"})


def _known() -> dict[str, Any]:
    return answer_document(read_json(probes.KNOWN_QUESTION))


def _changed(document: dict[str, Any], part: str, index: int, field: str, value: object) -> dict[str, Any]:
    entries = [dict(each) for each in document[part]]
    entries[index][field] = value
    return {**document, part: entries}


def test_the_known_answer_is_the_right_one() -> None:
    assert known_answer_holds(_known())


@pytest.mark.parametrize(
    ("part", "index", "field", "value"),
    [
        ("edges", 1, "exact", "2"),
        ("edges", 1, "frequencies", [{"exact": "3"}]),
        ("bands", 0, "rhp_poles", 2),
        ("bands", 2, "rhp_poles", 1),
    ],
)
def test_another_answer_is_not(part: str, index: int, field: str, value: object) -> None:
    assert not known_answer_holds(_changed(_known(), part, index, field, value))


def test_a_process_that_counts_wrong_is_not_ready(
    client: FlaskClient, monkeypatch: pytest.MonkeyPatch
) -> None:
    wrong = answer_document(HOIST)
    monkeypatch.setattr(probes, "answer_document", lambda *_, **__: wrong)
    response = client.get("/readyz")
    assert (response.status_code, response.json["type"]) == (503, "/problems/not-ready")
    monkeypatch.undo()
    assert client.get("/readyz").status_code == 200


def _busy() -> None:
    with pytest.raises(NotImplementedError, match="on purpose"):
        here.analyse(QUESTION, 1)


def test_a_probe_does_not_wait_behind_an_analysis(monkeypatch: pytest.MonkeyPatch) -> None:
    started, finish = Event(), Event()

    def slow(*_: object) -> Answer:
        started.set()
        assert finish.wait(20)
        raise NotImplementedError("on purpose")

    self_test = SelfTest()
    assert self_test.holds()
    fresh = SelfTest()
    monkeypatch.setattr(here, "answer", slow)
    thread = Thread(target=_busy)
    thread.start()
    assert started.wait(20)
    assert self_test.holds()
    assert not fresh.holds()
    finish.set()
    thread.join(20)
