"""Bands: the open intervals between edges, counted at a sample gain and checked against the curve."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Final

from flint import fmpq

from service.analysis.answer import Verdict
from service.analysis.counts import Counts, count_roots
from service.analysis.edges import RawEdge
from service.analysis.errors import CountsDisagree
from service.analysis.gains import Gain
from service.analysis.loop import ExactLoop
from service.analysis.precision import Enclose, ends
from service.analysis.question import Detour
from service.analysis.roots import floor_log2, power_of_two
from service.analysis.winding import Winding

Cell = tuple[fmpq, fmpq]
"""A closed interval round an edge's gain; both ends agree where the gain is rational."""

CellMaker = Callable[[int], Cell]
"""Makes the interval of so many significant bits."""

CELL_BITS: Final = 64


@dataclass(frozen=True, slots=True)
class RawBand:
    """A band before it is written: its sample gain, exact counts and clockwise encirclements."""

    sample: fmpq
    counts: Counts
    encirclements: int | None


def verdict_of(counts: Counts) -> Verdict:
    """Name what the counts mean."""
    if counts.rhp == 0 and counts.axis == 0:
        return "stable"
    return "marginal" if counts.rhp == 0 and not counts.repeated_axis else "unstable"


@dataclass(frozen=True, slots=True)
class OpenLoopCounts:
    """Open-loop poles: those of the cancelled loop and the fixed ones, which no gain moves.

    Fixed are the hidden modes, and all poles where the numerator is zero. ``enclosed`` is P as the
    contour counts it.
    """

    cancelled: Counts
    fixed: Counts
    enclosed: int

    @classmethod
    def of(cls, loop: ExactLoop, detour: Detour) -> "OpenLoopCounts":
        """Count the cancelled denominator and the shared factor apart."""
        if loop.zero:
            fixed = count_roots(loop.denominator)
            return cls(Counts(0, 0), fixed, fixed.rhp)
        cancelled, fixed = count_roots(loop.denominator), count_roots(loop.shared)
        taken_in = cancelled.axis if detour == "left" else 0
        return cls(cancelled, fixed, cancelled.rhp + fixed.rhp + taken_in)


def gain_cells(edges: Sequence[RawEdge], walls: Sequence[tuple[int, fmpq]] = ()) -> tuple[Cell, ...]:
    """Return disjoint ascending intervals round the gains, of 64 significant bits or 64 times 2^i.

    A rational gain is its own interval; see ``dyadic_cell`` for the others. Where an irrational gain has
    several frequencies, its interval holds one root of its minimal polynomial only. No interval reaches
    a wall: (number of edges below it, gain that is no edge's).
    """
    makers = [_cell_maker(edge) for edge in edges]
    for below, gain in reversed(walls):
        makers.insert(below, _exactly(gain))
    cells = list(separate_cells(makers, CELL_BITS))
    for below, _ in walls:
        del cells[below]
    return tuple(cells)


def _exactly(gain: fmpq) -> CellMaker:
    return lambda _bits: (gain, gain)


def _cell_maker(edge: RawEdge) -> CellMaker:
    def make(bits: int) -> Cell:
        cell = gain_cell(edge.gain, bits)
        if len(edge.places) > 1 and edge.gain.rational is None:
            while not edge.gain.alone_in(cell):
                bits *= 2
                cell = gain_cell(edge.gain, bits)
        return cell

    return make


def separate_cells(makers: Sequence[CellMaker], bits: int) -> tuple[Cell, ...]:
    """Make ascending intervals of so many bits, doubled for those that would touch a neighbour."""
    wanted = [bits] * len(makers)
    cells = [make(bits) for make in makers]
    while touching := {
        j for i in range(len(cells) - 1) if cells[i][1] >= cells[i + 1][0] for j in (i, i + 1)
    }:
        for i in touching:
            wanted[i] *= 2
            cells[i] = makers[i](wanted[i])
    return tuple(cells)


def gain_cell(gain: Gain, bits: int) -> Cell:
    """Return the interval of ``bits`` significant bits that holds a gain."""
    exact = gain.rational
    return (exact, exact) if exact is not None else dyadic_cell(gain.ball, bits)


