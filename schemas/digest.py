"""The digest of a question: two ways of writing one question have one digest."""

import hashlib
import json

from schemas.blocks import BlockForm, ComplexPair, PolynomialForm, Root
from schemas.numbers import exact_text
from schemas.question import SentQuestion

_CANONICAL = json.JSONEncoder(sort_keys=True, separators=(",", ":"))


def question_digest(question: SentQuestion) -> str:
    """Hash the exact question in canonical form, as "sha256:" and 64 hexadecimal digits.

    Canonical is JSON with sorted keys in which every number is reduced to "p/q", defaults are filled
    in, leading zeros stripped, numerator and denominator stand as the one block they are, and the name,
    which changes nothing, is left out.
    """
    window = question.gain_window
    canonical = {
        "blocks": [_block(block) for block in question.blocks],
        "gain": None if question.gain is None else exact_text(question.gain),
        "feedback": question.feedback,
        "detour": question.detour,
        "sample_time_s": None,
        "dead_time_s": "0",
        "gain_window": None if window is None else [exact_text(end) for end in window],
        "curve": False if question.curve is None else {"points": question.curve},
        "root_paths": False,
        "step_response": False,
        "evidence": question.evidence,
        "require": None,
    }
    return f"sha256:{hashlib.sha256(_CANONICAL.encode(canonical).encode('ascii')).hexdigest()}"


def _block(block: BlockForm) -> dict[str, object]:
    if isinstance(block, PolynomialForm):
        return {
            "numerator": [exact_text(each) for each in block.numerator],
            "denominator": [exact_text(each) for each in block.denominator],
        }
    return {
        "zeros": [_root(root) for root in block.zeros],
        "poles": [_root(root) for root in block.poles],
        "factor": exact_text(block.factor),
    }


def _root(root: Root) -> str | list[str]:
    if isinstance(root, ComplexPair):
        return [exact_text(root.re), exact_text(root.im)]
    return exact_text(root)
