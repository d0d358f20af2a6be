"""How long the whole ``POST /v1/stability`` without curve takes, beside what a person would otherwise write.

Run from the project's folder: ``python -m tests.benchmarks.answers``. Every request is a new random
loop; all contestants answer the same loops, each of them all loops in a row.
"""

import os
import statistics
from collections.abc import Callable, Mapping, Sequence
from random import Random
from time import perf_counter
from typing import Final

import click
from rich.console import Console
from rich.table import Table

from schemas.digest import question_digest
from schemas.question import read_question
from schemas.reader import read_json
from service import create_app
from service.exchange import DEFAULT_LIMITS, analysed, json_bytes, plain
from service.execution import analyse
from tests.benchmarks.loops import random_body
from tests.benchmarks.scripts import SCRIPTS
from tests.benchmarks.served import served

GOALS: Final[Mapping[int, float]] = {3: 15, 5: 12, 10: 8, 20: 5, 40: 1.5}
"""By degree: how many times faster than the faster script a POST should be."""

Ask = Callable[[bytes], object]
Times = dict[str, list[float]]
"""Seconds by what took them, one for each round."""

_PHASES: Final = ("read", "analyse", "write")
_SEED: Final = 1


@click.command()
@click.option("--rounds", default=25, show_default=True, help="Loops at each degree.")
@click.option("--seed", default=_SEED, show_default=True, help="Of the random loops.")
@click.option("--port", default=None, type=int, help="Time the service under gunicorn, too, on this port.")
def main(rounds: int, seed: int, port: int | None) -> None:
    """Print medians and quartiles in milliseconds, ratios and phases, degree by degree."""
    post = _in_process()
    console = Console(width=180)
    console.print(f"{rounds} loops a degree, seed {seed}, load average {os.getloadavg()[0]:.2f}")
    if port is None:
        _report(console, rounds, seed, {"POST": post})
        return
    with served(port) as over_http:
        _report(console, rounds, seed, {"POST": post, "gunicorn": over_http})


def _report(console: Console, rounds: int, seed: int, services: Mapping[str, Ask]) -> None:
    measured = {degree: measure(degree, rounds, Random(seed + degree), services) for degree in GOALS}  # noqa: S311
    console.print(_comparison(measured, services))
    console.print(_phases(measured))
    console.print(f"load average {os.getloadavg()[0]:.2f}")


def measure(degree: int, rounds: int, draw: Random, services: Mapping[str, Ask]) -> Times:
    """Time services, scripts and phases on ``rounds`` random loops each, after one that is not counted.

    Every contestant takes all loops in a row, as it would in service: one that fills the processor's
    caches would otherwise be paid for by the next.
    """
    loops = [
        {gain: random_body(draw, degree, gain=gain) for gain in (False, True)} for _ in range(rounds + 1)
    ]
    times: Times = {}
    for name, ask in services.items():
        for gain, suffix in ((False, ""), (True, " with gain")):
            times[f"{name}{suffix}"] = [_seconds(ask, bodies[gain]) for bodies in loops][1:]
    for name, script in SCRIPTS.items():
        times[name] = [_seconds(script, bodies[False]) for bodies in loops][1:]
    phases = [_phase_seconds(bodies[True]) for bodies in loops][1:]
    return times | {name: [taken[name] for taken in phases] for name in _PHASES}


def _seconds(ask: Ask, body: bytes) -> float:
    start = perf_counter()
    ask(body)
    return perf_counter() - start


def _in_process() -> Ask:
    client = create_app(DEFAULT_LIMITS).test_client()

    def post(body: bytes) -> bytes:
        response = client.post("/v1/stability", data=body, content_type="application/json")
        if response.status_code != 200:
            raise RuntimeError(response.text)
        return bytes(response.data)

    return post


def _phase_seconds(body: bytes) -> dict[str, float]:
    """Take the phases of one answer one by one, as `service.exchange` puts them together."""
    start = perf_counter()
    sent = read_question(read_json(body), DEFAULT_LIMITS.question)
    read = perf_counter()
    found = analyse(analysed(sent), DEFAULT_LIMITS.polynomial_bits)
    analysed_at = perf_counter()
    json_bytes({**plain(found), "question_digest": question_digest(sent)})
    written = perf_counter()
    return dict(zip(_PHASES, (read - start, analysed_at - read, written - analysed_at), strict=True))


def _comparison(measured: Mapping[int, Times], services: Mapping[str, Ask]) -> Table:
    posts = [f"{name}{suffix}" for name in services for suffix in ("", " with gain")]
    table = Table(title="median (quartiles), ms; ratio: the faster script's median over a POST's")
    for heading in ("degree", *posts, *SCRIPTS, "ratio", "with gain", "goal"):
        table.add_column(heading, justify="right", no_wrap=True)
    for degree, times in measured.items():
        faster = min(statistics.median(times[name]) for name in SCRIPTS)
        ratios = [f"{faster / statistics.median(times[name]):.1f}" for name in posts[:2]]
        spreads = [_spread(times[name]) for name in (*posts, *SCRIPTS)]
        table.add_row(str(degree), *spreads, *ratios, f"{GOALS[degree]:g}")
    return table


def _phases(measured: Mapping[int, Times]) -> Table:
    table = Table(title="where a POST with gain spends its time: medians, ms")
    for heading in ("degree", *_PHASES, "HTTP around them"):
        table.add_column(heading, justify="right")
    for degree, times in measured.items():
        phases = [1e3 * statistics.median(times[name]) for name in _PHASES]
        whole = 1e3 * statistics.median(times["POST with gain"])
        table.add_row(str(degree), *(f"{ms:.3f}" for ms in (*phases, whole - sum(phases))))
    return table


def _spread(seconds: Sequence[float]) -> str:
    low, middle, high = (1e3 * s for s in statistics.quantiles(seconds, n=4))
    return f"{middle:.3g} ({low:.3g}, {high:.3g})"


if __name__ == "__main__":
    main()
