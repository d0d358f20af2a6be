"""What no field of a question can tell alone: forms that exclude each other, degrees, gain and window."""

from collections.abc import Iterator, Mapping
from typing import Any

from schemas.blocks import without_leading_zeros
from schemas.limits import QuestionLimits
from schemas.problem import Fault, beyond, faults_of
from schemas.reader import RepeatedKeys

_POLYNOMIALS = ("numerator", "denominator")

# Fields whose form is settled and whose mathematics is not there yet, with the one value taken.
_NOT_OFFERED_YET = {
    "sample_time_s": None,
    "dead_time_s": 0,
    "root_paths": None,
    "step_response": None,
    "require": None,
}


def faults_between(
    document: Mapping[str, object], loaded: Mapping[str, Any], limits: QuestionLimits
) -> Iterator[Fault]:
    """Tell every fault between fields of ``document``; ``loaded`` holds those without one of their own."""
    if isinstance(document, RepeatedKeys):
        yield from faults_of({key: ["The key stands more than once."] for key in document.repeated})
    yield from _form_faults(document)
    yield from _degree_faults(loaded, limits)
    yield from _gain_faults(loaded)
    yield from _not_offered(loaded)


def _form_faults(document: Mapping[str, object]) -> Iterator[Fault]:
    for field in _POLYNOMIALS:
        if "blocks" in document and field in document:
            yield Fault("Cannot stand beside blocks: give one or the other.", f"/{field}")
        elif "blocks" not in document and field not in document:
            yield Fault("Missing: give numerator and denominator, or blocks.", f"/{field}")


def _degree_faults(loaded: Mapping[str, Any], limits: QuestionLimits) -> Iterator[Fault]:
    for index, field in enumerate(_POLYNOMIALS):
        if field in loaded:
            degree = len(without_leading_zeros(loaded[field])) - 1
            yield from _degree_fault(f"/{field}", f"degree of the {field}", degree, limits)
        if "blocks" in loaded:
            degree = sum(block.degrees[index] for block in loaded["blocks"])
            yield from _degree_fault("/blocks", f"degree of the {field}, multiplied out", degree, limits)


def _degree_fault(pointer: str, what: str, degree: int, limits: QuestionLimits) -> Iterator[Fault]:
    if degree > limits.degree:
        yield from faults_of(beyond("degree", limits.degree, degree, what).messages, pointer)


def _gain_faults(loaded: Mapping[str, Any]) -> Iterator[Fault]:
    gain, window = loaded.get("gain"), loaded.get("gain_window")
    if gain is not None and window is not None and not window[0] <= gain <= window[1]:
        yield Fault("The commissioned gain lies outside gain_window.", "/gain")


def _not_offered(loaded: Mapping[str, Any]) -> Iterator[Fault]:
    for field, only in _NOT_OFFERED_YET.items():
        if loaded.get(field, only) != only:
            yield Fault("Not offered by this version: leave it out or at its default.", f"/{field}")
