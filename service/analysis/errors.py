"""What the analysis refuses to answer, and why.

AnalysisError
    InvalidLoop      the loop is none (a denominator that is zero)
    TooLarge         multiplied out, a polynomial exceeds its limit of bits
    TooHard          roots cannot be told apart at the highest precision
    OutOfRange       a value lies beyond the range of doubles
    CountsDisagree   the two counts of a band differ: a defect of the engine, never a verdict
"""


class AnalysisError(Exception):
    """The analysis has no answer; the message says why, for people."""


class InvalidLoop(AnalysisError):
    """The blocks do not make a loop."""


class TooLarge(AnalysisError):
    """Multiplied out, numerator or denominator has more bits than allowed."""

    def __init__(self, allowed: int, received: int) -> None:
        super().__init__(
            f"Multiplied out, the loop's polynomials hold {received} bits; at most {allowed} are allowed."
        )
        self.allowed = allowed
        self.received = received


class TooHard(AnalysisError):
    """Roots lie too close together to be enclosed apart within the highest precision."""


class OutOfRange(AnalysisError):
    """A certified value cannot be written as a double: its magnitude overflows or underflows."""


class CountsDisagree(AnalysisError):
    """Closed-loop count and encirclements contradict each other, or a count is impossible."""
