"""Putting the tests' polynomials, loops and fractions in the engine's exact form, and reading it back."""

from fractions import Fraction

from flint import acb, arb, fmpq, fmpz_poly

from service.analysis.loop import ExactLoop, build_loop
from service.analysis.precision import ends
from service.analysis.question import Feedback, PolynomialBlock, Question
from tests.oracle import Loop
from tests.polynomials import Polynomial, primitive

ENOUGH_BITS = 1_000_000
"""A limit on bits that no loop of the tests reaches."""


def integral(p: Polynomial) -> fmpz_poly:
    """Give the positive multiple of p that has integer coefficients without a common divisor."""
    return fmpz_poly(primitive(p)[::-1])


def rational(value: Fraction | int | str) -> fmpq:
    """Give a fraction, or one written out, as the engine's."""
    exact = Fraction(value)
    return fmpq(exact.numerator, exact.denominator)


def fraction(value: fmpq) -> Fraction:
    """Give the engine's fraction as Python's."""
    return Fraction(int(value.numer()), int(value.denom()))


def exact_loop(loop: Loop, feedback: Feedback = "negative") -> ExactLoop:
    """Build the engine's loop from one block."""
    block = PolynomialBlock(loop.numerator or (Fraction(0),), loop.denominator)
    return build_loop(Question((block,), feedback=feedback), ENOUGH_BITS)[0]


def bounds(ball: arb) -> tuple[Fraction, Fraction]:
    """Give the exact ends of a finite ball."""
    low, high = ends(ball)
    return fraction(low), fraction(high)


def holds(ball: arb, value: Fraction | int) -> bool:
    """Tell whether a real value lies in the ball, exactly."""
    low, high = bounds(ball)
    return low <= value <= high


def encloses(ball: acb, re: Fraction | int, im: Fraction | int) -> bool:
    """Tell whether re + j im lies in the complex ball, exactly."""
    return holds(ball.real, re) and holds(ball.imag, im)
