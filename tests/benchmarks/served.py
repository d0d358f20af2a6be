"""The service as it is served: gunicorn with one worker on this machine, asked by one client."""

import http.client
import subprocess
import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Final

from service.command.serve import gunicorn_arguments

_PROJECT: Final = Path(__file__).parents[2]
_HOST: Final = "127.0.0.1"
_STARTING_SECONDS: Final = 30.0


@contextmanager
def served(port: int) -> Iterator[Callable[[bytes], bytes]]:
    """Start the service; give what posts a body and reads the answer.

    The command's own arguments are used. Its workers end a connection after each answer, so that the
    time of a new one is within.
    """
    command = [sys.executable, "-m", "gunicorn", "--log-level=error", *gunicorn_arguments((_HOST, port), 1)]
    process = subprocess.Popen(command, cwd=_PROJECT)  # noqa: S603 (our own service)
    try:
        connection = http.client.HTTPConnection(_HOST, port)
        _await(connection)
        yield lambda body: _post(connection, body)
    finally:
        process.terminate()
        process.wait()


def _await(connection: http.client.HTTPConnection) -> None:
    deadline = time.monotonic() + _STARTING_SECONDS
    while True:
        try:
            connection.request("GET", "/healthz")
            connection.getresponse().read()
        except ConnectionRefusedError:
            connection.close()
            if time.monotonic() > deadline:
                raise
            time.sleep(0.1)
        else:
            return


def _post(connection: http.client.HTTPConnection, body: bytes) -> bytes:
    connection.request("POST", "/v1/stability", body, {"Content-Type": "application/json"})
    response = connection.getresponse()
    answer = response.read()
    if response.status != http.client.OK:
        raise RuntimeError(answer.decode())
    return answer
