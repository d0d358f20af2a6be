"""Putting a loop to the engine's one door, and reading its edges and bands as exact numbers."""

from decimal import Decimal
from fractions import Fraction
from typing import Any

from service.analysis import answer
from service.analysis.answer import Answer, Edge
from service.analysis.question import PolynomialBlock, Question
from tests.oracle import Loop

DIGITS = 30
"""Significant digits of an edge's decimal."""


def ask(loop: Loop, **fields: Any) -> Answer:
    """Answer the question about one block; ``fields`` are those of Question."""
    return answer(Question((PolynomialBlock(loop.numerator, loop.denominator),), **fields))


def edge_gain(edge: Edge) -> Fraction:
    """Give the edge's gain, exactly where it is rational, else to 30 significant digits."""
    if edge.exact is not None and "sqrt" not in edge.exact:
        return Fraction(edge.exact)
    return Fraction(Decimal(edge.decimal))


def is_rational(edge: Edge) -> bool:
    """Tell whether the edge's gain is given as a fraction."""
    return edge.exact is not None and "sqrt" not in edge.exact


def band_ends(found: Answer) -> list[tuple[Fraction | None, Fraction | None]]:
    """Give lower and upper end of each band; None where unbounded."""
    gains = [edge_gain(edge) for edge in found.edges]
    return list(zip([None, *gains], [*gains, None], strict=True))


def gains_inside(lower: Fraction | None, upper: Fraction | None, share: Fraction) -> list[Fraction]:
    """Give gains of a band: 1e-6 of it from either end, at a share of it, and far out where unbounded."""
    near = Fraction(1, 10**6)
    far = Fraction(10) ** 24
    if lower is not None and upper is not None:
        return [lower + (upper - lower) * t for t in (near, share, 1 - near)]
    if lower is not None:
        return [lower + (abs(lower) or 1) * t for t in (near, share, far)]
    if upper is not None:
        return [upper - (abs(upper) or 1) * t for t in (near, share, far)]
    return [-far, -share, Fraction(0), share, far]
