"""Asking a running service."""

import json
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from threading import Event, Thread
from typing import Any

import pytest
from werkzeug.serving import make_server
from werkzeug.wrappers import Request, Response

from service import create_app
from service.command import remote
from service.command.local import local_answer
from service.command.refusals import BadInput, Unreachable
from service.command.remote import remote_answer
from service.settings import Limits

QUESTION = b'{"numerator": [2.5, 10], "denominator": [1, "1/3", 4, 0], "gain": 0.1, "curve": false}'
INVALID = b'{"numerator": [true], "denominator": [0]}'

Application = Callable[..., Any]


@contextmanager
def serving(application: Application) -> Iterator[str]:
    """The address at which ``application`` is served meanwhile."""
    server = make_server("127.0.0.1", 0, application)
    thread = Thread(target=server.serve_forever, kwargs={"poll_interval": 0.01})
    thread.start()
    try:
        yield f"http://127.0.0.1:{server.port}"
    finally:
        server.shutdown()
        thread.join()
        server.server_close()


@pytest.fixture(scope="module")
def service() -> Iterator[str]:
    with serving(create_app(Limits())) as address:
        yield address


def answering(body: bytes, status: int = 200, content_type: str = "application/json") -> Application:
    @Request.application
    def application(request: Request) -> Response:
        request.get_data()
        return Response(body, status=status, content_type=content_type)

    return application


def problem(status: int, **members: object) -> Application:
    document = {"type": "/problems/x", "title": "A title", "detail": "The detail.", **members}
    return answering(json.dumps(document).encode(), status, "application/problem+json")


def test_the_answer_is_the_one_given_in_process_byte_for_byte(service: str) -> None:
    assert remote_answer(service, QUESTION) == local_answer(QUESTION, Limits())


def test_a_slash_behind_the_address_makes_no_difference(service: str) -> None:
    assert remote_answer(f"{service}/", QUESTION) == remote_answer(service, QUESTION)


def test_a_refusal_names_every_field_as_it_does_in_process(service: str) -> None:
    with pytest.raises(BadInput, match="/numerator/0: A boolean") as there:
        remote_answer(service, INVALID)
    with pytest.raises(BadInput, match="/denominator: ") as here:
        local_answer(INVALID, Limits())
    assert there.value.message.splitlines()[1:] == here.value.message.splitlines()[1:]


@pytest.mark.parametrize("status", [400, 413, 422])
def test_a_problem_of_the_question_is_bad_input(status: int) -> None:
    with (
        serving(problem(status)) as address,
        pytest.raises(BadInput, match=r"A title\. The detail\.") as found,
    ):
        remote_answer(address, QUESTION)
    assert found.value.exit_code == 2


@pytest.mark.parametrize(
    "errors",
    [
        pytest.param("none", id="no-list"),
        pytest.param(["none", 3], id="no-objects"),
        pytest.param([{}], id="no-members"),
    ],
)
def test_errors_in_another_form_do_not_hide_the_problem(errors: object) -> None:
    with serving(problem(422, errors=errors)) as address, pytest.raises(BadInput, match="The detail"):
        remote_answer(address, QUESTION)


def test_a_refusal_obeys_no_control_character() -> None:
    with serving(problem(422, detail="\x1b[2J")) as address, pytest.raises(BadInput, match=r"\\x1b\[2J"):
        remote_answer(address, QUESTION)


@pytest.mark.parametrize("status", [404, 429, 500, 503])
def test_a_problem_of_the_service_is_not_the_questions(status: int) -> None:
    with serving(problem(status)) as address, pytest.raises(Unreachable, match="A title") as found:
        remote_answer(address, QUESTION)
    assert found.value.exit_code == 3


@pytest.mark.parametrize(
    "application",
    [
        pytest.param(answering(b"<html>", content_type="text/html"), id="a-page"),
        pytest.param(answering(b"{}"), id="another-document"),
        pytest.param(answering(b"[" * 10**5), id="deep-nesting"),
        pytest.param(answering(b"[1, 2]"), id="a-list"),
        pytest.param(answering(b"\xff"), id="not-utf-8"),
        pytest.param(answering(b'{"engine": "halfturn 9", "bands": []}'), id="a-torn-answer"),
        pytest.param(answering(b"no", 422, "text/plain"), id="a-refusal-that-is-no-problem"),
        pytest.param(answering(b"", 302), id="a-redirect"),
        pytest.param(answering(b"gateway", 502, "text/html"), id="a-gateway"),
    ],
)
def test_what_is_no_halfturn_service_is_told_from_one(application: Application) -> None:
    with serving(application) as address, pytest.raises(Unreachable, match="not as a Halfturn service"):
        remote_answer(address, QUESTION)


def test_an_answer_of_another_engine_is_none(service: str) -> None:
    document = json.loads(remote_answer(service, QUESTION)) | {"engine": "another 1.0"}
    body = json.dumps(document).encode()
    with serving(answering(body)) as address, pytest.raises(Unreachable, match="not as a Halfturn service"):
        remote_answer(address, QUESTION)


def test_an_answer_that_says_more_is_still_one(service: str) -> None:
    document = json.loads(remote_answer(service, QUESTION)) | {"another_field": 1}
    body = json.dumps(document).encode()
    with serving(answering(body)) as address:
        assert remote_answer(address, QUESTION) == body


def test_a_closed_port_is_unreachable() -> None:
    with serving(answering(b"")) as address:
        pass
    with pytest.raises(Unreachable, match=r"No service answers at http://127\.0\.0\.1:\d+/v1/stability: .+"):
        remote_answer(address, QUESTION)


def test_a_host_that_is_none_is_unreachable() -> None:
    with pytest.raises(Unreachable, match=r"No service answers at http://halfturn\.invalid/v1/stability: .+"):
        remote_answer("http://halfturn.invalid", QUESTION)


def test_a_body_beyond_any_answer_is_given_up(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(remote, "ANSWER_BYTES", 1000)
    with serving(answering(b" " * 1001)) as address, pytest.raises(Unreachable, match="more, or longer"):
        remote_answer(address, QUESTION)


def test_a_service_that_says_nothing_is_given_up(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(remote, "READ_TIMEOUT_S", 0.05)
    released = Event()

    def silent(environ: object, start_response: object) -> list[bytes]:
        del environ, start_response
        released.wait(5)
        return []

    with serving(silent) as address:
        try:
            with pytest.raises(Unreachable, match="timed out"):
                remote_answer(address, QUESTION)
        finally:
            released.set()
