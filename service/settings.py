"""The settings, read once from the environment: one variable each, HALFTURN_ and the setting's name."""

import re
from collections.abc import Iterator, Mapping
from dataclasses import asdict, dataclass, field
from typing import Final

from schemas.limits import QuestionLimits
from service.analysis import POLYNOMIAL_BITS

PREFIX: Final = "HALFTURN_"


class BadSettings(Exception):
    """The environment holds settings that cannot be; the message names all of them, a line each."""


@dataclass(frozen=True, slots=True)
class Limits:
    """Every limit that can be set; the names are those at ``/v1/limits``."""

    question: QuestionLimits = field(default_factory=QuestionLimits)
    body_bytes: int = 1_048_576
    polynomial_bits: int = POLYNOMIAL_BITS

    def values(self) -> dict[str, int]:
        """Each limit's value by its name."""
        return asdict(self.question) | {
            "body_bytes": self.body_bytes,
            "polynomial_bits": self.polynomial_bits,
        }


@dataclass(frozen=True, slots=True)
class Setting:
    """A limit that can be set: the values it may take, its unit and what it means."""

    name: str
    lowest: int
    highest: int
    unit: str
    meaning: str

    @property
    def variable(self) -> str:
        """The environment variable that sets it."""
        return f"{PREFIX}{self.name.upper()}"


# The highest values stay clear of the 4300 digits to which Python itself limits a number's text.
SETTINGS: Final = (
    Setting("body_bytes", 1_024, 67_108_864, "bytes", "size of a request's body, or of its query"),
    Setting("degree", 1, 200, "1", "degree of numerator and of denominator, multiplied out"),
    Setting("digits", 1, 1_000, "digits", "digits of a written number; of a fraction's two numbers each"),
    Setting("exponent", 0, 300, "1", "magnitude of a written power of ten"),
    Setting("blocks", 1, 200, "blocks", "blocks in series"),
    Setting("list_entries", 2, 1_000, "entries", "entries of one list of coefficients, zeros or poles"),
    Setting("polynomial_bits", 64, 1_000_000, "bits", "bits of the loop's polynomials, multiplied out"),
)


def read_limits(environment: Mapping[str, str]) -> Limits:
    """Read the limits from ``environment``, defaults where it says nothing; raises `BadSettings`.

    Other variables with the prefix are none of ours: a cluster's scheduler sets some by itself.
    """
    complaints = list(_complaints(environment))
    if complaints:
        raise BadSettings("\n".join(complaints))
    values = Limits().values()
    values |= {
        each.name: int(environment[each.variable]) for each in SETTINGS if each.variable in environment
    }
    body_bytes, polynomial_bits = values.pop("body_bytes"), values.pop("polynomial_bits")
    return Limits(QuestionLimits(**values), body_bytes, polynomial_bits)


def _complaints(environment: Mapping[str, str]) -> Iterator[str]:
    for each in SETTINGS:
        text = environment.get(each.variable)
        if text is None:
            continue
        number = int(text) if re.fullmatch(r"[0-9]{1,12}", text) else -1
        if not each.lowest <= number <= each.highest:
            yield (
                f"{each.variable} is {text!r}, but must be a whole number "
                f"from {each.lowest} to {each.highest}: {each.meaning}."
            )
