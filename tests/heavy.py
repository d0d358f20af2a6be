"""The heaviest questions found within the limits: a family for the tests of time.

Each was found by search; what makes it heavy is said beside it. Polynomials as in ``polynomials``.
"""

from collections.abc import Mapping
from random import Random
from typing import Any, Final

from tests.clustered import mignotte
from tests.polynomials import (
    ONE,
    Polynomial,
    add,
    degree,
    in_square,
    multiply,
    polynomial,
    power,
    scaled,
)

S: Final = polynomial(1, 0)


def question(numerator: Polynomial, denominator: Polynomial, gain: str = "3/7") -> dict[str, Any]:
    """Give the question with everything asked for that costs: gain and evidence."""
    return {
        "numerator": _written(numerator),
        "denominator": _written(denominator),
        "gain": gain,
        "evidence": True,
        "curve": False,
    }


def _written(p: Polynomial) -> list[str]:
    return [_text(int(c)) if c.denominator == 1 else str(c) for c in p]


def _text(value: int) -> str:
    """Write an integer, trailing zeros as a power of ten where they are many."""
    zeros = min(60, len(str(value)) - len(str(value).rstrip("0"))) if value else 0
    return f"{value // 10**zeros}e{zeros}" if zeros > 9 else str(value)


def on_axis(even: Polynomial, odd: Polynomial) -> Polynomial:
    """Give the p with p(jw) = even(w^2) + jw odd(w^2)."""
    return add(in_square(_mirrored(even)), multiply(S, in_square(_mirrored(odd))))


def _mirrored(p: Polynomial) -> Polynomial:
    """Give p(-x)."""
    return tuple(-c if (degree(p) - i) % 2 else c for i, c in enumerate(p))


def random_polynomial(seed: int, order: int, bits: int) -> Polynomial:
    """Give a polynomial with coefficients of up to so many bits."""
    draw = Random(seed)  # noqa: S311 - an example, no secret
    highest = 1 << bits
    return polynomial(draw.randint(1, highest), *(draw.randint(-highest, highest) for _ in range(order)))


def random_roots(seed: int, order: int, bits: int) -> Polynomial:
    """Give the product of x - n over random positive n of up to so many bits."""
    draw = Random(seed)  # noqa: S311 - an example, no secret
    return multiply(*(polynomial(1, -draw.randint(1, 1 << bits)) for _ in range(order)))


def folded(p: Polynomial, times: int, above: Polynomial, below: Polynomial) -> Polynomial:
    """Give below^times p(above/below): each frequency of p becomes as many as above/below has branches."""
    top = degree(p)
    return add(
        *(scaled(multiply(power(above, top - i), power(below, times - top + i)), c) for i, c in enumerate(p))
    )


def twofold(p: Polynomial, times: int = 30) -> Polynomial:
    """Fold by s + 1/s."""
    return folded(p, times, polynomial(1, 0, 1), S)


def threefold(p: Polynomial, times: int = 20) -> Polynomial:
    """Fold by s (s^2 + 4)/(s^2 + 1), lossless as s + 1/s is."""
    return folded(p, times, polynomial(1, 0, 4, 0), polynomial(1, 0, 1))


def _resonances(damping: int, scale: int, count: int) -> Polynomial:
    return multiply(*(polynomial(scale, damping, scale * i) for i in range(1, count + 1)))


def _interlaced(count: int) -> Polynomial:
    """Give the p whose parts on the axis have the roots 1, 3, 5, ... and 2, 4, 6, ..."""
    even = multiply(*(polynomial(1, -2 * i - 1) for i in range(count)))
    odd = multiply(*(polynomial(1, -2 * i - 2) for i in range(count - 1)))
    return on_axis(even, odd)


def _crowded_poles(order: int, bits: int, gain: str = "1") -> dict[str, Any]:
    """Close to s^order - 2 (2^bits s - 1)^2 at K = 1."""
    return question(ONE, add(_crowd(order, bits), polynomial(-1)), gain)


def _crowd(order: int, bits: int) -> Polynomial:
    return add(power(S, order), scaled(power(polynomial(1 << bits, -1), 2), -2))


def _crowded_crossings(count: int, bits: int) -> dict[str, Any]:
    """Cross the real axis at ``count`` pairs of frequencies that almost agree."""
    order = 29 // count
    pairs = multiply(*(_crowd_at(order, (1 << bits) + i) for i in range(count)))
    return question(ONE, on_axis(random_polynomial(1, degree(pairs), 100), pairs))


def _crowd_at(order: int, a: int) -> Polynomial:
    return add(power(S, order), scaled(power(polynomial(a, -1), 2), -2))


def _hidden_crowd(above: Polynomial, below: Polynomial, bits: int) -> dict[str, Any]:
    """Hide axis modes, two of them crowded: every band's count meets them."""
    hidden = on_axis(_crowd(14, bits), ())
    return question(multiply(hidden, above), multiply(hidden, below))


def _missing_term(seed: int, bits: int, numerator: Polynomial) -> dict[str, Any]:
    """Give no band a regular Routh column: the coefficient of s^59 is zero whatever K is."""
    return question(numerator, on_axis(random_roots(seed, 30, bits), ONE))


