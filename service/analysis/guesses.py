"""Where the roots of a polynomial may lie, in floating point: places to look, nothing is decided here."""

import cmath
import math
from collections.abc import Iterator

import numpy as np
from flint import acb, arb, fmpz_poly
from numpy.typing import NDArray

from service.analysis.polynomials import shifted

Complexes = NDArray[np.complex128]


def guess_roots(p: fmpz_poly) -> list[tuple[complex, int]]:
    """Return a guess (u, e) for each root of p: it may lie near 2^e u, u exactly real for a real one.

    p has positive degree and p(0) != 0. Where floating point cannot hold the coefficients, the guesses
    are spread on circles whose radii the sizes of the coefficients tell.
    """
    coefficients = [int(c) for c in p.coeffs()]
    degree = len(coefficients) - 1
    tilt = (abs(coefficients[0]).bit_length() - abs(coefficients[-1]).bit_length()) // degree
    spare = max(0, -tilt * degree)
    levelled = [c << (tilt * i + spare) for i, c in enumerate(coefficients)]
    excess = max(abs(c).bit_length() for c in levelled) - 900
    found = companion_roots([float(shifted(c, -excess)) for c in levelled])
    if len(found) == degree and np.isfinite(found).all() and (found != 0).all():
        return [(u, tilt) for u in found.tolist()]
    return list(_on_circles([abs(c).bit_length() for c in coefficients]))


def _on_circles(sizes: list[int]) -> Iterator[tuple[complex, int]]:
    """Yield guesses from the Newton polygon of the coefficients' sizes in bits (0: a zero coefficient)."""
    start, degree = 0, len(sizes) - 1
    while start < degree:
        slope, stop = max(
            ((sizes[i] - sizes[start]) / (i - start), i) for i in range(start + 1, degree + 1) if sizes[i]
        )
        count = stop - start
        for k in range(count):
            yield cmath.exp(1j * (2 * math.pi * (k + 0.25) / count + start)), round(-slope)
        start = stop


def companion_roots(coefficients: list[float] | list[complex]) -> Complexes:
    """Return the eigenvalues of the companion matrix; coefficients ascend, the last is not zero."""
    degree = len(coefficients) - 1
    lead = coefficients[-1]
    if lead == 0:
        return np.empty(0, dtype=np.complex128)
    companion = np.zeros((degree, degree), dtype=type(lead))
    companion.ravel()[degree :: degree + 1] = 1
    try:
        companion[:, -1] = [-c / lead for c in coefficients[:-1]]
        return np.asarray(np.linalg.eigvals(companion), dtype=np.complex128)
    except (OverflowError, np.linalg.LinAlgError):
        return np.empty(0, dtype=np.complex128)


def exactly(u: complex, exponent: int) -> acb:
    """Turn a guess into the exact number 2^exponent u."""
    scale = arb(2) ** exponent
    return acb(arb(u.real) * scale, arb(u.imag) * scale)
