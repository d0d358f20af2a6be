"""An answer document as a table a person reads: the verdict first, the cautions last."""

from collections.abc import Iterator, Mapping, Sequence
from typing import Any, Literal

from rich.console import Console, Group, RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from service.command.words import (
    CAUSE_WORDS,
    VERDICT_WORDS,
    band_labels,
    counted,
    edge_gains,
    gain_labels,
    polynomial_words,
    printable,
    rounded,
)

PIPED_WIDTH = 100

# Colour repeats what the word says and never replaces it.
VERDICT_STYLES = {"stable": "cyan", "marginal": "yellow", "unstable": "red", "ill_posed": "magenta"}

FOLDING = {"gains", "exact or 30 digits", "cause", "exact rad/s"}

BAND_NOTE = "Closed-loop poles right of the imaginary axis and on it; encirclements are clockwise."

Document = Mapping[str, Any]


def table_text(answer: Document) -> str:
    """Lay ``answer`` out for standard output: its width and colours in a terminal, plain text in a pipe."""
    console = Console(highlight=False, markup=False, emoji=False)
    if not console.is_terminal:
        console.width = PIPED_WIDTH
    with console.capture() as capture:
        console.print(Group(*_parts(answer)))
    return "\n".join(line.rstrip() for line in capture.get().splitlines()) + "\n"


def _parts(answer: Document) -> Iterator[RenderableType]:
    name = answer["loop"]["name"]
    if name is not None:
        yield Text(printable(name), style="italic")
    yield Text(answer["summary"], style="bold")
    yield from _section("Bands", _bands(answer), Text(BAND_NOTE, style="dim"))
    if answer["edges"]:
        yield from _section("Edges", _edges(answer))
    yield from _section("Open loop", *_open_loop(answer["open_loop"]))
    if answer["commissioned"] is not None:
        yield from _section("Commissioned gain", *_commissioned(answer))
    if answer["evidence"] is not None:
        yield from _section("Evidence", Text(_evidence(answer["evidence"])))
    yield from _section("Cautions", _cautions(answer["cautions"]))


def _section(title: str, *parts: RenderableType) -> Iterator[RenderableType]:
    yield Text(f"\n{title.upper()}", style="bold")
    for part in parts:
        yield Padding(part, (0, 0, 0, 2))


def _columns(*heads: str, right: Sequence[str] = ()) -> Table:
    table = Table(box=None, padding=(0, 2, 0, 0), pad_edge=False, header_style="dim")
    for head in heads:
        # Where a terminal is too narrow, the long texts fold and the numbers stay whole.
        justify: Literal["left", "right"] = "right" if head in right else "left"
        table.add_column(head, justify=justify, overflow="fold", no_wrap=head not in FOLDING)
    return table


def _verdict(verdict: str) -> Text:
    return Text(VERDICT_WORDS[verdict], style=VERDICT_STYLES[verdict])


def _bands(answer: Document) -> Table:
    counts = ("poles right", "on axis", "encirclements")
    table = _columns("band", "gains", "verdict", *counts, "", right=("band", *counts))
    commissioned = answer["commissioned"]
    for place, (band, gains) in enumerate(zip(answer["bands"], band_labels(answer), strict=True)):
        in_service = commissioned is not None and commissioned["band"] == place
        encirclements = band["clockwise_encirclements"]
        table.add_row(
            str(place),
            gains,
            _verdict(band["verdict"]),
            str(band["rhp_poles"]),
            str(band["axis_poles"]),
            "not defined" if encirclements is None else str(encirclements),
            "in service" if in_service else "",
        )
    return table


def _edges(answer: Document) -> Table:
    table = _columns(
        "gain", "exact or 30 digits", "cause", "rad/s", "Hz", "exact rad/s", "counts", right=("gain",)
    )
    labels = gain_labels(edge_gains(answer))
    for edge, label in zip(answer["edges"], labels, strict=True):
        first = (
            label,
            edge["exact"] or edge["decimal"],
            ", ".join(CAUSE_WORDS[cause] for cause in edge["causes"]),
        )
        counts = "no change" if edge["counts_equal"] else "change"
        for row, frequency in enumerate(edge["frequencies"]):
            start, end = (("", "", ""), "") if row else (first, counts)
            table.add_row(*start, *_frequency(frequency), end)
    return table


