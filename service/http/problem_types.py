"""Every problem type: its stable name, its status, and what its page tells a person who meets it."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import Any, Final


@dataclass(frozen=True, slots=True)
class Example:
    """A request, empty where none meets the problem at will, and what the document adds to its type."""

    request: str
    body: str
    detail: str
    members: Mapping[str, Any] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class ProblemType:
    """A kind of problem; ``happened`` and ``remedy`` are for people."""

    name: str
    status: int
    title: str
    happened: str
    remedy: str
    example: Example

    @property
    def reference(self) -> str:
        """Its ``type`` in a problem document, which is the address of its page."""
        return f"/problems/{self.name}"


_ASK: Final = "POST /v1/stability\nContent-Type: application/json"
_QUESTION: Final = '{"numerator": [1], "denominator": [1, 1]}'

NOT_JSON: Final = ProblemType(
    "not-json",
    400,
    "Not JSON",
    "The body, or the question= of the address, is no JSON text this service reads: it breaks JSON's "
    "grammar, is not UTF-8, begins with a byte order mark, or is nested more than 32 deep.",
    "Read the position in detail. Write the question with a JSON library, in UTF-8, without a byte "
    "order mark.",
    Example(_ASK, '{"numerator": [1, ], "denominator": [1, 1]}', "Expecting value at line 1, column 19."),
)
BAD_REQUEST: Final = ProblemType(
    "bad-request",
    400,
    "Bad request",
    "The request could not be read to its end, or is malformed below the level of the question: a "
    "connection that broke off, a header out of shape.",
    "Send the request again; where that does not help, look at what stands between the client and the "
    "service.",
    Example("", "", "The request could not be read."),
)
NOT_FOUND: Final = ProblemType(
    "not-found",
    404,
    "Not found",
    "There is no resource at this address.",
    "Look at /reference for every address the service has; a slash at the end makes another address.",
    Example("GET /v1/stabilty", "", "There is nothing at this address."),
)
METHOD_NOT_ALLOWED: Final = ProblemType(
    "method-not-allowed",
    405,
    "Method not allowed",
    "The resource is there, but does not take this method.",
    "Use one of the methods in the Allow header. A question is put with POST or GET.",
    Example("DELETE /v1/stability", "", "This address takes GET, HEAD, OPTIONS, POST."),
)
NOT_ACCEPTABLE: Final = ProblemType(
    "not-acceptable",
    406,
    "Not acceptable",
    "The Accept header excludes the one form in which the resource is sent.",
    "Accept that form, or leave the header out.",
    Example(
        f"{_ASK}\nAccept: text/csv",
        _QUESTION,
        "This resource is sent as application/json, which the Accept header excludes.",
    ),
)
TOO_LARGE: Final = ProblemType(
    "too-large",
    413,
    "Too large",
    "The body, or the query of the address, is larger than the service reads.",
    "Send a smaller question; /v1/limits shows the limit body_bytes. No question within the other limits "
    "needs as much.",
    Example(
        f"{_ASK}\nContent-Length: 2097152",
        "",
        "The body is larger than allowed: body_bytes, allowed 1048576, received 2097152.",
        {"limit": "body_bytes", "allowed": 1048576, "received": 2097152},
    ),
)
UNSUPPORTED_MEDIA_TYPE: Final = ProblemType(
    "unsupported-media-type",
    415,
    "Unsupported media type",
    "The body is not declared as JSON, is declared in a charset that is not UTF-8, or is compressed.",
    "Send Content-Type: application/json, and the body as it is, without Content-Encoding.",
    Example(
        "POST /v1/stability\nContent-Type: text/plain",
        _QUESTION,
        "The body must be application/json in UTF-8; Content-Type says 'text/plain'.",
    ),
)
INVALID_QUESTION: Final = ProblemType(
    "invalid-question",
    422,
    "Invalid question",
    "The JSON is well formed, but it is no question this service answers: a field is unknown, missing,"
    " of the wrong form or beyond a limit, or asks for what this version does not offer.",
    "errors lists every fault at once, each with a JSON Pointer to its field. A fault beyond a limit "
    "names the limit, what it allows and what was received.",
    Example(
        _ASK,
        '{"numerator": [1, true], "denominator": [0, 0], "gian": 2}',
        "The question has 3 faults; errors lists them.",
        {
            "errors": [
                {"pointer": "/denominator", "detail": "All coefficients of the denominator are zero."},
                {"pointer": "/gian", "detail": "Unknown key."},
                {
                    "pointer": "/numerator/1",
                    "detail": "A boolean is no number; expected a JSON number, or a string such as "
                    '"-2.5", "1e-3" or "1/3".',
                },
            ]
        },
    ),
)
QUESTION_TOO_HEAVY: Final = ProblemType(
    "question-too-heavy",
    422,
    "Question too heavy",
    "Each number is within its limits, but multiplied out the loop's polynomials hold more bits than "
    "the service takes on: many blocks of many digits.",
    "Write the coefficients with fewer digits, or the loop with fewer blocks; /v1/limits shows "
    "polynomial_bits.",
    Example("", "", "Multiplied out, the loop's polynomials hold 24310 bits; at most 20000 are allowed."),
)
OUT_OF_RANGE: Final = ProblemType(
    "out-of-range",
    422,
    "Out of range",
    "An edge, a frequency or a pole of this loop is so large or so small that no double can hold it.",
    "Scale the question: measure time in another unit, or move a power of ten from the loop into the gain.",
    Example("", "", "A value lies beyond the range of doubles."),
)
COUNTS_DISAGREE: Final = ProblemType(
    "counts-disagree",
    500,
    "Counts disagree",
    "The service counts the unstable poles of every band twice, from the closed-loop polynomial and "
    "from the curve, and the two counts differ. That is a defect of the service; it gives no verdict "
    "rather than a wrong one.",
    "Do not rely on any verdict about this loop. Please report the question as a defect.",
    Example(
        "", "", "Two independent counts of this loop's poles contradict each other; there is no verdict."
    ),
)
INTERNAL_ERROR: Final = ProblemType(
    "internal-error",
    500,
    "Internal error",
    "The service failed in a way it does not understand. Nothing is wrong with the question.",
    "Please report the question as a defect; the service's log holds what happened.",
    Example("", "", "The service failed; its log says how."),
)
NOT_READY: Final = ProblemType(
    "not-ready",
    503,
    "Not ready",
    "The service put a question with a known answer to itself and did not get that answer, or has not "
    "got it yet.",
    "Send questions to another instance. An instance that stays so needs an operator.",
    Example("", "", "The known-answer self-test does not hold."),
)

PROBLEM_TYPES: Final[Mapping[str, ProblemType]] = MappingProxyType(
    {
        each.name: each
        for each in (
            NOT_JSON,
            BAD_REQUEST,
            NOT_FOUND,
            METHOD_NOT_ALLOWED,
            NOT_ACCEPTABLE,
            TOO_LARGE,
            UNSUPPORTED_MEDIA_TYPE,
            INVALID_QUESTION,
            QUESTION_TOO_HEAVY,
            OUT_OF_RANGE,
            COUNTS_DISAGREE,
            INTERNAL_ERROR,
            NOT_READY,
        )
    }
)
