"""`halfturn serve`: the HTTP service under gunicorn, set up for one machine."""

import os
import re
import socket
import sys
from pathlib import Path

import click

from service.command.local import limits_in_force

SHARED_MEMORY = Path("/dev/shm")  # noqa: S108 (heartbeats only, in files gunicorn unlinks at once)
GRACEFUL_SECONDS = 8
HIGHEST_PORT = 65535
LONGEST_ADDRESS = 8190  # bytes of a request line, gunicorn's most: a whole question may stand in an address

APPLICATION = "service:create_app()"


Address = tuple[str, int]
"""Host and port."""


def _address(_context: click.Context, _option: click.Parameter, value: str) -> Address:
    """Read HOST:PORT, an IPv6 host in brackets."""
    match = re.fullmatch(r"(?:\[([0-9A-Fa-f:.]+)\]|([^:\[\]\s]+)):([0-9]{1,5})", value)
    if match is None or int(match[3]) > HIGHEST_PORT:
        raise click.BadParameter(f"{value!r} is no HOST:PORT such as 127.0.0.1:8000.")
    return match[1] or match[2], int(match[3])


@click.command(
    epilog="Example:  halfturn serve --bind 0.0.0.0:8080 --workers 4",
)
@click.option(
    "--bind",
    metavar="HOST:PORT",
    callback=_address,
    default="127.0.0.1:8000",
    show_default=True,
    help="Where to listen.",
)
@click.option(
    "--workers", type=click.IntRange(1, 1024), help="Worker processes; by default as many as there are cores."
)
def serve(bind: Address, workers: int | None) -> None:
    """Serve answers over HTTP until stopped.

    The same as gunicorn "service:create_app()", with defaults that suit: a worker a core, heartbeats in
    shared memory, no control socket, and a short grace for the questions under way when it is told to stop.
    """
    limits_in_force()
    _refuse_taken(bind)
    arguments = gunicorn_arguments(bind, workers or os.cpu_count() or 1)
    # gunicorn puts the folder it starts in first on the path: it shall be ours, whatever the caller's holds.
    os.chdir(Path(__file__).resolve().parents[2])
    os.execv(sys.executable, [sys.executable, "-P", "-m", "gunicorn", *arguments])  # noqa: S606 (our own interpreter)


def gunicorn_arguments(bind: Address, workers: int) -> list[str]:
    """Say with which arguments gunicorn serves the application on ``bind`` in so many processes."""
    host, port = bind
    heartbeats = ["--worker-tmp-dir", str(SHARED_MEMORY)] if os.access(SHARED_MEMORY, os.W_OK) else []
    return [
        f"--bind=[{host}]:{port}" if ":" in host else f"--bind={host}:{port}",
        f"--workers={workers}",
        f"--graceful-timeout={GRACEFUL_SECONDS}",
        f"--limit-request-line={LONGEST_ADDRESS}",
        "--preload",
        "--no-control-socket",
        *heartbeats,
        APPLICATION,
    ]


def _refuse_taken(bind: Address) -> None:
    """Say at once, and plainly, what gunicorn would say after five attempts."""
    try:
        family, kind, *_, address = socket.getaddrinfo(*bind, type=socket.SOCK_STREAM)[0]
        with socket.socket(family, kind) as probe:
            probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            probe.bind(address)
    except OSError as error:
        raise click.BadParameter(
            f"cannot listen on {bind[0]}:{bind[1]}: {error.strerror}.", param_hint="--bind"
        ) from error
