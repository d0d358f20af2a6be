"""The one door of the analysis: a question goes down, an answer comes up."""

from fractions import Fraction

from flint import fmpq

from service.analysis import answer as parts
from service.analysis.cautions import cautions
from service.analysis.commissioned import commission
from service.analysis.evidence import gather
from service.analysis.loop import POLYNOMIAL_BITS, build_loop
from service.analysis.question import Question
from service.analysis.summary import summarise
from service.analysis.survey import survey
from service.analysis.writing import write_bands, write_edges, write_open_loop


def answer(question: Question, bits_limit: int = POLYNOMIAL_BITS) -> parts.Answer:
    """Answer a question about a continuous loop without dead time, completely and exactly.

    Only one analysis may run at a time in a process: ball arithmetic has one precision for all.

    Raises InvalidLoop, TooLarge, OutOfRange or CountsDisagree (see ``service.analysis.errors``).
    """
    loop, echo = build_loop(question, bits_limit)
    window = question.gain_window
    surveyed = survey(
        loop, question.detour, None if window is None else (_exact(window[0]), _exact(window[1]))
    )
    open_loop = write_open_loop(surveyed)
    edges, bands = write_edges(surveyed), write_bands(surveyed)
    gain = None if question.gain is None else _exact(question.gain)
    commissioned = None if gain is None else commission(surveyed, gain)
    return parts.Answer(
        loop=echo,
        open_loop=open_loop,
        edges=edges,
        bands=bands,
        commissioned=commissioned,
        summary=summarise(surveyed, open_loop, edges, bands, commissioned),
        cautions=cautions(surveyed, open_loop, edges, bands, gain, commissioned),
        evidence=gather(surveyed) if question.evidence else None,
    )


def _exact(value: Fraction) -> fmpq:
    return fmpq(value.numerator, value.denominator)
