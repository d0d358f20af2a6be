"""One loop surveyed along the whole gain axis: edges, bands and counts, exact and not yet written."""

from dataclasses import dataclass

from flint import fmpq

from service.analysis.bands import (
    Cell,
    OpenLoopCounts,
    RawBand,
    Span,
    count_band,
    encirclements,
    gain_cells,
    span_of,
)
from service.analysis.crossings import AxisCourse, axis_course
from service.analysis.edges import RawEdge, find_edges
from service.analysis.gains import Gain, compare
from service.analysis.loop import ExactLoop
from service.analysis.question import Detour
from service.analysis.winding import Arcs, Winding, wind

Window = tuple[fmpq, fmpq]


@dataclass(frozen=True, slots=True)
class Survey:
    """Edges inside the window (the whole axis without one), their intervals, and the bands between.

    ``bands`` and ``spans`` are one longer than ``edges`` and ``cells``.
    """

    loop: ExactLoop
    window: Window | None
    open_loop: OpenLoopCounts
    course: AxisCourse
    edges: tuple[RawEdge, ...]
    cells: tuple[Cell, ...]
    spans: tuple[Span, ...]
    bands: tuple[RawBand, ...]

    def ends(self, band: int) -> tuple[Gain | None, Gain | None]:
        """Lower and upper end of a band: an edge's gain, the window's end, or None for unbounded."""
        outer = (None, None) if self.window is None else (Gain(self.window[0]), Gain(self.window[1]))
        lower = self.edges[band - 1].gain if band > 0 else outer[0]
        upper = self.edges[band].gain if band < len(self.edges) else outer[1]
        return lower, upper


def survey(loop: ExactLoop, detour: Detour, window: Window | None) -> Survey:
    """Find every edge of the loop and count every band in the window.

    Raises CountsDisagree where Z = P + N does not hold.
    """
    if loop.zero:
        course = AxisCourse(1, ())
        winding = Winding(Arcs(), (), 0, 0)
        edges: tuple[RawEdge, ...] = ()
    else:
        course = axis_course(loop)
        winding = wind(loop, course, detour)
        edges = find_edges(loop, course, winding)
    wound = encirclements(edges, winding)
    first, last = _inside(edges, window)
    cells = gain_cells(edges, _walls(edges, first, last, window))
    spans = tuple(span_of(cells, i, window) for i in range(first, last + 1))
    open_loop = OpenLoopCounts.of(loop, detour)
    bands = tuple(
        count_band(loop, span.sample, wound[first + i], open_loop, lossless=course.side_at_start == 0)
        for i, span in enumerate(spans)
    )
    return Survey(loop, window, open_loop, course, edges[first:last], cells[first:last], spans, bands)


def _inside(edges: tuple[RawEdge, ...], window: Window | None) -> tuple[int, int]:
    """Return the slice of edges that lie in the closed window."""
    if window is None:
        return 0, len(edges)
    low, high = Gain(window[0]), Gain(window[1])
    first = sum(compare(edge.gain, low) < 0 for edge in edges)
    last = sum(compare(edge.gain, high) <= 0 for edge in edges)
    return first, last


def _walls(
    edges: tuple[RawEdge, ...], first: int, last: int, window: Window | None
) -> list[tuple[int, fmpq]]:
    """Return the window's ends that are no edges, each with the number of edges below it."""
    if window is None:
        return []
    walls = []
    if first == len(edges) or edges[first].gain.rational != window[0]:
        walls.append((first, window[0]))
    if last == 0 or edges[last - 1].gain.rational != window[1]:
        walls.append((last, window[1]))
    return walls
