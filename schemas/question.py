"""The question: what a caller sends, checked whole before anything is computed."""

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, Literal, cast

from marshmallow import ValidationError, missing

from schemas.blocks import Block, BlockForm, not_all_zero, polynomial_form
from schemas.checks import faults_between
from schemas.limits import FAULTS_LISTED, MEMBERS, LimitedSchema, QuestionLimits
from schemas.numbers import ExactNumber, ExactPair
from schemas.parts import BoundedList, Choice, ExactNumbers, Flag, Part, Sampling, Text, too_many_members
from schemas.problem import Fault, faults_of

DEFAULT_LIMITS = QuestionLimits()


class InvalidQuestion(Exception):
    """The document is no valid question; ``faults`` holds every fault, in a fixed order, 500 at most.

    ``count`` says how many there are: a body of 1 MiB can hold a hundred thousand, and nobody reads those.
    """

    def __init__(self, faults: Sequence[Fault]) -> None:
        self.count = len(faults)
        self.faults = tuple(faults[:FAULTS_LISTED])
        super().__init__("; ".join(f"{fault.pointer or 'question'}: {fault.detail}" for fault in self.faults))


@dataclass(frozen=True, slots=True)
class SentQuestion:
    """A valid question with its defaults filled in; ``curve`` is a number of points, None for no curve."""

    name: str | None
    blocks: tuple[BlockForm, ...]
    gain: Fraction | None
    feedback: Literal["negative", "positive"]
    detour: Literal["right", "left"]
    gain_window: tuple[Fraction, Fraction] | None
    curve: int | None
    evidence: bool


def positive(value: Fraction) -> None:
    """Refuse a time that is not above zero."""
    if value <= 0:
        raise ValidationError("Must be above zero.")


def not_negative(value: Fraction) -> None:
    """Refuse a time below zero."""
    if value < 0:
        raise ValidationError("Must not be below zero.")


def only_true(value: bool) -> None:  # noqa: FBT001 (a validator takes the value alone)
    """Refuse a requirement to be unstable."""
    if not value:
        raise ValidationError("May only be true.")


class RequireSchema(LimitedSchema):
    """Acceptance requirements."""

    stable = Flag(validate=only_true, metadata={"description": "Require stability at the commissioned gain."})
    gain_margin_db_at_least = ExactNumber(metadata={"description": "In dB, up and down."})
    phase_margin_deg_at_least = ExactNumber(metadata={"description": "In degrees, the smallest magnitude."})
    delay_margin_s_at_least = ExactNumber(metadata={"description": "In seconds."})
    delay_margin_periods_at_least = ExactNumber(metadata={"description": "In sampling periods."})
    modulus_margin_at_least = ExactNumber(metadata={"description": "Least distance from the point -1."})
    sensitivity_peak_at_most = ExactNumber(metadata={"description": "A ratio."})
    complementary_peak_at_most = ExactNumber(metadata={"description": "A ratio."})
    stable_over = ExactPair(proper=False, metadata={"description": "Closed interval of gains, [low, high]."})


class QuestionSchema(LimitedSchema):
    """One loop, and what to say of it."""

    name = Text(
        load_default=None,
        metadata={"description": "Free text, at most 200 characters; echoed, otherwise without effect."},
    )
    numerator = ExactNumbers(
        metadata={"description": "Coefficients in descending powers of s. Required without blocks."},
    )
    denominator = ExactNumbers(
        validate=not_all_zero,
        metadata={
            "description": "Coefficients in descending powers of s, not all zero. Required without blocks.",
        },
    )
    blocks = BoundedList(
        Block(),
        limit="blocks",
        metadata={"description": "Instead of numerator and denominator: the loop as blocks in series."},
    )
    gain = ExactNumber(
        load_default=None,
        metadata={"description": "The commissioned gain K, the one in service; null: no commissioned part."},
    )
    feedback = Choice(
        ("negative", "positive"),
        load_default="negative",
        metadata={"description": "negative: 1 + K L = 0; positive: 1 - K L = 0."},
    )
    detour = Choice(
        ("right", "left"),
        load_default="right",
        metadata={
            "description": "Side on which the contour passes poles on the imaginary axis: right leaves them "
            "outside, left takes them in.",
        },
    )
    sample_time_s = ExactNumber(
        load_default=None,
        validate=positive,
        metadata={"description": "Sampling period in seconds. This version offers null alone."},
    )
    dead_time_s = ExactNumber(
        load_default=Fraction(0),
        validate=not_negative,
        metadata={"default": 0, "description": "Dead time in seconds. This version offers 0 alone."},
    )
    gain_window = ExactPair(
        proper=True,
        load_default=None,
        metadata={
            "description": "[lowest, highest] gain to report, the lowest below the highest; a commissioned "
            "gain must lie in it, an edge exactly at an end is listed. null: every gain.",
        },
    )
    curve = Sampling(
        load_default=300,
        metadata={
            "default": {"points": 300},
            "description": '{"points": n}, or false for none. This version takes both and answers null.',
        },
    )
    root_paths = Sampling(
        load_default=None,
        allow_none=False,
        metadata={"default": False, "description": "This version offers false alone."},
    )
    step_response = Sampling(
        load_default=None,
        allow_none=False,
        metadata={"default": False, "description": "This version offers false alone."},
    )
    evidence = Flag(
        load_default=False,
        metadata={"description": "Include what a third party needs to re-derive the verdicts."},
    )
    require = Part(
        RequireSchema,
        load_default=None,
        metadata={"description": "Acceptance requirements. This version offers null alone."},
    )

    def __init__(self, limits: QuestionLimits) -> None:
        super().__init__(limits)
        self.defaults = {
            name: field.load_default
            for name, field in self.load_fields.items()
            if field.load_default is not missing
        }


def read_question(document: object, limits: QuestionLimits = DEFAULT_LIMITS) -> SentQuestion:
    """Read the question in ``document``, as read by `schemas.reader.read_json`.

    Raises `InvalidQuestion` with all faults at once, each with a pointer to its field.
    """
    if not isinstance(document, dict):
        raise InvalidQuestion((Fault("Expected an object, the question."),))
    if len(document) > MEMBERS:
        raise InvalidQuestion(tuple(faults_of(too_many_members(document).messages)))
    schema = _schema(limits)
    loaded, faults = _loaded(document, schema)
    faults += faults_between(document, loaded, limits)
    if faults:
        raise InvalidQuestion(faults)
    return _sent(schema.defaults | loaded)


def _loaded(document: dict[str, object], schema: QuestionSchema) -> tuple[dict[str, Any], list[Fault]]:
    """Load each field by itself: the fields without a fault, and the faults of the others."""
    try:
        # partial: marshmallow passes by what is missing, which is most fields of most questions
        return schema.load(document, partial=True), []
    except ValidationError as error:
        messages = cast("dict[str, object]", error.messages)
        valid = cast("dict[str, Any]", error.valid_data)
        loaded = {field: value for field, value in valid.items() if field not in messages}
        return loaded, list(faults_of(messages))


@lru_cache(maxsize=4)
def _schema(limits: QuestionLimits) -> QuestionSchema:
    return QuestionSchema(limits)


def _sent(loaded: dict[str, Any]) -> SentQuestion:
    blocks = loaded.get("blocks") or [polynomial_form(loaded["numerator"], loaded["denominator"])]
    return SentQuestion(
        name=loaded["name"],
        blocks=tuple(blocks),
        gain=loaded["gain"],
        feedback=loaded["feedback"],
        detour=loaded["detour"],
        gain_window=loaded["gain_window"],
        curve=loaded["curve"],
        evidence=loaded["evidence"],
    )
