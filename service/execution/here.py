"""One analysis at a time in this process, because FLINT's working precision is one for the whole process."""

from threading import Lock
from typing import Final

from service.analysis import answer
from service.analysis.answer import Answer
from service.analysis.question import Question

_FLINT: Final = Lock()


class Busy(Exception):
    """Another analysis is under way, and the caller would not wait."""


def analyse(question: Question, bits_limit: int, *, wait: bool = True) -> Answer:
    """Answer ``question``, polynomials limited to ``bits_limit`` bits, when no other analysis runs here.

    Raises what `service.analysis.answer` raises, and `Busy` where ``wait`` is false and one does run.
    """
    if not _FLINT.acquire(blocking=wait):
        raise Busy
    try:
        return answer(question, bits_limit)
    finally:
        _FLINT.release()
