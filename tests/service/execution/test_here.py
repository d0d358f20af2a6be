"""One analysis at a time in a process."""

from fractions import Fraction
from threading import Thread
from time import sleep

import pytest

from service.analysis.answer import Answer
from service.analysis.question import PolynomialBlock, Question
from service.execution import Busy, analyse, here

ONE = Fraction(1)
QUESTION = Question((PolynomialBlock((ONE,), (ONE, ONE)),))


def test_an_analysis_answers() -> None:
    assert [edge.exact for edge in analyse(QUESTION, 20_000).edges] == ["-1"]


def test_two_analyses_never_run_at_once(monkeypatch: pytest.MonkeyPatch) -> None:
    running: list[int] = []
    most: list[int] = []

    def slow(_question: Question, _bits_limit: int) -> Answer | None:
        running.append(1)
        most.append(len(running))
        sleep(0.02)
        running.pop()
        return None

    monkeypatch.setattr(here, "answer", slow)
    threads = [Thread(target=analyse, args=(QUESTION, 1)) for _ in range(4)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert most == [1, 1, 1, 1]


def test_who_will_not_wait_is_told_to_come_again(monkeypatch: pytest.MonkeyPatch) -> None:
    def ask_again(_question: Question, _bits_limit: int) -> Answer:
        return analyse(QUESTION, 1, wait=False)

    monkeypatch.setattr(here, "answer", ask_again)
    with pytest.raises(Busy, match=r"^$"):
        analyse(QUESTION, 1)
    monkeypatch.undo()
    assert analyse(QUESTION, 20_000, wait=False).bands


def test_a_failed_analysis_leaves_room_for_the_next(monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(_question: Question, _bits_limit: int) -> Answer:
        raise ZeroDivisionError("on purpose")

    monkeypatch.setattr(here, "answer", fail)
    with pytest.raises(ZeroDivisionError, match="on purpose"):
        analyse(QUESTION, 1)
    monkeypatch.undo()
    assert analyse(QUESTION, 20_000, wait=False).bands
