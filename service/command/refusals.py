"""How the command ends where it has no answer: what it says on standard error, and its exit code.

click.ClickException
    BadInput      2    the question is at fault: each faulty field is named
    Unreachable   3    the service asked does not answer, or not as a Halfturn service does
    Defect        1    the engine contradicts itself
"""

from collections.abc import Iterable

import click

from service.command.words import printable


class BadInput(click.ClickException):
    """The question is at fault; ``faults`` are pointers into it (RFC 6901), each with what is wrong there."""

    exit_code = 2

    def __init__(self, detail: str, faults: Iterable[tuple[str, str]] = ()) -> None:
        lines = [detail, *(f"  {pointer or 'the question'}: {fault}" for pointer, fault in faults)]
        super().__init__("\n".join(map(printable, lines)))


class Unreachable(click.ClickException):
    """Nothing at the address answers as a Halfturn service does; the message says what came instead."""

    exit_code = 3

    def __init__(self, detail: str) -> None:
        super().__init__(printable(detail))


class Defect(click.ClickException):
    """The engine contradicts itself, which is never the question's fault."""

    exit_code = 1
