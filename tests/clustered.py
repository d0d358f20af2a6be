"""Polynomials whose roots lie as close together as integer coefficients allow."""

from tests.polynomials import Polynomial, add, polynomial, power, scaled

WIDTH = 2**190
"""The number a of ``mignotte``: its roots crowd round 1/a."""


def mignotte(n: int) -> Polynomial:
    """Give x^n - 2 (a x - 1)^2 (M. Mignotte, 1981 - from memory).

    Two real roots lie within a^(-n/2-1) of 1/a, one on either side.
    """
    return add(power(polynomial(1, 0), n), scaled(power(polynomial(WIDTH, -1), 2), -2))