def _all_pass(scale: int) -> dict[str, Any]:
    above = multiply(*(polynomial(scale, -1, scale * i) for i in range(1, 16)))
    below = multiply(*(polynomial(scale, 1, scale * i + i % 4) for i in range(1, 16)))
    return question(twofold(above), twofold(below))


def _clustered_blocks(apart: int, damping: int) -> dict[str, Any]:
    """Put resonances and antiresonances 10^-apart from each other, damped by 10^-damping."""
    blocks = [
        {
            "zeros": [[f"1e-{damping}", f"1.{'0' * (apart - 1)}{2 * i + 1:02d}"]],
            "poles": [[f"-1e-{damping}", f"1.{'0' * (apart - 1)}{2 * i:02d}"]],
        }
        for i in range(8)
    ]
    return {"blocks": blocks, "gain": "1e-9", "evidence": True, "curve": False}


_ODD: Final = multiply(*(polynomial(1, -4 * i - 3) for i in range(14)))
_EVENS: Final = multiply(*(polynomial(1, -2 * i - 2) for i in range(28)))
_ODDS: Final = multiply(*(polynomial(1, -2 * i - 1) for i in range(30)))
_PASSIVE: Final = multiply(*(polynomial(1, 2 * i + 2) for i in range(15)))
_THREE_TIMES: Final = threefold(_resonances(1, 100, 10))

HEAVY: Final[Mapping[str, dict[str, Any]]] = {
    # crossings that almost agree: their roots, gains and a sample between them need thousands of bits
    "two crossings, as near as Mignotte's": question(
        ONE, on_axis(random_polynomial(2, 30, 190), mignotte(29))
    ),
    "two crossings, nearer, samples deep in continued fractions": question(
        ONE, on_axis(random_polynomial(9, 28, 285), _crowd_at(29, 10**89))
    ),
    "two pairs of near crossings": _crowded_crossings(2, 80),
    "three pairs of near crossings": _crowded_crossings(3, 53),
    "six pairs of near crossings": _crowded_crossings(6, 25),
    # closed-loop poles that almost agree
    "two poles, as near as Mignotte's": _crowded_poles(60, 190),
    "two poles, near": _crowded_poles(60, 100),
    # several frequencies at each irrational gain: decided by its minimal polynomial
    "pairs of frequencies, long numbers": question(
        twofold(random_polynomial(24, 30, 280)), twofold(random_polynomial(25, 30, 280))
    ),
    "pairs of frequencies, many edges": question(
        twofold(random_polynomial(5, 29, 200)),
        twofold(on_axis(random_roots(6, 15, 15), random_roots(7, 14, 15))),
    ),
    "pairs of frequencies, all-pass": _all_pass(10),
    "pairs of frequencies, all-pass, gains within 1e-17 of each other": _all_pass(1000),
    "triples of frequencies, short numbers": question(threefold(random_polynomial(8, 20, 5)), _THREE_TIMES),
    "triples of frequencies, long numbers": question(threefold(random_polynomial(9, 20, 200)), _THREE_TIMES),
    # no regular Routh column in any of many bands: exact remainders of long numbers
    "no term s^59, 30 bands": question(on_axis(_EVENS, _ODD), on_axis(_ODDS, ONE)),
    "no term s^59, resonant zeros": _missing_term(
        10, 12, multiply(*(polynomial(8, i % 7 + 1, 97 * i * i) for i in range(1, 29)))
    ),
    "no term s^59, long numbers": _missing_term(11, 12, random_polynomial(12, 56, 168)),
    "no term s^59, crossings at random integers": _missing_term(
        13, 12, on_axis(random_roots(14, 29, 12), random_roots(15, 28, 12))
    ),
    # lossless: every band's axis roots are isolated
    "lossless, random places": question(
        on_axis(random_roots(16, 30, 12), ()), on_axis(random_roots(17, 30, 12), ())
    ),
    "lossless, 31 edges": question(on_axis(_mirrored(_EVENS), ()), on_axis(_ODDS, ())),
    "lossless, hidden modes crowded": _hidden_crowd(
        on_axis(_PASSIVE, ()), on_axis(multiply(*(polynomial(1, -2 * i - 1) for i in range(15))), ()), 150
    ),
    "lossless, two axis roots crowded": question(
        on_axis(_crowd_at(29, (1 << 50) + 1), ()), on_axis(_crowd(30, 50), ())
    ),
    # hidden modes that crowd: counted anew in every band
    "hidden modes crowded, many bands": _hidden_crowd(
        multiply(*(polynomial(10, -1, i) for i in range(1, 15))), _interlaced(15), 160
    ),
    # resonances
    "resonances 1e-12 apart": _clustered_blocks(12, 12),
    "resonances 1e-10 apart": _clustered_blocks(10, 15),
    # a high degree alone
    "sixty equal lags": question(ONE, power(polynomial(1, 1), 60)),
    "random numbers, both of degree 60": question(
        random_polynomial(18, 60, 320), random_polynomial(19, 60, 320)
    ),
    "all-pass resonances": question(
        _mirrored(_resonances(1, 100, 29)), _resonances(1, 100, 29), "9" * 119 + "7/" + "8" * 119 + "3"
    ),
}
