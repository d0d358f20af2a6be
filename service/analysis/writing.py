"""From exact values to what the answer says: nearest doubles, 30 digits, exact forms."""

from flint import arb, fmpq

from service.analysis import answer
from service.analysis.bands import verdict_of
from service.analysis.crossings import axis_roots
from service.analysis.edges import ORIGIN, Place
from service.analysis.gains import Gain, enclose_square_root, square_root
from service.analysis.loop import ExactLoop, hidden_modes
from service.analysis.polynomials import strip_origin
from service.analysis.precision import (
    Enclose,
    decimal30,
    nearest_double,
    rounded_decimal,
    rounded_double,
    working,
)
from service.analysis.roots import PositiveRoot
from service.analysis.survey import Survey


def write_edges(survey: Survey) -> tuple[answer.Edge, ...]:
    """Write the edges of a survey."""
    return tuple(
        answer.Edge(
            gain=gain_double(edge.gain),
            decimal=_gain_decimal(edge.gain),
            exact=gain_exact(edge.gain),
            causes=edge.causes,
            counts_equal=_same_counts(survey, i),
            frequencies=tuple(frequency(place) for place in edge.places),
        )
        for i, edge in enumerate(survey.edges)
    )


def _same_counts(survey: Survey, edge: int) -> bool:
    below, above = survey.bands[edge].counts, survey.bands[edge + 1].counts
    return (below.rhp, below.axis) == (above.rhp, above.axis)


def write_bands(survey: Survey) -> tuple[answer.Band, ...]:
    """Write the bands of a survey."""
    written = []
    for i, band in enumerate(survey.bands):
        lower, upper = survey.ends(i)
        written.append(
            answer.Band(
                lower=None if lower is None else gain_double(lower),
                upper=None if upper is None else gain_double(upper),
                verdict=verdict_of(band.counts),
                rhp_poles=band.counts.rhp,
                axis_poles=band.counts.axis,
                clockwise_encirclements=band.encirclements,
            )
        )
    return tuple(written)


def write_open_loop(survey: Survey) -> answer.OpenLoop:
    """Write what the loop is before it is closed."""
    counts = survey.open_loop
    return answer.OpenLoop(
        rhp_poles=counts.cancelled.rhp + counts.fixed.rhp,
        enclosed_poles=counts.enclosed,
        axis_poles=tuple(_axis_poles(survey.loop)),
        hidden_modes=hidden_modes(survey.loop),
    )


def _axis_poles(loop: ExactLoop) -> list[answer.AxisPole]:
    """List the axis poles of the denominator as sent, by ascending frequency."""
    _, at_origin = strip_origin(loop.sent_denominator)
    poles = [answer.AxisPole(0.0, 0.0, "0", at_origin)] if at_origin else []
    for root, multiplicity in axis_roots(loop.sent_denominator):
        at = frequency(root)
        if at.rad_per_s is not None and at.hz is not None:
            poles.append(answer.AxisPole(at.rad_per_s, at.hz, at.exact, multiplicity))
    return poles


def frequency(place: Place) -> answer.Frequency:
    """Write a frequency on the axis."""
    if isinstance(place, PositiveRoot):
        x = place.rational
        rad = enclose_square_root(place.ball)
        root = None if x is None else square_root(x)
        return answer.Frequency(
            rad_per_s=rounded_double(rad) if root is None else nearest_double(root),
            hz=rounded_double(_per_turn(rad)),
            exact=None if x is None else f"sqrt({x})" if root is None else str(root),
        )
    if place == ORIGIN:
        return answer.Frequency(0.0, 0.0, "0")
    return answer.Frequency(None, None, None)


def _per_turn(rad: Enclose) -> Enclose:
    def hertz(bits: int) -> arb:
        ball = rad(bits + 8)
        with working(bits + 32):
            return ball / (2 * arb.pi())

    return hertz


def gain_double(gain: Gain) -> float:
    """Return the double nearest to a gain."""
    exact = gain.rational
    return rounded_double(gain.ball) if exact is None else nearest_double(exact)


def _gain_decimal(gain: Gain) -> str:
    exact = gain.rational
    return rounded_decimal(gain.ball) if exact is None else decimal30(exact)


def gain_exact(gain: Gain) -> str | None:
    """Return the exact form of a gain, None where it has none."""
    if gain.rational is not None:
        return str(gain.rational)
    if gain.square is not None:
        return f"{'-' if gain.sign < 0 else ''}sqrt({gain.square})"
    return None


def ratio_double(end: Gain, gain: fmpq) -> float:
    """Return the double nearest to end / gain, gain not zero."""
    exact = end.rational
    if exact is not None:
        return nearest_double(exact / gain)

    def ratio(bits: int) -> arb:
        ball = end.ball(bits + 8)
        with working(bits + 32):
            return ball / arb(gain)

    return rounded_double(ratio)
