"""Positive real roots of an integer polynomial: isolated exactly, refined on demand.

Isolation is by Descartes' rule of signs on intervals (G. E. Collins and A. G. Akritas, 1976), with the
first cuts where a floating-point root finder expects roots. The guesses decide nothing: an interval
counts only by its sign changes, so a bad guess costs time and never a root. Where roots cluster so that
halving would take too long, they are enclosed all together (``enclosures``). Refinement is the interval
Newton step in ball arithmetic (R. E. Moore, Interval Analysis, 1966).
"""

from collections.abc import Iterator
from functools import cmp_to_key
from itertools import pairwise

from flint import arb, fmpq, fmpz, fmpz_poly

from service.analysis.enclosures import enclose_roots
from service.analysis.guesses import guess_roots
from service.analysis.polynomials import remainder, sign, sign_variations
from service.analysis.precision import accurate_bits, dyadic, ends, working

_MOST_CUTS = 160
_MOST_HALVINGS = 80
_ENCLOSED_BITS = 32
_ALMOST_REAL = 1e-3  # a guess this near to the real axis may stand for a real root
_SPREADS = (32, 14)  # bits: half width of the interval tried round a guess, relative to it


class Enclosures:
    """Enclosures of a polynomial's real roots, made when first asked for and shared by these roots."""

    def __init__(self, polynomial: fmpz_poly) -> None:
        self._polynomial = polynomial
        self._made: dict[int, list[arb]] = {}

    def real(self, bits: int) -> list[arb]:
        """Return disjoint balls round the real roots, radius below 2^-bits of their size."""
        if bits not in self._made:
            found = enclose_roots(self._polynomial, bits)
            self._made[bits] = [root.real for root in found if root.imag.is_zero()]
        return self._made[bits]


