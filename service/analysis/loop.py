"""The exact loop: numerator and denominator multiplied out, their common factor set apart."""

from dataclasses import dataclass
from fractions import Fraction
from typing import Final

from flint import fmpq, fmpz, fmpz_poly

from service.analysis import answer
from service.analysis.counts import count_roots
from service.analysis.errors import InvalidLoop, TooLarge
from service.analysis.polynomials import ONE, axis_parts, descending, primitive, squarefree_levels
from service.analysis.question import Block, ComplexRoot, PolynomialBlock, Question

POLYNOMIAL_BITS: Final = 20_000
"""Bits allowed in numerator and in denominator together with their signs, after multiplying out."""


@dataclass(frozen=True, slots=True)
class ExactLoop:
    """L = N/D closed as D + K N = 0: integer polynomials in ascending powers of s.

    ``sent_numerator`` and ``sent_denominator`` are N and D with nothing cancelled, ``numerator`` and
    ``denominator`` the coprime pair left after dividing by ``shared``. For positive feedback N is
    negated here, so that everything below knows negative feedback alone.
    """

    sent_numerator: fmpz_poly
    sent_denominator: fmpz_poly
    numerator: fmpz_poly
    denominator: fmpz_poly
    shared: fmpz_poly

    @property
    def zero(self) -> bool:
        """Whether the numerator vanishes: the gain has no effect."""
        return self.numerator.is_zero()

    @property
    def excess(self) -> int:
        """Degree of the denominator less that of the numerator; negative for an improper loop."""
        return self.denominator.degree() - self.numerator.degree()

    def closed_at(self, gain: fmpq) -> fmpz_poly:
        """A positive multiple of D + K N, nothing cancelled."""
        return self.sent_denominator * gain.denom() + self.sent_numerator * gain.numer()

    def reduced_at(self, gain: fmpq) -> fmpz_poly:
        """A positive multiple of D + K N for the coprime pair."""
        return self.denominator * gain.denom() + self.numerator * gain.numer()


@dataclass(frozen=True, slots=True)
class AxisView:
    """A pair N, D on s = jw as polynomials in x = w^2: N(jw) = Ne(x) + jw No(x), D likewise."""

    numerator_even: fmpz_poly
    numerator_odd: fmpz_poly
    denominator_even: fmpz_poly
    denominator_odd: fmpz_poly

    @classmethod
    def of(cls, numerator: fmpz_poly, denominator: fmpz_poly) -> "AxisView":
        """Split both polynomials."""
        return cls(*axis_parts(numerator), *axis_parts(denominator))


def build_loop(question: Question, bits_limit: int) -> tuple[ExactLoop, answer.Loop]:
    """Multiply the blocks out and cancel; return the loop and its echo for the answer.

    Raises InvalidLoop for a denominator that is zero, TooLarge beyond ``bits_limit`` bits.
    """
    numerator, scale_n = fmpz_poly([1]), fmpz(1)
    denominator, scale_d = fmpz_poly([1]), fmpz(1)
    for block in question.blocks:
        (top, top_scale), (bottom, bottom_scale) = _block_polynomials(block)
        numerator, scale_n = numerator * top, scale_n * top_scale
        denominator, scale_d = denominator * bottom, scale_d * bottom_scale
        _hold_limit(numerator, bits_limit)
        _hold_limit(denominator, bits_limit)
    if denominator.is_zero():
        raise InvalidLoop("The denominator is zero.")
    echo = answer.Loop(
        numerator=_texts(numerator, scale_n),
        denominator=_texts(denominator, scale_d),
        relative_degree=None if numerator.is_zero() else denominator.degree() - numerator.degree(),
        feedback=question.feedback,
        detour=question.detour,
    )
    factor = scale_d if question.feedback == "negative" else -scale_d
    return _cancelled(numerator * factor, denominator * scale_n), echo


def _cancelled(numerator: fmpz_poly, denominator: fmpz_poly) -> ExactLoop:
    content = numerator.content().gcd(denominator.content())
    if content > 1:
        numerator, denominator = numerator // content, denominator // content
    if numerator.is_zero():
        return ExactLoop(numerator, denominator, numerator, denominator, ONE)
    shared = primitive(numerator.gcd(denominator))
    if shared.degree() < 1:
        return ExactLoop(numerator, denominator, numerator, denominator, ONE)
    return ExactLoop(numerator, denominator, numerator // shared, denominator // shared, shared)


def _hold_limit(p: fmpz_poly, bits_limit: int) -> None:
    bits = sum(c.height_bits() for c in p.coeffs())
    if bits > bits_limit:
        raise TooLarge(bits_limit, bits)


def _block_polynomials(block: Block) -> tuple[tuple[fmpz_poly, fmpz], tuple[fmpz_poly, fmpz]]:
    """Return (numerator, its scale), (denominator, its scale): polynomial over a positive integer."""
    if isinstance(block, PolynomialBlock):
        return _integral(block.numerator), _integral(block.denominator)
    zeros, zeros_scale = _from_roots(block.zeros)
    poles, poles_scale = _from_roots(block.poles)
    factor = block.factor
    return (zeros * factor.numerator, zeros_scale * factor.denominator), (poles, poles_scale)


def _integral(coefficients: tuple[Fraction, ...]) -> tuple[fmpz_poly, fmpz]:
    """Clear fractions: descending coefficients to (integer polynomial, common denominator)."""
    scale = fmpz(1)
    for c in coefficients:
        if c.denominator != 1:
            scale = scale.lcm(c.denominator)
    common = int(scale)
    return fmpz_poly([c.numerator * (common // c.denominator) for c in reversed(coefficients)]), scale


def _from_roots(roots: tuple[Fraction | ComplexRoot, ...]) -> tuple[fmpz_poly, fmpz]:
    p, scale = fmpz_poly([1]), fmpz(1)
    for root in roots:
        factor: tuple[Fraction, ...]
        if isinstance(root, ComplexRoot):
            factor = (Fraction(1), -2 * root.re, root.re * root.re + root.im * root.im)
        else:
            factor = (Fraction(1), -root)
        q, q_scale = _integral(factor)
        p, scale = p * q, scale * q_scale
    return p, scale


def _texts(p: fmpz_poly, scale: fmpz) -> tuple[str, ...]:
    return tuple(str(fmpq(c, scale)) for c in reversed(p.coeffs())) or ("0",)


def hidden_modes(loop: ExactLoop) -> tuple[answer.HiddenMode, ...]:
    """Describe the shared roots: one monic squarefree polynomial for each multiplicity, ascending."""
    modes = []
    for level, multiplicity in sorted(squarefree_levels(loop.shared), key=lambda pair: pair[1]):
        counts = count_roots(level)
        lead = level.leading_coefficient()
        mode = answer.HiddenMode(
            polynomial=tuple(str(fmpq(c, lead)) for c in descending(level)),
            rhp_roots=counts.rhp,
            axis_roots=counts.axis,
        )
        modes.extend([mode] * multiplicity)
    return tuple(modes)
