"""Gains as exact real numbers: ordered, told apart or found equal without any tolerance.

A gain is rational, or it is K = -A(x)/B(x) at a positive root x of a squarefree polynomial f. Whether
such a K, or its square, is rational and whether two of them agree is decided in the field Q[x]/f: by a
certificate modulo a prime in almost every case, by factoring f where that says nothing.
"""

from functools import cached_property, cmp_to_key
from itertools import pairwise
from typing import Final

from flint import arb, fmpq, fmpq_poly, fmpz, fmpz_poly, nmod_mat, nmod_poly

from service.analysis.polynomials import sign
from service.analysis.precision import Enclose, accurate_bits, working
from service.analysis.roots import PositiveRoot

_PRIME: Final = (1 << 61) - 1
_FIRST_BITS: Final = 128


class GainMap:
    """K = -top(x)/bottom(x) on the roots of a squarefree f that has no root in common with either."""

    def __init__(self, f: fmpz_poly, top: fmpz_poly, bottom: fmpz_poly) -> None:
        self.f = f
        self.top = top
        self.bottom = bottom
        self._minimal: dict[tuple[int, ...], fmpz_poly] = {}

    def at(self, x: arb) -> arb:
        """Enclose K at x, at the working precision."""
        return -self.top(x) / self.bottom(x)

    def at_rational(self, x: fmpq) -> fmpq:
        """K at a rational x, exactly."""
        return -self.top(x) / self.bottom(x)

    @cached_property
    def squares_distinct(self) -> bool:
        """Whether K^2 is proven to take different values at all complex roots of f; False proves nothing.

        Where the powers of K^2 are independent modulo f and a prime of good reduction they are so over
        the rationals: K^2 generates the whole algebra, so no two roots share it, and at an irrational x
        of degree d it has degree d as well.
        """
        f = nmod_poly(self.f, _PRIME)
        bottom = nmod_poly(self.bottom, _PRIME)
        degree = self.f.degree()
        if f.degree() < degree:
            return False
        unit, inverse, _ = bottom.xgcd(f)
        if unit.degree() != 0:
            return False
        gain = nmod_poly(self.top, _PRIME) * inverse % f
        square = gain * gain % f
        power, rows = nmod_poly([1], _PRIME), []
        for _ in range(degree):
            row = power.coeffs()
            rows += row + [0] * (degree - len(row))
            power = power * square % f
        return bool(nmod_mat(degree, degree, rows, _PRIME).rank() == degree)

    @cached_property
    def factors(self) -> list[fmpz_poly]:
        """The irreducible factors of f."""
        return [factor for factor, _ in self.f.factor()[1]]

    def factor_of(self, root: PositiveRoot) -> fmpz_poly:
        """Return the irreducible factor that vanishes at an irrational root of f."""
        return next(p for p in self.factors if sign(p(root.low)) != sign(p(root.high)))

    def constant_on(self, factor: fmpz_poly) -> fmpq | None:
        """Return K where it is one and the same rational number at every root of the factor, else None."""
        ratio = _ratio_modulo(self.top, self.bottom, factor)
        return None if ratio is None else -ratio

    def square_constant_on(self, factor: fmpz_poly) -> fmpq | None:
        """Return K^2 where it is one rational number at every root of the factor, else None."""
        return _ratio_modulo(self.top * self.top, self.bottom * self.bottom, factor)

    def minimal_polynomial(self, factor: fmpz_poly) -> fmpz_poly:
        """Return the primitive irreducible polynomial of K at the factor's roots, its lead positive.

        The resultant of the factor with top + K bottom in x is a power of it; it is interpolated from
        its values at K = 0, 1, 2, ... by Newton's forward differences.
        """
        key = tuple(int(c) for c in factor.coeffs())
        if key not in self._minimal:
            self._minimal[key] = self._interpolated(factor)
        return self._minimal[key]

    def _interpolated(self, factor: fmpz_poly) -> fmpz_poly:
        values = [factor.resultant(self.top + k * self.bottom) for k in range(factor.degree() + 1)]
        resultant, basis = fmpq_poly([0]), fmpq_poly([1])
        for k in range(len(values)):
            resultant += basis * values[0]
            values = [b - a for a, b in pairwise(values)]
            basis *= fmpq_poly([fmpq(-k, k + 1), fmpq(1, k + 1)])
        (root_part, _multiplicity), *_ = resultant.numer().factor_squarefree()[1]
        return root_part if root_part.leading_coefficient() > 0 else -root_part


