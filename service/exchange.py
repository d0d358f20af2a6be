"""From a question document to its answer document: the one way, for the service and for the command."""

import json
from dataclasses import fields
from functools import cache
from typing import Any, Final

from schemas.blocks import BlockForm, ComplexPair, PolynomialForm, Root
from schemas.digest import question_digest
from schemas.question import SentQuestion, read_question
from service.analysis.question import Block, ComplexRoot, PolynomialBlock, Question, RootBlock
from service.execution import analyse
from service.settings import Limits
from service.version import ENGINE

DEFAULT_LIMITS = Limits()


def answer_document(
    document: object, limits: Limits = DEFAULT_LIMITS, *, wait: bool = True
) -> dict[str, Any]:
    """Answer the question ``document`` (as `schemas.reader.read_json` gives it) with the answer document.

    Raises `schemas.question.InvalidQuestion` where it is no valid question, the errors of
    `service.analysis.errors` where it has no answer, and `service.execution.Busy` where ``wait`` is
    false and another analysis is under way.
    """
    sent = read_question(document, limits.question)
    found = plain(analyse(analysed(sent), limits.polynomial_bits, wait=wait))
    loop = found["loop"]
    return {
        "loop": {"name": sent.name, **loop, "sample_time_s": None, "dead_time_s": "0"},
        "open_loop": found["open_loop"],
        "edges": found["edges"],
        "bands": found["bands"],
        "commissioned": found["commissioned"],
        "curve": None,
        "root_paths": None,
        "step_response": None,
        "acceptance": None,
        "evidence": found["evidence"],
        "summary": found["summary"],
        "cautions": found["cautions"],
        "question_digest": question_digest(sent),
        "engine": ENGINE,
    }


def json_bytes(document: object) -> bytes:
    """Write ``document`` as the service sends it: UTF-8 JSON, half a surrogate pair as its escape."""
    return _WRITER.encode(document).encode("utf-8", "backslashreplace")


# A NaN that reached the wire would be no JSON: better a failure than that.
_WRITER = json.JSONEncoder(ensure_ascii=False, allow_nan=False)


def analysed(sent: SentQuestion) -> Question:
    """Put the question sent in the analysis' own terms."""
    return Question(
        blocks=tuple(_block(block) for block in sent.blocks),
        gain=sent.gain,
        feedback=sent.feedback,
        detour=sent.detour,
        gain_window=sent.gain_window,
        evidence=sent.evidence,
    )


def _block(block: BlockForm) -> Block:
    if isinstance(block, PolynomialForm):
        return PolynomialBlock(block.numerator, block.denominator)
    return RootBlock(
        tuple(_root(root) for root in block.zeros), tuple(_root(root) for root in block.poles), block.factor
    )


def _root(root: Root) -> Any:
    return ComplexRoot(root.re, root.im) if isinstance(root, ComplexPair) else root


def plain(value: Any) -> Any:
    """Turn dataclasses into dicts of their fields and tuples into lists, all the way down."""
    kind: Any = type(value)
    if kind in _LEAVES:
        return value
    if kind is tuple:
        return [plain(each) for each in value]
    return {name: plain(getattr(value, name)) for name in _names(kind)}


_LEAVES: Final = frozenset({str, float, int, bool, type(None)})


@cache
def _names(kind: Any) -> tuple[str, ...]:
    return tuple(field.name for field in fields(kind))
