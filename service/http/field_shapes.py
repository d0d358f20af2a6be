"""JSON Schema of the question's own fields, which no generator can know."""

from typing import Any, Final

from marshmallow import fields

from schemas.blocks import ExactRoot
from schemas.limits import FEWEST_POINTS, MOST_POINTS, NAME_LENGTH
from schemas.numbers import DECIMAL, FRACTION, ExactNumber, ExactPair, limits_of
from schemas.parts import BoundedList, Choice, Flag, PointCount, Sampling, Text

EXACT_NUMBER: Final = {
    "description": "An exact number: a JSON number, taken as the decimal written (0.1 is one tenth), "
    "or a string.",
    "oneOf": [
        {"type": "number"},
        {"type": "string", "pattern": f"^({DECIMAL.pattern}|{FRACTION.pattern})$"},
    ],
    "examples": [2.5, "1/3", "-1e-3"],
}

_REFERENCE: Final = {"$ref": "#/components/schemas/ExactNumber"}
_TWO: Final = {"type": "array", "items": _REFERENCE, "minItems": 2, "maxItems": 2}


def own_field_shape(_converter: object, field: fields.Field[Any], ret: dict[str, Any]) -> dict[str, Any]:
    """Describe ``field`` where it is one of ours; ``ret`` is what the generator has found so far."""
    if isinstance(field, Sampling):
        return {"oneOf": [{"const": False}, {"$ref": ret.pop("$ref")}]}
    shape = _shape(field)
    return {"anyOf": [shape, {"type": "null"}]} if shape and field.allow_none else shape


def _shape(field: fields.Field[Any]) -> dict[str, Any]:  # noqa: PLR0911 (a return a kind of field)
    match field:
        case ExactRoot():
            return {"oneOf": [_REFERENCE, _TWO]}
        case ExactNumber():
            return _REFERENCE
        case ExactPair():
            return _TWO
        case BoundedList():
            return {
                "minItems": 0 if field.may_be_empty else 1,
                "maxItems": getattr(limits_of(field), field.limit),
            }
        case PointCount():
            return {"type": "integer", "minimum": FEWEST_POINTS, "maximum": MOST_POINTS}
        case Text():
            return {"type": "string", "maxLength": NAME_LENGTH}
        case Choice():
            return {"type": "string"}
        case Flag():
            return {"type": "boolean"}
        case _:
            return {}