def _ratio_modulo(top: fmpz_poly, bottom: fmpz_poly, factor: fmpz_poly) -> fmpq | None:
    """Return the rational r with top = r bottom modulo the irreducible factor, None where there is none."""
    modulus = fmpq_poly(factor)
    above, below = fmpq_poly(top) % modulus, fmpq_poly(bottom) % modulus
    degree = below.degree()
    ratio = above[degree] / below[degree]
    return fmpq(ratio) if above == below * ratio else None


class Gain:
    """A real gain: a fraction, or K on the map given at the root given. Order gains with ``compare``."""

    def __init__(self, source: fmpq | tuple[GainMap, PositiveRoot]) -> None:
        self._source = source
        self._known: arb | None = None

    @cached_property
    def rational(self) -> fmpq | None:
        """The exact value where it is rational, else None."""
        if isinstance(self._source, fmpq):
            return self._source
        gains, root = self._source
        x = root.rational
        if x is not None:
            return gains.at_rational(x)
        return None if gains.squares_distinct else gains.constant_on(gains.factor_of(root))

    @cached_property
    def square(self) -> fmpq | None:
        """The exact square of an irrational gain where that is rational, else None."""
        if isinstance(self._source, fmpq) or self.rational is not None:
            return None
        gains, root = self._source
        return None if gains.squares_distinct else gains.square_constant_on(gains.factor_of(root))

    @cached_property
    def minimal_polynomial(self) -> fmpz_poly:
        """The primitive irreducible integer polynomial of this gain (ascending powers of K)."""
        if isinstance(self._source, fmpq):
            return _linear(self._source)
        if self.rational is not None:
            return _linear(self.rational)
        gains, root = self._source
        return gains.minimal_polynomial(gains.factor_of(root))

    def alone_in(self, cell: tuple[fmpq, fmpq]) -> bool:
        """Whether the minimal polynomial is proven to have no other root in an interval round this gain."""
        bits = 2 * max(cell[0].height_bits(), cell[1].height_bits()) + 16
        with working(bits):
            low, high = arb(cell[0]), arb(cell[1])
        return _one_root_between(self.minimal_polynomial, low, high, bits)

    def ball(self, bits: int) -> arb:
        """Enclose the gain with at least ``bits`` accurate bits."""
        if isinstance(self._source, fmpq):
            with working(bits + 8):
                return arb(self._source)
        if self._known is None or accurate_bits(self._known) < bits:
            self._known = _evaluated(*self._source, bits)
        return self._known

    @property
    def sign(self) -> int:
        """-1, 0 or 1, exactly."""
        if isinstance(self._source, fmpq):
            return sign(self._source)
        return 1 if self.ball(8) > 0 else -1


def _linear(root: fmpq) -> fmpz_poly:
    return fmpz_poly([-root.numer(), root.denom()])


def _evaluated(gains: GainMap, root: PositiveRoot, bits: int) -> arb:
    tried = bits + 24
    while True:
        x = root.ball(tried)
        with working(2 * tried):
            value = gains.at(x)
        if value.is_finite() and accurate_bits(value) >= bits:
            return value
        tried *= 2


def compare(one: Gain, other: Gain) -> int:
    """Order two gains: -1, 0 or 1, exactly."""
    bits = _FIRST_BITS
    settled = False
    while True:
        a, b = one.ball(bits), other.ball(bits)
        if a < b:
            return -1
        if a > b:
            return 1
        if not settled:
            if one is other or (one.rational is not None and one.rational == other.rational):
                return 0
            if one.rational is not None and other.rational is not None:
                return -1 if one.rational < other.rational else 1
            settled = _certainly_different(one, other)
        if not settled and _one_root_between(one.minimal_polynomial, a, b, bits):
            return 0
        bits *= 2


by_gain = cmp_to_key(compare)
"""Sort key of a gain."""


def _certainly_different(one: Gain, other: Gain) -> bool:
    if (one.rational is None) != (other.rational is None):
        return True
    if one.square != other.square:
        return True
    return one.minimal_polynomial != other.minimal_polynomial


def _one_root_between(p: fmpz_poly, one: arb, other: arb, bits: int) -> bool:
    """Whether p' has certainly no zero in the hull of both balls: then p has one root there at most."""
    with working(2 * bits + 64):
        slope = p.derivative()(one.union(other))
        return bool(slope.is_finite() and not slope.contains(0))


def enclose_square_root(value: Enclose) -> Enclose:
    """Enclose the square root of a positive number."""

    def root(bits: int) -> arb:
        ball = value(bits + 8)
        with working(bits + 32):
            return ball.sqrt()

    return root


def square_root(value: fmpq) -> fmpq | None:
    """Return the square root of a non-negative fraction where it is a fraction, else None."""
    above, below = fmpz(value.numer()), fmpz(value.denom())
    if above.is_square() and below.is_square():
        return fmpq(above.isqrt(), below.isqrt())
    return None