def _frequency(frequency: Document) -> tuple[str, str, str]:
    if frequency["rad_per_s"] is None:
        return ("infinite", "infinite", "")
    return (rounded(frequency["rad_per_s"]), rounded(frequency["hz"]), frequency["exact"] or "")


def _open_loop(open_loop: Document) -> Iterator[RenderableType]:
    right, enclosed = open_loop["rhp_poles"], open_loop["enclosed_poles"]
    yield Text(f"{counted(right, 'pole')} right of the axis, {enclosed} inside the contour")
    for pole in open_loop["axis_poles"]:
        yield Text(_axis_pole(pole))
    for mode in open_loop["hidden_modes"]:
        yield Text(_hidden_mode(mode))


def _axis_pole(pole: Document) -> str:
    if pole["rad_per_s"] == 0:
        place = "pole at the origin"
    else:
        radians, hertz, exact = _frequency(pole)
        form = f", exactly {exact}" if exact else ""
        place = f"pole pair on the axis at {radians} rad/s ({hertz} Hz){form}"
    return place + (f", multiplicity {pole['multiplicity']}" if pole["multiplicity"] > 1 else "")


def _hidden_mode(mode: Document) -> str:
    roots = counted(mode["rhp_roots"], "root")
    return (
        f"hidden mode {polynomial_words(mode['polynomial'])}: {roots} right of the axis, "
        f"{mode['axis_roots']} on it, in the counts of every band"
    )


def _commissioned(answer: Document) -> Iterator[RenderableType]:
    commissioned = answer["commissioned"]
    where = "at an edge" if commissioned["band"] is None else f"in band {commissioned['band']}"
    yield Text.assemble(
        f"K = {rounded(commissioned['gain'])}, exactly {commissioned['exact']}, {where}: ",
        _verdict(commissioned["verdict"]),
        _counts(commissioned),
    )
    if commissioned["nearest_stable"] is not None:
        yield Text(_nearest_stable(commissioned["nearest_stable"]))
    if commissioned["closed_loop_poles"]:
        yield _poles(commissioned["closed_loop_poles"])


def _counts(commissioned: Document) -> str:
    if commissioned["rhp_poles"] is None:
        return "; no count: the closed-loop polynomial vanishes"
    right = counted(commissioned["rhp_poles"], "pole")
    return f"; {right} right of the axis, {commissioned['axis_poles']} on it"


def _nearest_stable(nearest: Document) -> str:
    start, end = nearest["ratio_from"], nearest["ratio_to"]
    if end is None:
        reach = f"beyond {rounded(start)} times this gain"
    elif start is None:
        reach = f"below {rounded(end)} times this gain"
    else:
        reach = f"from {rounded(start)} to {rounded(end)} times this gain"
    return f"nearest stable band: {nearest['band']}, {reach}"


def _poles(poles: Sequence[Document]) -> Table:
    heads = ("pole re (rad/s)", "im (rad/s)", "multiplicity", "damping ratio", "time constant (s)")
    table = _columns(*heads, right=heads)
    for pole in poles:
        decay = pole["time_constant_s"]
        table.add_row(
            rounded(pole["re"]),
            rounded(pole["im"]),
            str(pole["multiplicity"]),
            "" if pole["damping_ratio"] is None else rounded(pole["damping_ratio"]),
            "none" if decay is None else rounded(decay),
        )
    return table


def _cautions(cautions: Sequence[Document]) -> Table:
    table = Table.grid(padding=(0, 1, 0, 0))
    for caution in cautions:
        table.add_row("-", caution["text"])
    return table


def _evidence(evidence: Document) -> str:
    edges, bands = counted(len(evidence["edges"]), "edge"), counted(len(evidence["bands"]), "band")
    return f"given for {edges} and {bands}; --json shows it in full"
