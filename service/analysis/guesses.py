"""Where the roots of a polynomial may lie, in floating point: places to look, nothing is decided here."""

import numpy as np
from flint import acb, arb, fmpz_poly
from numpy.typing import NDArray

from service.analysis.polynomials import shifted

Complexes = NDArray[np.complex128]


def guess_roots(p: fmpz_poly) -> tuple[Complexes, int]:
    """Return guesses (u, e): the roots of p may lie near 2^e u, real ones with u exactly real.

    p has positive degree and p(0) != 0; nothing is returned where floating point cannot hold it.
    """
    coefficients = [int(c) for c in p.coeffs()]
    degree = len(coefficients) - 1
    tilt = (abs(coefficients[0]).bit_length() - abs(coefficients[-1]).bit_length()) // degree
    spare = max(0, -tilt * degree)
    levelled = [c << (tilt * i + spare) for i, c in enumerate(coefficients)]
    excess = max(abs(c).bit_length() for c in levelled) - 900
    return companion_roots([float(shifted(c, -excess)) for c in levelled]), tilt


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
