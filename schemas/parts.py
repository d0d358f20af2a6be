"""The fields a question is made of, beside its exact numbers: each takes one form and says so."""

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any, Final

from marshmallow import ValidationError, fields, validate

from schemas.limits import FEWEST_POINTS, MEMBERS, MOST_POINTS, NAME_LENGTH, LimitedSchema
from schemas.numbers import ExactNumber, exact_number, limits_of
from schemas.problem import beyond
from schemas.reader import NumberText, RepeatedKeys


class Text(fields.Field[str]):
    """Free text of at most 200 characters."""

    default_error_messages = {  # noqa: RUF012
        "type": "Expected a text or null.",
        "surrogate": "The text holds half of a surrogate pair, which is no character.",
    }

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        del attr, data, kwargs
        if type(value) is not str:
            raise self.make_error("type")
        if len(value) > NAME_LENGTH:
            raise beyond("name_length", NAME_LENGTH, len(value), "characters of a name")
        if not value.isascii() and any("\ud800" <= character <= "\udfff" for character in value):
            raise self.make_error("surrogate")
        return value


class Choice(fields.Field[str]):
    """One of a few words."""

    def __init__(self, words: Sequence[str], **kwargs: Any) -> None:
        expected = " or ".join(f'"{word}"' for word in words)
        super().__init__(validate=validate.OneOf(words), **kwargs)
        self.error_messages |= {"choice": f"Expected {expected}.", "null": f"Expected {expected}."}
        self.words = tuple(words)

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> str:
        del attr, data, kwargs
        if type(value) is not str or value not in self.words:
            raise self.make_error("choice")
        return value


class Flag(fields.Field[bool]):
    """true or false, and nothing that merely looks like it."""

    default_error_messages = {  # noqa: RUF012
        "flag": "Expected true or false.",
        "null": "Expected true or false.",
    }

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> bool:
        del attr, data, kwargs
        if type(value) is not bool:
            raise self.make_error("flag")
        return value


class BoundedList(fields.List[Any]):
    """A list whose length is checked before its entries are read.

    ``limit`` names the limit of its length; an empty list is refused unless ``may_be_empty``.
    """

    default_error_messages = {  # noqa: RUF012
        "invalid": "Expected a list.",
        "null": "Expected a list.",
        "empty": "An empty list.",
    }

    def __init__(
        self,
        inner: fields.Field[Any],
        *,
        limit: str = "list_entries",
        may_be_empty: bool = False,
        **kwargs: Any,
    ) -> None:
        super().__init__(inner, **kwargs)
        self.limit = limit
        self.may_be_empty = may_be_empty

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> list[Any]:
        if not isinstance(value, list):
            raise self.make_error("invalid")
        if not value and not self.may_be_empty:
            raise self.make_error("empty")
        del attr, data, kwargs
        allowed = getattr(limits_of(self), self.limit)
        if len(value) > allowed:
            raise beyond(self.limit, allowed, len(value), "entries of one list")
        return self._read(value)

    def _read(self, entries: list[object]) -> list[Any]:
        return super()._deserialize(entries, None, None)


class ExactNumbers(BoundedList):
    """A list of exact numbers; read in one loop, since most of a question's time goes here."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(ExactNumber(), **kwargs)

    def _read(self, entries: list[object]) -> list[Fraction]:
        limits = limits_of(self)
        numbers, messages = [], {}
        for index, entry in enumerate(entries):
            try:
                numbers.append(exact_number(entry, limits))
            except ValidationError as error:
                messages[index] = error.messages
        if messages:
            raise ValidationError(messages)
        return numbers


class Part(fields.Nested):
    """An object inside the question, read under the question's limits."""

    default_error_messages = {  # noqa: RUF012
        "type": "Expected an object.",
        "null": "Expected an object.",
    }

    def __init__(self, schema_class: type[LimitedSchema], **kwargs: Any) -> None:
        super().__init__(schema_class, **kwargs)
        self.schema_class = schema_class

    def _bind_to_schema(self, field_name: str, parent: Any) -> None:
        super()._bind_to_schema(field_name, parent)
        self.nested = self.schema_class(limits_of(self))

    def _deserialize(
        self,
        value: object,
        attr: str | None,
        data: Mapping[str, Any] | None,
        partial: Any = None,
        **kwargs: Any,
    ) -> Any:
        if not isinstance(value, dict):
            raise self.make_error("type")
        if len(value) > MEMBERS:
            raise too_many_members(value)
        refuse_repeated_keys(value)
        del partial  # what may be missing from the question says nothing of what may be missing here
        return super()._deserialize(value, attr, data, **kwargs)


def too_many_members(value: dict[str, object]) -> ValidationError:
    """Make the validation error for an object with more members than any object of a question needs."""
    return beyond("members", MEMBERS, len(value), "members of one object")


def refuse_repeated_keys(value: dict[str, object]) -> None:
    """Raise a validation error that names every key ``value`` holds more than once."""
    if isinstance(value, RepeatedKeys):
        raise ValidationError({key: ["The key stands more than once."] for key in value.repeated})


_POINTS_EXPECTED: Final = f"Expected an integer from {FEWEST_POINTS} to {MOST_POINTS}."


class PointCount(fields.Field[int]):
    """A number of points, a JSON integer from 10 to 5000."""

    default_error_messages = dict.fromkeys(("form", "null", "required"), _POINTS_EXPECTED)

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> int:
        del attr, data, kwargs
        if type(value) is not NumberText and type(value) is not int:
            raise self.make_error("form")
        points = exact_number(value, limits_of(self))
        if points.denominator != 1 or points < FEWEST_POINTS:
            raise self.make_error("form")
        if points > MOST_POINTS:
            raise beyond("points", MOST_POINTS, int(points), "points of a curve")
        return int(points)


class PointsSchema(LimitedSchema):
    """How finely something is drawn."""

    points = PointCount(
        required=True, metadata={"description": f"Number of points, {FEWEST_POINTS} to {MOST_POINTS}."}
    )


class Sampling(Part):
    """``{"points": n}``, loaded as n, or ``false``, loaded as None."""

    default_error_messages = {  # noqa: RUF012
        "type": 'Expected {{"points": n}} or false.',
        "null": 'Expected {{"points": n}} or false.',
    }

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(PointsSchema, **kwargs)

    def _deserialize(
        self,
        value: object,
        attr: str | None,
        data: Mapping[str, Any] | None,
        partial: Any = None,
        **kwargs: Any,
    ) -> int | None:
        if value is False:
            return None
        points: int = super()._deserialize(value, attr, data, partial, **kwargs)["points"]
        return points
