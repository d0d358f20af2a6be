"""The gain in service: where it stands, what it closes to, and where the nearest stable band lies."""

from flint import arb, fmpq

from service.analysis.answer import Commissioned, NearestStable, Verdict
from service.analysis.bands import verdict_of
from service.analysis.counts import Counts, count_roots
from service.analysis.gains import Gain, compare
from service.analysis.loop import ExactLoop
from service.analysis.poles import closed_loop_poles
from service.analysis.precision import HIGHEST, nearest_double, working
from service.analysis.survey import Survey
from service.analysis.writing import ratio_double


def commission(survey: Survey, gain: fmpq) -> Commissioned:
    """Answer for one gain, exactly at an edge too."""
    closed = survey.loop.closed_at(gain)
    counts = None if closed.is_zero() else count_roots(closed)
    verdict = verdict_at(survey.loop, gain, counts)
    return Commissioned(
        gain=nearest_double(gain),
        exact=str(gain),
        band=_band_of(survey, gain),
        verdict=verdict,
        rhp_poles=None if counts is None else counts.rhp,
        axis_poles=None if counts is None else counts.axis,
        closed_loop_poles=() if counts is None else closed_loop_poles(closed),
        nearest_stable=None if verdict == "stable" else _nearest_stable(survey, gain),
        margins=None,
    )


def verdict_at(loop: ExactLoop, gain: fmpq, counts: Counts | None) -> Verdict:
    """Name what the counts at one gain mean (None: the closed-loop polynomial vanishes there)."""
    loses_degree = loop.excess == 0 and loop.reduced_at(gain).degree() < loop.denominator.degree()
    if counts is None or (loses_degree and not loop.zero):
        return "ill_posed"
    return verdict_of(counts)


def _band_of(survey: Survey, gain: fmpq) -> int | None:
    """Number of the band that holds the gain, None at an edge."""
    below = 0
    for edge in survey.edges:
        order = compare(edge.gain, Gain(gain))
        if order == 0:
            return None
        below += order < 0
    return below


def _nearest_stable(survey: Survey, gain: fmpq) -> NearestStable | None:
    """Find the stable band nearest by the logarithm of its ratio to the gain, on the gain's side of zero.

    Of two equally near ones the one towards zero.
    """
    if gain == 0:
        return None
    side = 1 if gain > 0 else -1
    inward: tuple[int, Gain] | None = None
    outward: tuple[int, Gain] | None = None
    for i in _stable_from_zero(survey, side):
        near, far = survey.ends(i)[::side]
        if far is not None and compare(far, Gain(gain)) * side <= 0:
            inward = (i, far) if far.sign == side else inward
        elif outward is None and near is not None:
            outward = i, near
    if inward is None or (outward is not None and _nearer(outward[1], inward[1], gain)):
        inward = outward
    return None if inward is None else _as_ratios(survey, inward[0], gain)


def _stable_from_zero(survey: Survey, side: int) -> list[int]:
    """Return the numbers of the stable bands in the order in which gains grow away from zero."""
    stable = [
        i
        for i, (band, span) in enumerate(zip(survey.bands, survey.spans, strict=True))
        if verdict_of(band.counts) == "stable" and not span.empty
    ]
    return stable[::side]


def _nearer(outward: Gain, inward: Gain, gain: fmpq) -> bool:
    """Whether outward/gain < gain/inward; a tie is none."""
    if outward.rational is not None and inward.rational is not None:
        return bool(outward.rational * inward.rational < gain * gain)
    bits = 64
    while bits < HIGHEST:
        product = outward.ball(bits), inward.ball(bits)
        with working(2 * bits):
            difference = product[0] * product[1] - arb(gain) * arb(gain)
        if difference < 0:
            return True
        if difference > 0:
            return False
        bits *= 2
    return False


def _as_ratios(survey: Survey, band: int, gain: fmpq) -> NearestStable:
    ends = survey.ends(band)
    low, high = ends if gain > 0 else ends[::-1]
    return NearestStable(
        band=band,
        ratio_from=None if low is None else ratio_double(low, gain),
        ratio_to=None if high is None else ratio_double(high, gain),
    )