def encirclements(edges: tuple[RawEdge, ...], winding: Winding) -> tuple[int, ...]:
    """Return the clockwise encirclements of -1/K in each band, from the curve alone.

    Raises CountsDisagree if a curve that stays finite should encircle the point at infinity (K = 0).
    """
    signs = [edge.gain.sign for edge in edges]
    below = signs.count(-1)
    at_zero = below < len(signs) and signs[below] == 0
    arcs = winding.arcs
    if not at_zero and (arcs.over_negative or arcs.over_positive):
        raise CountsDisagree("The curve reaches infinity where its loop has no pole on the axis.")
    downward = [arcs.over_positive]
    for edge in reversed(edges[:below]):
        downward.append(downward[-1] - edge.swing)
    upward = [arcs.over_negative]
    for edge in edges[below + at_zero :]:
        upward.append(upward[-1] + edge.swing)
    return (*reversed(downward), *(upward if at_zero else upward[1:]))


@dataclass(frozen=True, slots=True)
class Span:
    """The part of a band that is reported, ends exclusive, None for unbounded.

    ``sample`` lies in the band; ``empty`` tells that the reported part holds no gain, because an edge
    lies exactly at the window's end.
    """

    lower: fmpq | None
    upper: fmpq | None
    sample: fmpq
    empty: bool


def span_of(cells: tuple[Cell, ...], band: int, window: tuple[fmpq, fmpq] | None) -> Span:
    """Clip band number ``band`` to the window and choose its sample gain, the simplest fraction inside."""
    lower = cells[band - 1][1] if band > 0 else None
    upper = cells[band][0] if band < len(cells) else None
    if window is None:
        return Span(lower, upper, simplest_between(lower, upper), empty=False)
    low = window[0] if lower is None or lower < window[0] else lower
    high = window[1] if upper is None or upper > window[1] else upper
    if low < high:
        return Span(low, high, simplest_between(low, high), empty=False)
    return Span(low, high, simplest_between(lower, upper), empty=True)


def count_band(
    loop: ExactLoop, sample: fmpq, wound: int, poles: "OpenLoopCounts", *, lossless: bool
) -> RawBand:
    """Count the closed-loop roots of a band and hold them against its encirclements.

    Raises CountsDisagree unless Z = P + N, or where axis roots run through the band of a loop whose
    curve is not on the real axis.
    """
    counts = count_roots(loop.closed_at(sample))
    enclosed_poles = poles.enclosed
    on_curve = counts.axis != poles.fixed.axis
    if on_curve and (not lossless or counts.axis < poles.fixed.axis):
        raise CountsDisagree(
            f"At K = {sample} the closed-loop polynomial has {counts.axis} roots on the axis, "
            f"where only the {poles.fixed.axis} of the hidden modes can be."
        )
    if not on_curve and counts.rhp != enclosed_poles + wound:
        raise CountsDisagree(
            f"At K = {sample} the closed-loop polynomial has {counts.rhp} roots right of the axis; "
            f"{enclosed_poles} enclosed open-loop poles and {wound} clockwise encirclements say otherwise."
        )
    return RawBand(sample, counts, None if on_curve else wound)


def dyadic_cell(enclose: Enclose, bits: int) -> Cell:
    """Return [m/2^k, (m+1)/2^k], k = bits - floor(log2 |v|), round an irrational number v."""
    tried = bits + 16
    while True:
        low, high = ends(enclose(tried))
        if (low > 0) == (high > 0) and low != 0 and high != 0:
            exponent = floor_log2(abs(low))
            if exponent == floor_log2(abs(high)):
                unit = power_of_two(exponent - bits)
                m = (low / unit).floor()
                if m == (high / unit).floor():
                    return fmpq(m) * unit, fmpq(m + 1) * unit
        tried *= 2


def simplest_between(lower: fmpq | None, upper: fmpq | None) -> fmpq:
    """Return the fraction of smallest denominator, then smallest size, in an open interval (None: unbounded).

    Zero where it lies inside. Otherwise by the Stern-Brocot tree, walked in continued fractions.

    Examples
    --------
    >>> simplest_between(fmpq(1, 3), fmpq(1, 2))
    2/5
    >>> simplest_between(None, fmpq(-5, 2))
    -3

    """
    if (lower is None or lower < 0) and (upper is None or upper > 0):
        return fmpq(0)
    if lower is None or lower < 0:
        return -simplest_between(None if upper is None else -upper, None if lower is None else -lower)
    wholes = []
    while True:
        whole = fmpq(lower.floor())
        if upper is None or whole + 1 < upper:
            break
        wholes.append(whole)
        lower, upper = 1 / (upper - whole), None if lower == whole else 1 / (lower - whole)
    simplest = whole + 1
    for whole in reversed(wholes):
        simplest = whole + 1 / simplest
    return simplest
