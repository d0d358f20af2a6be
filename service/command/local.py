"""Answering in this process, with the engine the service has."""

import os

from schemas.question import InvalidQuestion
from schemas.reader import NotJson, read_json
from service.analysis.errors import AnalysisError, CountsDisagree
from service.command.refusals import BadInput, Defect
from service.exchange import answer_document, json_bytes
from service.settings import BadSettings, Limits, read_limits


def limits_in_force() -> Limits:
    """Read the limits the environment sets, as the service does; raises `BadInput`."""
    try:
        return read_limits(os.environ)
    except BadSettings as error:
        raise BadInput(str(error)) from error


def local_answer(question: bytes, limits: Limits) -> bytes:
    """Answer ``question`` with the answer document, byte for byte as the service sends it.

    Raises `BadInput`, and `Defect` where the engine's two counts disagree.
    """
    if len(question) > limits.body_bytes:
        raise BadInput(f"Over the limit 'body_bytes': allowed {limits.body_bytes}, received more.")
    try:
        return json_bytes(answer_document(read_json(question), limits))
    except NotJson as error:
        raise BadInput(f"The question is not JSON. {error.detail}") from error
    except InvalidQuestion as error:
        faults = [(fault.pointer, fault.detail) for fault in error.faults]
        raise BadInput("The question is not valid.", faults) from error
    except CountsDisagree as error:
        raise Defect(f"The engine contradicts itself and gives no verdict: {error}") from error
    except AnalysisError as error:
        raise BadInput(str(error)) from error
