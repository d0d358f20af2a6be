"""The `halfturn` command."""

import click

from service.command.ask import ask
from service.command.serve import serve
from service.version import VERSION


@click.group(
    epilog="Example:  halfturn ask --numerator 2.5,10 --denominator 1,1/3,4,0 --gain 0.1",
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
)
@click.version_option(VERSION, prog_name="halfturn", message="%(prog)s %(version)s")
def main() -> None:
    """For which gains is a feedback loop stable? Answered exactly, here or over HTTP.

    The verdict is about the linear model given: saturation, friction, quantisation and unmodelled dynamics
    are outside it. It is no safety function; the standards for functional safety that apply to the plant,
    local codes and the responsible licensed engineer decide.
    """


main.add_command(ask)
main.add_command(serve)
