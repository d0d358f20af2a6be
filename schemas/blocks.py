"""Blocks in series: each a pair of polynomials, or its zeros, poles and factor."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from marshmallow import ValidationError, fields

from schemas.limits import LimitedSchema
from schemas.numbers import ExactNumber, exact_number, limits_of, two_numbers
from schemas.parts import BoundedList, ExactNumbers, Part


@dataclass(frozen=True, slots=True)
class PolynomialForm:
    """Coefficients in descending powers, leading zeros stripped; a zero polynomial is (0,)."""

    numerator: tuple[Fraction, ...]
    denominator: tuple[Fraction, ...]

    @property
    def degrees(self) -> tuple[int, int]:
        """Degrees of numerator and denominator."""
        return len(self.numerator) - 1, len(self.denominator) - 1


@dataclass(frozen=True, slots=True)
class ComplexPair:
    """A zero or pole re + j im and its conjugate, im > 0. In rad/s."""

    re: Fraction
    im: Fraction


Root = Fraction | ComplexPair


@dataclass(frozen=True, slots=True)
class RootForm:
    """factor * prod(s - zero) / prod(s - pole), a `ComplexPair` counting for both its roots."""

    zeros: tuple[Root, ...]
    poles: tuple[Root, ...]
    factor: Fraction

    @property
    def degrees(self) -> tuple[int, int]:
        """Degrees of numerator and denominator."""
        return _root_count(self.zeros), _root_count(self.poles)


BlockForm = PolynomialForm | RootForm


def _root_count(roots: tuple[Root, ...]) -> int:
    return len(roots) + sum(isinstance(root, ComplexPair) for root in roots)


def without_leading_zeros(coefficients: Sequence[Fraction]) -> tuple[Fraction, ...]:
    """Strip the zeros in front of ``coefficients`` (descending powers); (0,) where all are zero."""
    first = next((i for i, each in enumerate(coefficients) if each), len(coefficients) - 1)
    return tuple(coefficients[first:])


def not_all_zero(coefficients: Sequence[Fraction]) -> None:
    """Refuse a denominator that is zero."""
    if not any(coefficients):
        raise ValidationError("All coefficients of the denominator are zero.")


class ExactRoot(fields.Field[tuple[Fraction, Fraction]]):
    """A zero or pole: a real number, or ``[re, im]``; loaded as (re, im), im of a real one being 0."""

    default_error_messages = {  # noqa: RUF012
        "null": "Expected a number or [re, im].",
        "form": "Expected a number or [re, im], two numbers.",
        "real": "The imaginary part is zero: write a plain number.",
    }

    def _deserialize(
        self, value: object, attr: str | None, data: Mapping[str, Any] | None, **kwargs: Any
    ) -> tuple[Fraction, Fraction]:
        del attr, data, kwargs
        if not isinstance(value, list):
            return exact_number(value, limits_of(self)), Fraction(0)
        re, im = two_numbers(self, value)
        if not im:
            raise self.make_error("real")
        return re, im


class RootList(BoundedList):
    """Zeros or poles; a complex one implies its conjugate, so that giving both is an error."""

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(ExactRoot(), may_be_empty=True, **kwargs)

    def _read(self, entries: list[object]) -> list[Root]:
        roots = super()._read(entries)
        conjugates = {(re, -im): index for index, (re, im) in reversed(list(enumerate(roots))) if im}
        messages = {
            index: [f"The conjugate of entry {conjugates[root]}, which implies it: give one of the two."]
            for index, root in enumerate(roots)
            if conjugates.get(root, index) < index
        }
        if messages:
            raise ValidationError(messages)
        return [ComplexPair(re, abs(im)) if im else re for re, im in roots]


class BlockSchema(LimitedSchema):
    """One block: numerator and denominator, or zeros, poles and factor."""

    numerator = ExactNumbers(metadata={"description": "Coefficients in descending powers of s."})
    denominator = ExactNumbers(
        validate=not_all_zero,
        metadata={"description": "Coefficients in descending powers of s; not all zero."},
    )
    zeros = RootList(
        metadata={
            "description": "Zeros in rad/s; [re, im] stands for itself and its conjugate. Default: none.",
        }
    )
    poles = RootList(
        metadata={
            "description": "Poles in rad/s; [re, im] stands for itself and its conjugate. Default: none.",
        }
    )
    factor = ExactNumber(
        metadata={"description": "Factor in front of the products (s - zero)/(s - pole). Default: 1."}
    )


_POLYNOMIAL_KEYS = ("numerator", "denominator")
_ROOT_KEYS = ("zeros", "poles", "factor")


class Block(Part):
    """A block, in one of its two forms; loaded as `PolynomialForm` or `RootForm`."""

    default_error_messages = {  # noqa: RUF012
        "mixed": "One block holds either numerator and denominator, or zeros, poles and factor: not both.",
        "form": "A block holds numerator and denominator, or at least one of zeros, poles and factor.",
        "half": "A block with a numerator holds a denominator too, and the other way round.",
    }

    def __init__(self, **kwargs: Any) -> None:
        super().__init__(BlockSchema, **kwargs)

    def _deserialize(
        self,
        value: object,
        attr: str | None,
        data: Mapping[str, Any] | None,
        partial: Any = None,
        **kwargs: Any,
    ) -> BlockForm:
        loaded = super()._deserialize(value, attr, data, partial, **kwargs)
        as_polynomials = [key for key in _POLYNOMIAL_KEYS if key in loaded]
        as_roots = [key for key in _ROOT_KEYS if key in loaded]
        if as_polynomials and as_roots:
            raise self.make_error("mixed")
        if as_roots:
            return RootForm(
                tuple(loaded.get("zeros", ())),
                tuple(loaded.get("poles", ())),
                loaded.get("factor", Fraction(1)),
            )
        if len(as_polynomials) < len(_POLYNOMIAL_KEYS):
            raise self.make_error("half" if as_polynomials else "form")
        return polynomial_form(loaded["numerator"], loaded["denominator"])


def polynomial_form(numerator: Sequence[Fraction], denominator: Sequence[Fraction]) -> PolynomialForm:
    """Strip the leading zeros of both polynomials."""
    return PolynomialForm(without_leading_zeros(numerator), without_leading_zeros(denominator))
