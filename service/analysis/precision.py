"""The working precision of ball arithmetic, and doubles and decimals nearest to exact values.

FLINT keeps one precision for the whole process: it is set here alone, and whoever calls the analysis
must let one analysis run at a time.
"""

import math
from collections.abc import Callable
from decimal import ROUND_HALF_EVEN, Context, Decimal
from typing import Final

from flint import arb, ctx, fmpq

from service.analysis.errors import OutOfRange

HIGHEST: Final = 1 << 14
"""Bits at which a printed value that still straddles two doubles is taken to lie midway between them."""

_DIGITS30: Final = Context(prec=30, rounding=ROUND_HALF_EVEN, Emin=-(10**9), Emax=10**9)

Enclose = Callable[[int], arb]
"""Gives a ball of at least so many accurate bits round one and the same real number."""


class working:  # noqa: N801 - reads as a phrase: with working(128)
    """Run a block at a precision of so many bits, and put the former one back."""

    __slots__ = ("_bits", "_former")

    def __init__(self, bits: int) -> None:
        self._bits = bits
        self._former = 0

    def __enter__(self) -> None:
        self._former = ctx.prec
        ctx.prec = self._bits

    def __exit__(self, *_: object) -> None:
        ctx.prec = self._former


def accurate_bits(ball: arb) -> int:
    """Relative accuracy of a ball, at least 0."""
    return max(0, int(ball.rel_accuracy_bits()))


def ends(ball: arb) -> tuple[fmpq, fmpq]:
    """Return the exact lower and upper end of a finite ball."""
    middle, radius = dyadic(ball.mid()), dyadic(ball.rad())
    return middle - radius, middle + radius


def dyadic(exact: arb) -> fmpq:
    """Return the exact ball's value as a fraction."""
    mantissa, exponent = exact.man_exp()
    e = int(exponent)
    return fmpq(mantissa << e, 1) if e >= 0 else fmpq(mantissa, 1 << -e)


def nearest_double(value: fmpq) -> float:
    """Round a fraction to the nearest double, ties to even.

    Raises OutOfRange where a value that is not zero would become zero or infinite.
    """
    return _in_range(int(value.numer()), int(value.denom()))


def _in_range(above: int, below: int) -> float:
    try:
        result = above / below  # Python rounds the quotient of integers correctly, subnormals too
    except OverflowError:
        result = math.inf
    if result in {0, math.inf} and above != 0:
        near = decimal30(fmpq(above, below))
        raise OutOfRange(f"A value near {near} lies beyond the range of double precision numbers.")
    return result


def decimal30(value: fmpq) -> str:
    """Round a fraction to 30 significant digits, ties to even; trailing zeros are left out."""
    rounded = _DIGITS30.divide(Decimal(int(value.numer())), Decimal(int(value.denom())))
    return _plain(rounded)


def _plain(value: Decimal) -> str:
    if value == 0:
        return "0"
    if not -10 < value.adjusted() < 30:  # noqa: PLR2004 - 30 digits fill the places before the point
        return str(value.normalize(_DIGITS30))
    text = format(value, "f")
    return text.rstrip("0").rstrip(".") if "." in text else text


def rounded_double(enclose: Enclose) -> float:
    """Round a real number, not an exact tie below ``HIGHEST`` bits, to the nearest double."""
    bits = 64
    while (settled := double_in(enclose(bits))) is None and bits < HIGHEST:
        bits *= 2
    return nearest_double(dyadic(enclose(bits).mid())) if settled is None else settled


def double_in(ball: arb) -> float | None:
    """Return the double nearest to every number in the ball; None where there is none, or 0 is inside.

    Raises OutOfRange as ``nearest_double`` does.
    """
    if not ball.is_finite() or ball.contains(0):
        return None
    (middle, e), (radius, f) = ball.mid().man_exp(), ball.rad().man_exp()
    exponent = min(int(e), int(f))
    centre, around = int(middle) << (int(e) - exponent), int(radius) << (int(f) - exponent)
    first = _nearest(centre - around, exponent)
    return first if first == _nearest(centre + around, exponent) else None


def _nearest(mantissa: int, exponent: int) -> float:
    """Round mantissa 2^exponent, not zero, to the nearest double."""
    if exponent >= 0:
        return _in_range(mantissa << exponent, 1)
    return _in_range(mantissa, 1 << -exponent)


def rounded_decimal(enclose: Enclose) -> str:
    """Round a real number to 30 significant digits."""
    bits = 112
    while True:
        ball = enclose(bits)
        low, high = ends(ball)
        first = decimal30(low)
        if first == decimal30(high):
            return first
        if bits >= HIGHEST:
            return decimal30(dyadic(ball.mid()))
        bits *= 2
