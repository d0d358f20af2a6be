"""Exact polynomial arithmetic for the tests, in Python's integers and fractions: nothing of the engine's.

A polynomial is a tuple of fractions in descending powers without leading zeros; the zero polynomial is ().
"""

from collections.abc import Iterable, Sequence
from fractions import Fraction
from math import gcd as integer_gcd
from math import lcm

Polynomial = tuple[Fraction, ...]

ONE: Polynomial = (Fraction(1),)


def polynomial(*coefficients: Fraction | int | str) -> Polynomial:
    """Give the polynomial with these coefficients, descending powers; texts are read exactly."""
    return trimmed(tuple(Fraction(c) for c in coefficients))


def trimmed(coefficients: Sequence[Fraction]) -> Polynomial:
    """Strip leading zeros."""
    start = next((i for i, c in enumerate(coefficients) if c), len(coefficients))
    return tuple(coefficients[start:])


def degree(p: Polynomial) -> int:
    """Give the degree, -1 for the zero polynomial."""
    return len(p) - 1


def add(*summands: Polynomial) -> Polynomial:
    """Give the sum."""
    size = max((len(p) for p in summands), default=0)
    total = [Fraction(0)] * size
    for p in summands:
        for i, c in enumerate(p):
            total[size - len(p) + i] += c
    return trimmed(total)


def scaled(p: Polynomial, factor: Fraction | int) -> Polynomial:
    """Give factor * p."""
    return trimmed([factor * c for c in p])


def multiply(*factors: Polynomial) -> Polynomial:
    """Give the product, 1 of no factor."""
    product: Polynomial = ONE
    for p in factors:
        raw = [Fraction(0)] * max(0, len(product) + len(p) - 1)
        for i, a in enumerate(product):
            for k, b in enumerate(p):
                raw[i + k] += a * b
        product = trimmed(raw)
    return product


def power(p: Polynomial, exponent: int) -> Polynomial:
    """Give p to a power >= 0."""
    return multiply(*[p] * exponent)


def evaluate(p: Polynomial, at: Fraction | int) -> Fraction:
    """Give p(at)."""
    value = Fraction(0)
    for c in p:
        value = value * at + c
    return value


def derivative(p: Polynomial) -> Polynomial:
    """Give dp/ds."""
    return trimmed([c * (degree(p) - i) for i, c in enumerate(p[:-1])])


def divided(p: Polynomial, by: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Give quotient and remainder of p divided by a polynomial that is not zero."""
    rest = list(p)
    quotient = []
    while len(rest) >= len(by):
        factor = rest[0] / by[0]
        quotient.append(factor)
        for i, c in enumerate(by):
            rest[i] -= factor * c
        rest.pop(0)
    return trimmed(quotient), trimmed(rest)


def monic(p: Polynomial) -> Polynomial:
    """Divide by the leading coefficient."""
    return scaled(p, 1 / p[0]) if p else p


def primitive(p: Iterable[Fraction]) -> list[int]:
    """Give the integer polynomial without common divisor that is a positive multiple of p."""
    coefficients = list(p)
    denominators = lcm(*(c.denominator for c in coefficients))
    integers = [int(c * denominators) for c in coefficients]
    content = integer_gcd(*integers) or 1
    return [c // content for c in integers]


def gcd(p: Polynomial, q: Polynomial) -> Polynomial:
    """Give the monic greatest common divisor, () of two zeros; primitive remainder sequence."""
    while q:
        remainder = divided(p, q)[1]
        p, q = q, tuple(Fraction(c) for c in primitive(remainder))
    return monic(p)


def squarefree_factors(p: Polynomial) -> list[tuple[Polynomial, int]]:
    """Give the monic squarefree factors of degree >= 1 with their multiplicities (Yun's scheme)."""
    slope = derivative(p)
    common = gcd(p, slope)
    part, rest = divided(p, common)[0], divided(slope, common)[0]
    factors = []
    multiplicity = 1
    while degree(part) > 0:
        rest = add(rest, scaled(derivative(part), -1))
        factor = gcd(part, rest)
        if degree(factor) > 0:
            factors.append((factor, multiplicity))
        part, rest = divided(part, factor)[0], divided(rest, factor)[0]
        multiplicity += 1
    return factors


def stretched(p: Polynomial, factor: Fraction) -> Polynomial:
    """Give p(factor * s)."""
    return trimmed([c * factor ** (degree(p) - i) for i, c in enumerate(p)])


def parts(p: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Give E and O of p(s) = E(s^2) + s O(s^2)."""
    ascending = p[::-1]
    return trimmed(ascending[::2][::-1]), trimmed(ascending[1::2][::-1])


def in_square(p: Polynomial) -> Polynomial:
    """Give p(s^2)."""
    spread = [Fraction(0)] * max(0, 2 * len(p) - 1)
    spread[::2] = p
    return tuple(spread)