class PositiveRoot:
    """The one root of a squarefree polynomial in the open interval (low, high), low > 0.

    The ends are no roots, unless they agree: then they are the root itself. Asking for more accuracy
    narrows what is known; the root stays the same.
    """

    __slots__ = ("_ball", "_derivative", "_enclosures", "_settled", "high", "low", "polynomial")

    def __init__(
        self, polynomial: fmpz_poly, low: fmpq, high: fmpq, enclosures: Enclosures | None = None
    ) -> None:
        self.polynomial = polynomial
        self._enclosures = enclosures or Enclosures(polynomial)
        self.low = low
        self.high = high
        self._ball: arb | None = None
        self._derivative = polynomial.derivative()
        self._settled = low == high

    @property
    def rational(self) -> fmpq | None:
        """The root where it is rational, else None: decided exactly.

        A rational root times the leading coefficient is an integer.
        """
        if not self._settled:
            lead = self.polynomial.leading_coefficient()
            bits = lead.height_bits() + max(0, self.high.height_bits()) + 4
            ball = self.ball(bits)
            with working(2 * bits + 16):
                whole = (ball * lead).unique_fmpz()
            if whole is not None:
                candidate = fmpq(whole, lead)
                if self.polynomial(candidate) == 0:
                    self.low = self.high = candidate
            self._settled = True
        return self.low if self.low == self.high else None

    def ball(self, bits: int) -> arb:
        """Enclose the root in a ball of at least ``bits`` accurate bits."""
        if self.low == self.high:
            with working(bits + 8):
                return arb(self.low)
        ball = self._ball
        if ball is None:
            with working(max(64, 2 * self.low.height_bits(), 2 * self.high.height_bits())):
                ball = arb(self.low).union(arb(self.high))
        headroom = 32 + self.polynomial.degree()
        halvings = 0
        while (known := accurate_bits(ball)) < bits:
            if halvings == _MOST_HALVINGS:
                ball = self._among_enclosures(max(bits, _ENCLOSED_BITS) + 8)
                break
            with working(2 * known + headroom):
                narrower = self._newton(ball)
            if narrower is None or accurate_bits(narrower) <= known:
                ball = self._bisect(ball)
                halvings += 1
                headroom = min(2 * headroom, 8 * (known + bits) + self.polynomial.height_bits())
            else:
                ball = narrower
            if self.low == self.high:
                return self.ball(bits)
        self._ball = ball
        return ball

    def _among_enclosures(self, bits: int) -> arb:
        """Pick this root from enclosures of all complex roots, where others are too near for halving."""
        while True:
            known = [ball for ball in self._enclosures.real(bits) if self._may_lie_in(ball)]
            if len(known) == 1:
                return known[0]
            bits *= 2

    def _may_lie_in(self, ball: arb) -> bool:
        low, high = ends(ball)
        return bool(low < self.high and self.low < high)

    def _newton(self, ball: arb) -> arb | None:
        slope = self._derivative(ball)
        if not slope.is_finite() or slope.contains(0):
            return self._probed(ball)
        middle = ball.mid()
        return (middle - self.polynomial(middle) / slope).intersection(ball)

    def _probed(self, ball: arb) -> arb | None:
        """Take a Newton step from the middle, proven by the signs on both sides of where it leads.

        That works where the slope over the whole ball cannot be bounded away from 0.
        """
        middle = ball.mid()
        target = (middle - self.polynomial(middle) / self._derivative(middle)).mid()
        if not target.is_finite():
            return None
        known = accurate_bits(ball)
        for gained in (known, known // 2, 3):
            reach = ball.rad() * arb(2) ** -gained
            low, high = (target - reach).mid(), (target + reach).mid()
            if self.low < dyadic(low) and dyadic(high) < self.high:
                before, after = self.polynomial(low), self.polynomial(high)
                if (before > 0 and after < 0) or (before < 0 and after > 0):
                    return low.union(high)
        return None

    def _bisect(self, ball: arb) -> arb:
        """Halve what is known by an exact sign, at a cut near the middle of the ball."""
        with working(2 * accurate_bits(ball) + 64):
            lowest, highest = ends(ball)
            low, high = max(self.low, lowest), min(self.high, highest)
            cut = short_between(low, high)
            at_cut = sign(self.polynomial(cut))
            if at_cut == 0:
                self.low = self.high = cut
            elif at_cut == sign(self.polynomial(self.low)):
                self.low, self.high = cut, high if sign(self.polynomial(high)) != at_cut else self.high
            else:
                self.low, self.high = low if sign(self.polynomial(low)) == -at_cut else self.low, cut
            return arb(self.low).union(arb(self.high))


def compare_roots(one: PositiveRoot, other: PositiveRoot) -> int:
    """Order two roots, of one polynomial or of coprime ones: -1, 1, or 0 for the very same."""
    bits = 32
    while one is not other:
        a, b = one.ball(bits), other.ball(bits)
        if a < b:
            return -1
        if a > b:
            return 1
        bits *= 2
    return 0


by_frequency = cmp_to_key(compare_roots)
"""Sort key of a root."""


def short_between(low: fmpq, high: fmpq) -> fmpq:
    """Return a short dyadic in the middle of (low, high), 0 < low < high; geometrically where wide."""
    if 4 * low < high:
        a, b = floor_log2(low), floor_log2(high)
        return power_of_two((a + b + 1) // 2)
    width = high - low
    scale = 2 - floor_log2(width)
    unit = power_of_two(-scale)
    return fmpq((((low + high) / 2) / unit).floor()) * unit


def floor_log2(value: fmpq) -> int:
    """Return the k with 2^k <= value < 2^(k+1), value > 0."""
    k = int(value.numer().bit_length()) - int(value.denom().bit_length())
    return k if power_of_two(k) <= value else k - 1


def power_of_two(exponent: int) -> fmpq:
    """Return 2^exponent exactly."""
    return fmpq(1 << exponent, 1) if exponent >= 0 else fmpq(1, 1 << -exponent)


def isolate_positive(p: fmpz_poly) -> list[PositiveRoot]:
    """Isolate the positive real roots of a squarefree p with p(0) != 0, in ascending order.

    Examples
    --------
    >>> [root.rational for root in isolate_positive(fmpz_poly([2, -3, 1]))]
    [1, 2]

    """
    variations = sign_variations(p)
    if variations == 0:
        return []
    if p.degree() == 1:
        value = -fmpq(p[0], p[1])
        return [PositiveRoot(p, value, value)]
    enclosures = Enclosures(p)
    brackets = list(_guessed_brackets(p))
    if len(brackets) < variations:
        halved = _halved(p, brackets)
        brackets = list(_enclosed(p, enclosures)) if halved is None else halved
    return [PositiveRoot(p, low, high, enclosures) for low, high in brackets]


def count_positive(p: fmpz_poly) -> int:
    """Count the positive real roots of a squarefree p with p(0) != 0."""
    most = sign_variations(p)
    return most if most <= 1 else _sturm_count(p)


def _sturm_count(p: fmpz_poly) -> int:
    """Count the positive roots of a squarefree p as the sign variations lost between 0 and infinity.

    The chain is Sturm's (1829), of primitive remainders.
    """
    chain = [p, p.derivative()]
    while chain[-1].degree() > 0:
        chain.append(-remainder(chain[-2], chain[-1]))
    at_origin = [sign(q[0]) for q in chain]
    at_infinity = [sign(q.leading_coefficient()) for q in chain]
    return _changes(at_origin) - _changes(at_infinity)


def _changes(signs: list[int]) -> int:
    told = [s for s in signs if s]
    return sum(a != b for a, b in pairwise(told))


def _guessed_brackets(p: fmpz_poly) -> Iterator[tuple[fmpq, fmpq]]:
    """Yield disjoint ascending intervals in which p certainly changes sign, where guesses expect a root."""
    last = fmpq(0)
    for guess in _guesses(p):
        for spread in _SPREADS:
            low, high = _around(guess, spread)
            if low > last and sign(p(low)) * sign(p(high)) < 0:
                yield low, high
                last = high
                break


def _around(guess: fmpq, spread: int) -> tuple[fmpq, fmpq]:
    unit = power_of_two(floor_log2(guess) - spread)
    whole = fmpq((guess / unit).floor())
    return (whole - 1) * unit, (whole + 2) * unit


def _guesses(p: fmpz_poly) -> list[fmpq]:
    """Guess the positive real roots, ascending."""
    near = {
        (u.real, exponent)
        for u, exponent in guess_roots(p)
        if u.real > 0 and abs(u.imag) <= _ALMOST_REAL * u.real
    }
    return sorted(fmpq(*u.as_integer_ratio()) * power_of_two(exponent) for u, exponent in near)


def _halved(p: fmpz_poly, brackets: list[tuple[fmpq, fmpq]]) -> list[tuple[fmpq, fmpq]] | None:
    """Return isolating intervals of all positive roots, ascending, by cutting at the brackets and halving.

    None where that takes more than ``_MOST_CUTS`` intervals.
    """
    cuts = {*_root_bounds(p), *(end for bracket in brackets for end in bracket)}
    waiting = list(pairwise(sorted(cuts)))[::-1]
    found: list[tuple[fmpq, fmpq]] = []
    for _ in range(_MOST_CUTS):
        if not waiting:
            return found
        low, high = waiting.pop()
        if low == high:
            found.append((low, low))
            continue
        variations = _variations_within(p, low, high)
        if variations == 1 and p(low) != 0 and p(high) != 0:
            found.append((low, high))
        elif variations:
            cut = short_between(low, high)
            waiting.append((cut, high))
            if p(cut) == 0:
                waiting.append((cut, cut))
            waiting.append((low, cut))
    return None


def _enclosed(p: fmpz_poly, enclosures: Enclosures) -> Iterator[tuple[fmpq, fmpq]]:
    """Yield isolating intervals of all positive roots, ascending, from enclosures of all complex ones."""
    for low, high in sorted(ends(ball) for ball in enclosures.real(_ENCLOSED_BITS) if ball > 0):
        root = low if p(low) == 0 else high if p(high) == 0 else None
        yield (low, high) if root is None else (root, root)


def _root_bounds(p: fmpz_poly) -> tuple[fmpq, fmpq]:
    """Return powers of two strictly below and above every positive root (Fujiwara's bound, 1916)."""
    bits = [c.height_bits() for c in p.coeffs()]
    top = len(bits) - 1
    above = max(-((bits[top] - 1 - b) // (top - i)) for i, b in enumerate(bits[:-1]) if b)
    below = max(-((bits[0] - 1 - b) // i) for i, b in enumerate(bits) if i and b)
    return power_of_two(-below - 2), power_of_two(above + 2)


def _variations_within(p: fmpz_poly, low: fmpq, high: fmpq) -> int:
    """Bound the roots in (low, high) by the sign variations of (1+t)^n p((low + high t)/(1 + t))."""
    denominator = fmpz(low.denom().lcm(high.denom()))
    a = int(low.numer() * (denominator // low.denom()))
    width = int(high.numer() * (denominator // high.denom())) - a
    scaled, power = [], fmpz(1)
    for c in reversed(p.coeffs()):
        scaled.append(c * power)
        power *= denominator
    shifted = fmpz_poly(scaled[::-1])(fmpz_poly([a, width]))
    coefficients = shifted.coeffs()
    coefficients += [fmpz(0)] * (p.degree() + 1 - len(coefficients))
    return sign_variations(fmpz_poly(coefficients[::-1])(fmpz_poly([1, 1])))
