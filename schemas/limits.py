"""How large a question may be, before anything is computed."""

from dataclasses import dataclass
from typing import Final

from marshmallow import Schema, fields

DEPTH_LIMIT: Final = 32
"""How deep objects and lists may be nested in one another."""

MEMBERS: Final = 100
"""Members of one object, known and unknown."""

NAME_LENGTH: Final = 200
"""Characters of a name."""

FEWEST_POINTS: Final = 10
MOST_POINTS: Final = 5000
"""Points of anything drawn."""

FAULTS_LISTED: Final = 500
"""Faults of a question that are listed one by one."""


@dataclass(frozen=True, slots=True)
class QuestionLimits:
    """Upper limits on what a question may hold; each is checked before the thing it limits is built.

    ``degree``: of numerator and denominator each, multiplied out. ``digits``: written digits of a
    decimal, or of a fraction's numerator and denominator each. ``exponent``: magnitude of a written
    power of ten. ``blocks``: blocks in series. ``list_entries``: entries of one sent list, leading
    zeros included.
    """

    degree: int = 60
    digits: int = 120
    exponent: int = 60
    blocks: int = 64
    list_entries: int = 256


class LimitedSchema(Schema):
    """A schema whose fields work under given limits; they find them as ``self.root.limits``."""

    error_messages = {"unknown": "Unknown key."}  # noqa: RUF012 (marshmallow declares it so)

    def __init__(self, limits: QuestionLimits) -> None:
        self.limits = limits
        super().__init__()


class LimitSchema(Schema):
    """A limit in force."""

    name = fields.String(required=True, metadata={"description": "By which refusals name it."})
    value = fields.Integer(required=True, strict=True, metadata={"description": "The most that is allowed."})
    unit = fields.String(required=True, metadata={"description": 'What it counts; "1" for a pure number.'})
    meaning = fields.String(required=True, metadata={"description": "What it limits."})
    setting = fields.String(
        required=True,
        allow_none=True,
        metadata={"description": "The environment variable that sets it; null where it is fixed."},
    )


class LimitListSchema(Schema):
    """Every limit in force."""

    limits = fields.List(
        fields.Nested(LimitSchema), required=True, metadata={"description": "One entry a limit."}
    )
