"""`halfturn ask`: one question from a file or from options, answered here or by a running service."""

import json
import sys
from typing import IO
from urllib.parse import urlsplit

import click

from service.command.local import limits_in_force, local_answer
from service.command.question import question_bytes
from service.command.remote import remote_answer
from service.command.table import table_text

EPILOG = """\b
Examples:
  halfturn ask examples/hoist_drive.json
  halfturn ask --numerator 2.5,10 --denominator 1,1/3,4,0 --gain 0.1
  halfturn ask - --json < question.json
\b
Exit codes: 0 answered, whatever the verdict; 1 the engine contradicts itself (please report it);
2 bad input, each faulty field named; 3 the service does not answer.
"""


def _numbers(_context: click.Context, _option: click.Parameter, value: str | None) -> list[str] | None:
    """Split numbers with commas between into the texts a question holds, exactly as written."""
    return None if value is None else [text.strip() for text in value.split(",")]


def _address(_context: click.Context, _option: click.Parameter, value: str | None) -> str | None:
    """Refuse what is no base address of a service: http or https, and a host."""
    try:
        parts = urlsplit(value or "http://none")
        complete = parts.scheme in {"http", "https"} and parts.hostname and parts.port != 0
    except ValueError:
        complete = False
    if not complete:
        raise click.BadParameter(f"{value!r} is no address such as http://127.0.0.1:8000.")
    return value


@click.command(epilog=EPILOG)
@click.argument("file", type=click.File("rb"), required=False)
@click.option("--name", help="Free text that names the loop.")
@click.option(
    "--numerator", metavar="N,N,...", callback=_numbers, help="Coefficients, highest power of s first."
)
@click.option("--denominator", metavar="N,N,...", callback=_numbers, help="Likewise.")
@click.option("--gain", metavar="N", help="The commissioned gain, the one in service.")
@click.option(
    "--feedback",
    type=click.Choice(["negative", "positive"]),
    help="1 + K L = 0, the default, or 1 - K L = 0.",
)
@click.option(
    "--detour",
    type=click.Choice(["right", "left"]),
    help="Side on which the contour passes axis poles; by default right.",
)
@click.option("--gain-window", metavar="LOW,HIGH", callback=_numbers, help="Report these gains alone.")
@click.option(
    "--evidence", is_flag=True, default=None, help="Include what a third party needs to check the answer."
)
@click.option("--json", "as_json", is_flag=True, help="Print the answer document, as the service sends it.")
@click.option("--service", metavar="URL", callback=_address, help="Ask this service; else answer here.")
def ask(file: IO[bytes] | None, *, as_json: bool, service: str | None, **fields: object) -> None:
    """Say over which gains a loop is stable.

    FILE holds the question as JSON, - is standard input. Options state its fields instead, or replace those
    of FILE. A number is a decimal or a fraction, 2.5, 1e-3 or 1/3, and is taken exactly as written.
    """
    stated = {field: value for field, value in fields.items() if value is not None}
    if file is None and not stated.keys() & {"numerator", "denominator"}:
        raise click.UsageError("Name a FILE, or give --numerator and --denominator.")
    sent = question_bytes(file.read() if file else None, stated)
    answer = remote_answer(service, sent) if service else local_answer(sent, limits_in_force())
    click.echo(answer if as_json else _shown(table_text(json.loads(answer))), nl=False)


def _shown(text: str) -> bytes:
    """``text`` as standard output takes it; a sign its encoding lacks becomes an escape, not a failure."""
    return text.encode(sys.stdout.encoding or "utf-8", "backslashreplace")
