"""What a third party needs to re-derive the verdicts with rational arithmetic alone.

Intervals round irrational values are [m/2^k, (m+1)/2^k]: of 64 significant bits round a gain and of 192
round a squared frequency, twice as many as often as needed for the intervals to be disjoint and for
interval arithmetic to bracket each gain.
"""

from functools import partial
from typing import Final

from flint import arb, fmpz_poly

from service.analysis.answer import BandEvidence, EdgeEvidence, Evidence
from service.analysis.bands import Cell, dyadic_cell, separate_cells
from service.analysis.edges import ORIGIN, Place, RawEdge
from service.analysis.loop import AxisView
from service.analysis.precision import working
from service.analysis.roots import PositiveRoot, by_frequency
from service.analysis.survey import Survey

Quotient = tuple[fmpz_poly, fmpz_poly]
"""A rational function: numerator, denominator."""

_SQUARE_BITS: Final = 192
_SPARE: Final = 1 << 16  # by how much the bracket of a gain is to be narrower than the room it has


def gather(survey: Survey) -> Evidence:
    """Gather the evidence in the order of edges and bands."""
    squares = _square_cells(survey)
    return Evidence(
        edges=tuple(
            EdgeEvidence(
                gain_between=_texts(cell),
                omega_squared_between=tuple(_place_evidence(place, squares) for place in edge.places),
                gain_polynomial=_gain_polynomial(edge),
            )
            for edge, cell in zip(survey.edges, survey.cells, strict=True)
        ),
        bands=tuple(
            BandEvidence(None if span.empty else str(band.sample))
            for span, band in zip(survey.spans, survey.bands, strict=True)
        ),
    )


def _texts(cell: Cell) -> tuple[str, str]:
    return str(cell[0]), str(cell[1])


def _place_evidence(place: Place, squares: dict[int, Cell]) -> tuple[str, str] | None:
    if isinstance(place, PositiveRoot):
        return _texts(squares[id(place)])
    return ("0", "0") if place == ORIGIN else None


def _gain_polynomial(edge: RawEdge) -> tuple[str, ...] | None:
    irrational = any(isinstance(p, PositiveRoot) and p.rational is None for p in edge.places)
    if len(edge.places) > 1 or (irrational and edge.gain.rational is not None):
        return tuple(str(c) for c in reversed(edge.gain.minimal_polynomial.coeffs()))
    return None


def _square_cells(survey: Survey) -> dict[int, Cell]:
    """Return an interval for each positive squared frequency, by the identity of its root."""
    gain = _gain_in_square(AxisView.of(survey.loop.numerator, survey.loop.denominator))
    wanted = [
        (place, cell if edge.gain.rational is None and len(edge.places) == 1 else None)
        for edge, cell in zip(survey.edges, survey.cells, strict=True)
        for place in edge.places
        if isinstance(place, PositiveRoot)
    ]
    wanted.sort(key=lambda pair: by_frequency(pair[0]))
    makers = [partial(_square_cell, gain, root, cell) for root, cell in wanted]
    cells = separate_cells(makers, _SQUARE_BITS)
    return {id(root): cell for (root, _), cell in zip(wanted, cells, strict=True)}


def _gain_in_square(view: AxisView) -> Quotient:
    """Return K = -(De Ne + x Do No)/(Ne^2 + x No^2) as polynomials in x."""
    x = fmpz_poly([0, 1])
    ne, no = view.numerator_even, view.numerator_odd
    return -(view.denominator_even * ne + x * view.denominator_odd * no), ne * ne + x * no * no


def _square_cell(gain: Quotient, root: PositiveRoot, gain_cell: Cell | None, bits: int) -> Cell:
    x = root.rational
    if x is not None:
        return x, x
    while True:
        cell = dyadic_cell(root.ball, bits)
        if gain_cell is None or _brackets(gain, cell, gain_cell, bits):
            return cell
        bits *= 2


def _brackets(gain: Quotient, square: Cell, gain_cell: Cell, bits: int) -> bool:
    """Whether interval arithmetic puts the gain well inside its interval."""
    above, below = gain
    with working(4 * bits):
        x = arb(square[0]).union(arb(square[1]))
        found = above(x) / below(x)
        if not found.is_finite():
            return False
        spare = found.rad() * _SPARE
        return bool(arb(gain_cell[0]) < found.mid() - spare and found.mid() + spare < arb(gain_cell[1]))
