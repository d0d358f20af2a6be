"""Serving under gunicorn."""

import os
import signal
import socket
import subprocess
import sys
import time
from collections.abc import Iterator
from contextlib import closing
from pathlib import Path

import pytest
import requests
from click.testing import CliRunner

from service.command import main
from service.command.local import local_answer
from service.command.serve import SHARED_MEMORY, gunicorn_arguments
from service.settings import Limits

QUESTION = b'{"numerator": [2.5, 10], "denominator": [1, "1/3", 4, 0], "gain": 0.1, "curve": false}'


PROJECT = Path(__file__).parents[3]


def free_port() -> int:
    with closing(socket.socket()) as probe:
        probe.bind(("127.0.0.1", 0))
        port: int = probe.getsockname()[1]
        return port


@pytest.fixture
def address(tmp_path: Path) -> Iterator[str]:
    """A service started by the command, in a folder that holds a package of the same name as ours."""
    (tmp_path / "service").mkdir()
    (tmp_path / "service" / "__init__.py").write_text("raise ImportError('not this one')")
    bind = f"127.0.0.1:{free_port()}"
    environment = os.environ | {"PYTHONPATH": str(PROJECT)}
    command = [sys.executable, "-P", "-c", "from service.command import main; main()", "serve"]
    process = subprocess.Popen(  # noqa: S603 (our own command)
        [*command, "--bind", bind, "--workers", "2"], cwd=tmp_path, env=environment
    )
    try:
        await_service(process, f"http://{bind}/healthz")
        yield f"http://{bind}"
    finally:
        process.send_signal(signal.SIGTERM)
        assert process.wait(timeout=20) == 0


def await_service(process: subprocess.Popen[bytes], probe: str) -> None:
    deadline = time.monotonic() + 30
    while process.poll() is None and time.monotonic() < deadline:
        try:
            requests.get(probe, timeout=5)
        except requests.ConnectionError:
            time.sleep(0.1)
        else:
            return
    pytest.fail(f"nothing answers at {probe}")


def test_the_service_answers_as_the_engine_does_and_stops_when_told(address: str) -> None:
    response = requests.post(
        f"{address}/v1/stability", data=QUESTION, headers={"Content-Type": "application/json"}, timeout=10
    )
    assert response.content == local_answer(QUESTION, Limits())


def test_gunicorn_gets_the_application_the_address_and_the_workers() -> None:
    arguments = gunicorn_arguments(("0.0.0.0", 8080), 3)  # noqa: S104 (an argument, nothing listens)
    assert arguments[-1] == "service:create_app()"
    assert {"--bind=0.0.0.0:8080", "--workers=3", "--no-control-socket"} <= set(arguments)
    assert "--limit-request-line=8190" in arguments


def test_an_ipv6_host_keeps_its_brackets() -> None:
    assert "--bind=[::1]:8000" in gunicorn_arguments(("::1", 8000), 1)


@pytest.mark.parametrize("writable", [True, False])
def test_heartbeats_go_to_shared_memory_where_there_is_one(
    monkeypatch: pytest.MonkeyPatch, *, writable: bool
) -> None:
    monkeypatch.setattr(os, "access", lambda *_: writable)
    assert (str(SHARED_MEMORY) in gunicorn_arguments(("127.0.0.1", 8000), 1)) is writable


@pytest.mark.parametrize(
    "bind",
    ["8000", "127.0.0.1", "127.0.0.1:", "127.0.0.1:65536", "::1:8000", "http://127.0.0.1:8000", "a b:1"],
)
def test_an_address_to_listen_on_is_host_and_port(bind: str) -> None:
    result = CliRunner().invoke(main, ["serve", "--bind", bind])
    assert result.exit_code == 2
    assert f"Invalid value for '--bind': {bind!r} is no HOST:PORT such as 127.0.0.1:8000." in result.stderr


def test_a_taken_port_is_said_at_once() -> None:
    with closing(socket.socket()) as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        bind = f"127.0.0.1:{taken.getsockname()[1]}"
        result = CliRunner().invoke(main, ["serve", "--bind", bind])
    assert result.exit_code == 2
    assert f"cannot listen on {bind}: Address already in use." in result.stderr


def test_a_host_that_is_none_is_said_at_once() -> None:
    result = CliRunner().invoke(main, ["serve", "--bind", "halfturn.invalid:8000"])
    assert result.exit_code == 2
    assert "cannot listen on halfturn.invalid:8000: " in result.stderr


def test_faulty_settings_are_said_before_anything_starts(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HALFTURN_DEGREE", "many")
    result = CliRunner().invoke(main, ["serve", "--bind", f"127.0.0.1:{free_port()}"])
    assert result.exit_code == 2
    assert "HALFTURN_DEGREE is 'many'" in result.stderr
