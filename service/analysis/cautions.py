"""What this loop makes worth saying beside the verdict: a code for programs, a sentence for people."""

from collections.abc import Iterator
from decimal import Decimal
from typing import Final

from flint import fmpq

from service.analysis.answer import Band, Caution, Commissioned, Edge, OpenLoop
from service.analysis.commissioned import verdict_at
from service.analysis.counts import count_roots
from service.analysis.loop import ExactLoop
from service.analysis.phrases import counted, edge_text, manner
from service.analysis.polynomials import squarefree_levels, strip_origin
from service.analysis.precision import decimal30
from service.analysis.roots import count_positive
from service.analysis.survey import Survey

GENERAL: Final = Caution(
    "linear_model_only",
    "The verdict is about the linear model sent. Saturation, friction, quantisation and unmodelled dynamics "
    "are outside it. It is not a safety function: the standards for functional safety that apply to the "
    "plant, local codes and the responsible licensed engineer decide.",
)


def cautions(  # noqa: PLR0913, PLR0917 - each part of the answer has its say
    survey: Survey,
    open_loop: OpenLoop,
    edges: tuple[Edge, ...],
    bands: tuple[Band, ...],
    gain: fmpq | None,
    commissioned: Commissioned | None,
) -> tuple[Caution, ...]:
    """Collect the cautions, the general one last."""
    return (
        *_of_structure(survey, open_loop),
        *_of_conditional_stability(edges, bands, commissioned),
        *_of_commissioned(survey, gain, commissioned),
        GENERAL,
    )


def _of_structure(survey: Survey, open_loop: OpenLoop) -> Iterator[Caution]:
    loop = survey.loop
    if loop.zero:
        yield Caution("gain_without_effect", "The numerator is zero: no gain changes anything.")
    modes = open_loop.hidden_modes
    if modes:
        right, axis = sum(m.rhp_roots for m in modes), sum(m.axis_roots for m in modes)
        shared = sum(len(m.polynomial) - 1 for m in modes)
        where = " All of them are left of the axis."
        if right or axis:
            where = (
                f" {right} right of the imaginary axis and {axis} on it: no gain can make the loop stable."
            )
        yield Caution(
            "hidden_mode",
            f"Numerator and denominator share {counted(shared, 'root')}, which no gain moves and the curve "
            f"does not show.{where}",
        )
    if any(pole.multiplicity > 1 for pole in open_loop.axis_poles):
        yield Caution(
            "repeated_axis_poles",
            "The open loop has repeated poles on the imaginary axis: without feedback its response grows "
            "without bound.",
        )
    if not loop.zero and loop.excess < 0:
        yield Caution(
            "improper_loop",
            "The loop has more zeros than poles. No plant is like that at high frequency; the neglected lags "
            "decide what happens there.",
        )
    if not loop.zero and loop.excess == 0:
        limit = abs(fmpq(loop.denominator.leading_coefficient(), loop.numerator.leading_coefficient()))
        yield Caution(
            "direct_feedthrough",
            "The loop does not fall off at high frequency. Any dead time, however short, makes it unstable "
            f"wherever |K| > {Decimal(decimal30(limit)):.4g}.",
        )
    if survey.course.side_at_start == 0 and loop.denominator.degree() + loop.numerator.degree() > 0:
        yield Caution(
            "lossless_loop",
            "The loop has no damping at all. Whole bands of gain keep poles on the imaginary axis, and the "
            "smallest neglected lag or loss decides on which side of it they lie.",
        )


def _of_conditional_stability(
    edges: tuple[Edge, ...], bands: tuple[Band, ...], commissioned: Commissioned | None
) -> Iterator[Caution]:
    """Name the edges towards zero that a stable gain may not fall below."""
    wanted = range(len(bands)) if commissioned is None else (commissioned.band,)
    named = set()
    for i in wanted:
        limit = None if i is None or bands[i].verdict != "stable" else _limit_towards_zero(edges, bands, i)
        if limit is None or limit in named:
            continue
        named.add(limit)
        edge, beyond = edges[limit[0]], bands[limit[1]]
        yield Caution(
            "conditional_stability",
            f"A drop in gain destabilises: towards zero beyond K = {edge_text(edge)} {_fate(beyond, edge)}. "
            "Saturation, start-up and a worn actuator lower the effective gain.",
        )


def _limit_towards_zero(
    edges: tuple[Edge, ...], bands: tuple[Band, ...], band: int
) -> tuple[int, int] | None:
    """Return the numbers of the nearest edge towards zero with no stable band beyond, and of that band.

    Zero itself is no such edge.
    """
    while band > 0 and edges[band - 1].gain > 0:
        band -= 1
        if bands[band].verdict != "stable":
            return band, band
    while band < len(edges) and edges[band].gain < 0:
        band += 1
        if bands[band].verdict != "stable":
            return band - 1, band
    return None


def _fate(beyond: Band, edge: Edge) -> str:
    if beyond.rhp_poles:
        verb = "is" if beyond.rhp_poles == 1 else "are"
        return f"{counted(beyond.rhp_poles, 'pole')} {verb} unstable, {manner(edge.frequencies)}"
    return f"{counted(beyond.axis_poles, 'pole')} stay on the imaginary axis"


def _of_commissioned(
    survey: Survey, gain: fmpq | None, commissioned: Commissioned | None
) -> Iterator[Caution]:
    if commissioned is None or survey.loop.zero:
        return
    if commissioned.verdict == "marginal":
        yield Caution(
            "marginal_is_not_safe",
            "At the gain in service poles lie on the imaginary axis: a disturbance never dies out.",
        )
    if commissioned.verdict == "ill_posed":
        yield Caution(
            "algebraic_loop",
            "At the gain in service the loop is algebraic: 1 + K L(infinity) = 0, and the linear model has "
            "no answer of its own.",
        )
    if gain is not None and gain != 0:
        yield Caution(
            "reversed_gain", f"With the sign reversed (K = {-gain}) {_reversed(survey.loop, -gain)}."
        )


def _reversed(loop: ExactLoop, gain: fmpq) -> str:
    """Say what a reversed sign does (swapped leads, a reversed actuator)."""
    closed = loop.closed_at(gain)
    counts = None if closed.is_zero() else count_roots(closed)
    verdict = verdict_at(loop, gain, counts)
    if counts is None or verdict == "ill_posed":
        return "the loop is algebraic and has no answer of its own"
    if verdict == "stable":
        return "the loop is stable too: stability does not show the sign"
    if counts.rhp == 0:
        return f"the loop is at best marginal, with {counted(counts.axis, 'pole')} on the axis"
    rest, _ = strip_origin(closed)
    straight = sum(count_positive(level) * m for level, m in squarefree_levels(rest))
    if straight == 0:
        how = "oscillating"
    elif straight == counts.rhp:
        how = "running away without oscillation, with no warning before the end stop"
    else:
        how = f"{straight} of them running away without oscillation"
    verb = "is" if counts.rhp == 1 else "are"
    return f"{counted(counts.rhp, 'pole')} {verb} unstable, {how}"
