"""Answering in this process."""

import json

import pytest

from service import create_app
from service.analysis.errors import CountsDisagree
from service.command import local
from service.command.local import limits_in_force, local_answer
from service.command.refusals import BadInput, Defect
from service.settings import Limits

LIMITS = Limits()
QUESTION = b'{"numerator": [2.5, 10], "denominator": [1, "1/3", 4, 0], "gain": 0.1, "curve": false}'


def test_the_answer_is_the_services_byte_for_byte() -> None:
    response = (
        create_app(LIMITS).test_client().post("/v1/stability", data=QUESTION, content_type="application/json")
    )
    assert local_answer(QUESTION, LIMITS) == response.data


def test_all_faulty_fields_are_named_at_once() -> None:
    with pytest.raises(BadInput, match="The question is not valid") as found:
        local_answer(b'{"numerator": [true, 1], "denominator": [0, 0], "gain": "x"}', LIMITS)
    named = [line.split(":")[0].strip() for line in found.value.message.splitlines()[1:]]
    assert sorted(named) == ["/denominator", "/gain", "/numerator/0"]


@pytest.mark.parametrize(
    ("question", "message"),
    [
        pytest.param(b"", "not JSON. There is nothing to read", id="nothing"),
        pytest.param(b"{", "not JSON. .* at line 1", id="torn"),
        pytest.param(b"\xff", "not JSON. Not UTF-8", id="not-utf-8"),
        pytest.param(b"3", "the question: Expected an object", id="no-object"),
        pytest.param(b" " * (LIMITS.body_bytes + 1), "'body_bytes': allowed 1048576", id="too-large"),
        pytest.param(
            b'{"blocks": [%s]}' % b",".join([b'{"factor": 1e-60, "poles": [-1e60]}'] * 6),
            "double",
            id="out-of-range",
        ),
    ],
)
def test_bad_input_says_what_is_wrong(question: bytes, message: str) -> None:
    with pytest.raises(BadInput, match=message) as found:
        local_answer(question, LIMITS)
    assert found.value.exit_code == 2


def test_an_engine_that_contradicts_itself_gives_no_verdict(monkeypatch: pytest.MonkeyPatch) -> None:
    def disagree(*_: object) -> object:
        raise CountsDisagree("Band 1.")

    monkeypatch.setattr(local, "answer_document", disagree)
    with pytest.raises(Defect, match=r"contradicts itself and gives no verdict: Band 1\.") as found:
        local_answer(QUESTION, LIMITS)
    assert found.value.exit_code == 1


def test_the_limits_are_those_of_the_environment(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HALFTURN_DEGREE", "7")
    assert limits_in_force().question.degree == 7


def test_every_faulty_setting_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HALFTURN_DEGREE", "many")
    monkeypatch.setenv("HALFTURN_DIGITS", "-1")
    with pytest.raises(BadInput, match=r"HALFTURN_DEGREE is 'many'(.|\n)*HALFTURN_DIGITS is '-1'"):
        limits_in_force()


def test_the_answer_is_json_and_a_function_of_the_question_alone() -> None:
    assert local_answer(QUESTION, LIMITS) == local_answer(QUESTION, LIMITS)
    assert json.loads(local_answer(QUESTION, LIMITS))["commissioned"]["verdict"] == "stable"
