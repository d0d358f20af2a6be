"""Exact numbers in and out: what is written is what is meant, and no monster is ever built."""

import re
from collections.abc import Mapping
from fractions import Fraction
from typing import Any, cast

from marshmallow import ValidationError, fields

from schemas.limits import LimitedSchema, QuestionLimits
from schemas.problem import beyond
from schemas.reader import NotFinite, NumberText

# JSON's own grammar (RFC 8259, section 6) allows E and a plus sign in the exponent; a string is held
# to the one way of writing that the contract names.
_TOKEN = re.compile(r"(-?)([0-9]+)(?:\.([0-9]+))?(?:[eE]([+-]?)([0-9]+))?")
DECIMAL = re.compile(r"(-?)([0-9]+)(?:\.([0-9]+))?(?:e([+-]?)([0-9]+))?")
FRACTION = re.compile(r"(-?)([0-9]+)/([0-9]+)")

_FORMS = 'a JSON number, or a string such as "-2.5", "1e-3" or "1/3"'

# An exponent longer than this is told by its length: the number itself would fill the page.
_SPEAKABLE_DIGITS = 15


def exact_number(value: object, limits: QuestionLimits) -> Fraction:
    """Read the number written as ``value``: a JSON number token, a string decimal or fraction, or an int.

    Raises `marshmallow.ValidationError`. Lengths are compared with ``limits`` (``digits``,
    ``exponent``) before any number is built.
    """
    if type(value) is NumberText:
        return _decimal(_TOKEN.fullmatch(value.text), limits)
    if type(value) is str:
        return _written(value, limits)
    if type(value) is int:
        return _integer(value, limits)
    raise ValidationError(_why_not_exact(value))


def exact_text(value: Fraction) -> str:
    """``value`` in lowest terms: "p/q", or "p" where it is an integer."""
    return str(value)


def _why_not_exact(value: object) -> str:
    if isinstance(value, bool):
        return f"A boolean is no number; expected {_FORMS}."
    if isinstance(value, NotFinite):
        return f"{value.text} is no number; expected {_FORMS}."
    if isinstance(value, float):
        return f"A binary float is not the decimal that was written; expected {_FORMS}."
    return f"Not a number; expected {_FORMS}."


def _written(text: str, limits: QuestionLimits) -> Fraction:
    fraction = FRACTION.fullmatch(text)
    return _fraction(fraction, limits) if fraction else _decimal(DECIMAL.fullmatch(text), limits)


def _fraction(match: re.Match[str], limits: QuestionLimits) -> Fraction:
    sign, numerator, denominator = match.groups()
    _refuse_digits(len(numerator), limits)
    _refuse_digits(len(denominator), limits)
    below = int(denominator)
    if not below:
        raise ValidationError("A fraction over zero.")
    return Fraction(int(sign + numerator), below)


def _decimal(match: re.Match[str] | None, limits: QuestionLimits) -> Fraction:
    if match is None:
        raise ValidationError(f"Not a number in a form taken here; expected {_FORMS}.")
    sign, whole, places, power_sign, power = match.groups()
    places = places or ""
    _refuse_digits(len(whole) + len(places), limits)
    scale = (_power(power_sign + power, limits) if power else 0) - len(places)
    mantissa = int(sign + whole + places)
    return Fraction(mantissa * 10**scale) if scale >= 0 else Fraction(mantissa, 10**-scale)


def _power(text: str, limits: QuestionLimits) -> int:
    magnitude = text.lstrip("+-").lstrip("0")
    if len(magnitude) > _SPEAKABLE_DIGITS:
        received = f"an exponent of {len(magnitude)} digits"
        raise beyond("exponent", limits.exponent, received, "magnitude of the power of ten")
    power = int(magnitude or "0")
    if power > limits.exponent:
        raise beyond("exponent", limits.exponent, power, "magnitude of the power of ten")
    return -power if text.startswith("-") else power


def _refuse_digits(received: int, limits: QuestionLimits) -> None:
    if received > limits.digits:
        raise beyond("digits", limits.digits, received, "digits of one number")


def _integer(value: int, limits: QuestionLimits) -> Fraction:
    if value.bit_length() > 4 * limits.digits:
        received = f"an integer of {value.bit_length()} bits"
        raise beyond("digits", limits.digits, received, "digits of one number")
    _refuse_digits(len(str(abs(value))), limits)
    return Fraction(value)


def limits_of(field: fields.Field[Any]) -> QuestionLimits:
    """Find the limits of the schema ``field`` is bound to."""
    return cast("LimitedSchema", field.root).limits


class ExactNumber(fields.Field[Fraction]):
    """A number that enters the mathematics, loaded as a `Fraction`."""

    default_error_messages = {"null": f"null is no number; expected {_FORMS}."}  # noqa: RUF012

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> Fraction:
        del attr, data, kwargs
        return exact_number(value, limits_of(self))


class ExactPair(fields.Field[tuple[Fraction, Fraction]]):
    """Two exact numbers, lowest first: a closed interval. ``proper`` asks for lowest < highest."""

    default_error_messages = {"form": "Expected [lowest, highest], two numbers."}  # noqa: RUF012

    def __init__(self, *, proper: bool, **kwargs: Any) -> None:
        super().__init__(**kwargs)
        self.proper = proper

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> tuple[Fraction, Fraction]:
        del attr, data, kwargs
        lowest, highest = two_numbers(self, value)
        if lowest > highest or (self.proper and lowest == highest):
            order = "below" if self.proper else "at most"
            raise ValidationError(f"The first number, the lowest, must be {order} the second, the highest.")
        return lowest, highest


def two_numbers(field: fields.Field[Any], value: object) -> tuple[Fraction, Fraction]:
    """Read the two exact numbers of the list ``value``; both faults are told where both are faulty.

    The field's ``form`` message says what was expected where ``value`` is no list of two.
    """
    if not isinstance(value, list) or len(value) != 2:  # noqa: PLR2004 (a pair has two)
        raise field.make_error("form")
    numbers, messages = [], {}
    for index, each in enumerate(value):
        try:
            numbers.append(exact_number(each, limits_of(field)))
        except ValidationError as error:
            messages[index] = error.messages
    if messages:
        raise ValidationError(messages)
    return numbers[0], numbers[1]
