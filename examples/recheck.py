"""Recheck an answer of Halfturn without Halfturn: recheck.py QUESTION.json ANSWER.json.

What the answer must say is derived from the question and compared value by value. The evidence only tells
where roots are, how fine its intervals are, why irrational gains are equal; it is proved before it is used.

Method. Write p(jw) = E(x) + jw O(x), x = w^2. When numerator N and denominator D share no root, D + K N has
the root jw where u0 + K u1 = v0 + K v1 = 0, (u0, u1, v0, v1) = (E_D, E_N, O_D, O_N): h = u0 v1 - v0 u1 has
the root x > 0, and K = -(u0 u1 + x v0 v1) / (u1^2 + x v1^2). In a lossless loop (O_D = O_N = 0) two axis
roots meet where D + K N and its derivative by x vanish: the same h, (v0, v1) = (E_D', E_N'); there, and at
hidden axis modes, K = -E_D/E_N. Other changes need a root at s = 0 or infinity, or K = 0 and L improper or
with axis poles. Roots right of the axis: Cauchy index (Gantmacher, Theory of Matrices, ch. XV), others:
Sturm. If K or K^2 is a fraction, its denominator divides the leading coefficient of the resultant of the u
and v, at most the product of the row sums of Sylvester's matrix.

Exit codes: 0 all of it holds, 1 something does not (it is named), 2 no question and answer to recheck.
"""
# ruff: noqa: D102, D103 - at most 400 lines, so that it is read; some names speak for themselves

import json
import sys
from decimal import Context, Decimal
from fractions import Fraction
from itertools import pairwise, zip_longest
from math import ceil, floor, gcd, inf, isqrt, lcm, prod
from pathlib import Path
from re import fullmatch
from typing import Any, Self

NUMBER = r"-?[0-9]{1,9999}((\.[0-9]{1,9999})?([eE][+-]?[0-9]{1,3})?|/0*[1-9][0-9]{0,9999})"
TAU = [Fraction(628318530717958647692528676655900576839433879875020 + i, 10**50) for i in (0, 2)]  # 2 pi
BITS = 1024  # significant, of a value to be rounded or ordered: what they leave undecided is not believed


class Poly(tuple[Any, ...]):  # noqa: SLOT001 - few are made
    """A polynomial: exact coefficients in ascending powers, the last one not zero; zero itself has none."""

    def __new__(cls, coefficients: Any = ()) -> Self:
        kept = list(coefficients)
        while kept and not kept[-1]:
            kept.pop()
        return super().__new__(cls, kept)

    def __add__(self, other: "Poly") -> "Poly":
        return Poly(a + b for a, b in zip_longest(self, other, fillvalue=0))

    def __mul__(self, other: "Poly") -> "Poly":
        return sum((Poly([0] * i + [a * b for b in other]) for i, a in enumerate(self)), Poly())

    def __call__(self, x: Fraction) -> Fraction:
        value, scale = 0, 1
        for c in reversed(self):
            value, scale = value * x.numerator + c * scale, scale * x.denominator
        return Fraction(value * x.denominator, scale)

    def __mod__(self, other: "Poly") -> "Poly":
        """Give a negative multiple of the remainder, without common divisor of its coefficients."""
        rest = self
        while len(rest) >= len(other):
            term = Poly([0] * (len(rest) - len(other)) + [-rest[-1] * other[-1]])
            rest = rest * Poly((other[-1] ** 2,)) + other * term
        return Poly(-c // content for c in rest) if (content := gcd(*rest)) else rest

    def __floordiv__(self, other: "Poly") -> "Poly":
        """Divide by a divisor that has no common divisor of its coefficients."""
        rest, result = self, Poly()
        while rest:
            term = Poly([0] * (len(rest) - len(other)) + [rest[-1] // other[-1]])
            rest, result = rest + MINUS * other * term, result + term
        return result

    def slope(self) -> "Poly":
        return Poly(k * c for k, c in enumerate(self) if k)

    def halves(self) -> list["Poly"]:
        """Give E and O with p(jw) = E(w^2) + jw O(w^2)."""
        return [Poly(c * (-1) ** k for k, c in enumerate(self[start::2])) for start in (0, 1)]

    def chain(self, g: "Poly") -> list["Poly"]:
        """Give the signed remainder sequence of self and g, which ends in their common divisor."""
        return [self, *g.chain(self % g)] if g else [self]

    def shared(self, g: "Poly") -> "Poly":
        """Give the greatest common divisor, its leading coefficient positive."""
        last = self.chain(g)[-1]
        return Poly(c // content for c in last) if (content := gcd(*last) * (-1) ** (last[-1] < 0)) else last

    def levels(self) -> list["Poly"]:
        """Give polynomials: a root of multiplicity m is one of the first m of them; the last is constant."""
        return [self, *self.shared(self.slope()).levels()] if len(self) > 1 else [self]

    def counts(self) -> tuple[int, int, str]:
        """Count the roots right of the imaginary axis and on it, with multiplicity, and give the verdict."""
        even, odd = (Poly(c * (-1) ** (k // 2) * (k % 2 == i) for k, c in enumerate(self)) for i in (0, 1))
        chain = even.chain(MINUS * odd) if len(self) % 2 else odd.chain(even)  # p(jw) = even + j odd
        found = [changes(level.chain(level.slope()), -inf, inf) for level in chain[-1].levels()]
        right, axis = (len(self) - 1 - changes(chain, -inf, inf) - sum(found)) // 2, sum(found)
        return right, axis, "unstable" if right or axis > found[0] else "marginal" if axis else "stable"

    def positive_roots(self, hints: set[Fraction]) -> Any:
        """Find the positive roots, ascending; hints are places to split at first."""
        f = self // self.shared(self.slope())
        chain, bound = f.chain(f.slope()), Fraction(max(map(abs, f)) // abs(f[-1]) + 2)
        todo = [*pairwise(sorted({Fraction(0), bound, *(x for x in hints if 0 < x < bound)}))][::-1]
        while todo:
            low, high = todo.pop()
            if (number := changes(chain, low, high)) == 1 and (f(low) * f(high) < 0 or not f(high)):
                yield Value(low if f(high) else high, high, f)
            elif number:
                todo += [((low + high) / 2, high), (low, (low + high) / 2)]

    def axis_roots(self, hints: set[Fraction]) -> list[tuple["Value", int]]:
        """Find x = w^2 of each root jw, w >= 0, ascending, with its multiplicity."""
        zeros = next(k for k, c in enumerate(self) if c)
        levels = Poly.shared(*Poly(self[zeros:]).halves()).levels()
        found = [(x, sum(x.holds(level) for level in levels)) for x in levels[0].positive_roots(hints)]
        return [(Value(0, 0), zeros), *found] if zeros else found


ONE, MINUS, X = Poly((1,)), Poly((-1,)), Poly((0, 1))


def changes(chain: list[Poly], *ends: Any) -> int:
    """Count the changes of sign that are lost from the lower end to the upper, which may be infinite."""
    sides = ([f(x) if abs(x) < inf else f[-1] * (-1) ** ((x < 0) * len(f[1:])) for f in chain] for x in ends)
    left, right = (sum(a * b < 0 for a, b in pairwise([y for y in side if y])) for side in sides)
    return left - right


class Value:
    """-a(x)/b(x), or x itself, where x is the one root of a squarefree f between the ends, or both ends.

    It lies between low and high; they are equal if it is a fraction. Such has a denominator up to the bound.
    """

    def __init__(self, low: Any, high: Any, f: Poly = ONE, *ratio: Poly, bound: int = 0) -> None:
        self.f, self.ends, self.power, self.bound = f, [low, high], 1, bound or abs(f[-1])
        self.a, self.b = ratio or (MINUS * X, ONE)
        self.enclose()
        wide = 2 * self.bound**2  # two fractions with denominators up to the bound are 2/wide apart at least
        while self.low < self.high and (self.low * self.high <= 0 or (self.high - self.low) * wide >= 1):
            self.sharpen()
        found = ((self.low + self.high) / 2).limit_denominator(self.bound)
        if self.low < self.high and self.holds(Poly((-found.numerator, found.denominator))):
            self.low, self.high, self.ends = found, found, self.ends if ratio else [found, found]

    def enclose(self) -> None:
        """Bound the value by interval arithmetic, the rising and the falling terms of a and of b apart."""
        spans = []
        for p in (self.a, self.b):
            up, down = Poly(max(c, 0) for c in p), Poly(min(c, 0) for c in p)
            spans.append([up(x) + down(y) for x, y in (self.ends, self.ends[::-1])])
        a, b = spans
        values = [-above / below for above in a for below in b] if b[0] * b[1] > 0 else [-inf, inf]
        self.low, self.high = 2 * min(values) - max(values), 2 * max(values) - min(values)

    def sharpen(self) -> None:
        """Keep the part in which the chord vanishes if x is there; try smaller parts after a success."""
        (low, high), parts = self.ends, 2**self.power
        below, above = self.f(low), self.f(high)
        left = low + (high - low) * min(parts - 1, floor(parts * below / (below - above))) / parts
        right = left + (high - low) / parts
        before, after = self.f(left) * above, self.f(right) * above
        self.power = 2 * self.power if before < 0 < after else max(1, self.power // 2)
        self.ends = [low, left] if before > 0 else [right, high] if after < 0 else [left, right]
        self.enclose()

    def holds(self, p: Poly) -> bool:
        """Tell whether p vanishes at the value: whether the numerator of p(-a/b) does at x."""
        total, scale = Poly(p[-1:]), ONE
        for c in reversed(p[:-1]):
            scale *= self.b
            total = total * self.a * MINUS + scale * Poly((c,))
        common = self.f.shared(total)
        return common(self.ends[0]) * common(self.ends[1]) <= 0

    def cell(self, bits: int, like: Any = None) -> list[Fraction]:
        """Give m/2^k and (m+1)/2^k round it, k = bits - floor(log2 |it|); bits double to be fine as like."""
        while self.low < self.high:
            middle = abs(self.low + self.high) / 2
            size = middle.numerator.bit_length() - middle.denominator.bit_length()
            unit = Fraction(2) ** (size - (middle < Fraction(2) ** size) - bits)
            low = floor((self.low + self.high) / 2 / unit) * unit
            if low <= self.low and self.high <= low + unit:
                coarse = like and 0 < exact(like[1]) - exact(like[0]) < unit
                return self.cell(2 * bits, like) if coarse else [low, low + unit]
            self.sharpen()
        return [self.low, self.high]

    def side(self, x: Any) -> Any:
        """Give a number with the sign of value - x."""
        while self.low < x < self.high:
            self.sharpen()
        return self.low + self.high - 2 * x


def exact(text: Any) -> Fraction:
    if not fullmatch(NUMBER, text):
        raise ValueError(f"{text!r} is no number")
    return Fraction(text)


def unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    if len(dict(pairs)) < len(pairs):
        raise ValueError(f"a key stands twice among {[key for key, _ in pairs]}")
    return dict(pairs)


def parts_of(block: dict[str, Any]) -> list[Poly]:
    """Give numerator and denominator of a block; a complex zero or pole [re, im] brings its conjugate."""
    if "numerator" in block:
        return [Poly(exact(c) for c in reversed(block[key])) for key in ("numerator", "denominator")]
    parts = [Poly((exact(block.get("factor", "1")),)), ONE]
    for i, root in ((i, root) for i, key in enumerate(("zeros", "poles")) for root in block.get(key, [])):
        re, im = map(exact, root if type(root) is list else (root, "0"))
        parts[i] *= Poly((re**2 + im**2, -2 * re, 1)) if im else Poly((-re, 1))
    return parts


class Loop:
    """The question: N and D as sent, the feedback's sign in N; n and d without what they share."""

    def __init__(self, question: dict[str, Any]) -> None:
        get, blocks = question.get, question.get("blocks") or [question]
        sent = [prod(polys, start=ONE) for polys in zip(*map(parts_of, blocks), strict=True)]
        one_loop = bool(get("blocks")) != ("numerator" in question) and get("evidence") is True and sent[1]
        if not one_loop or get("sample_time_s") or exact(get("dead_time_s", "0")):
            raise ValueError("one continuous loop without dead time is rechecked, if evidence is asked for")
        feedback, detour = get("feedback", "negative"), get("detour", "right")
        sign, self.left = {"negative": 1, "positive": -1}[feedback], {"right": 0, "left": 1}[detour]
        scale = lcm(*(Fraction(c).denominator for p in sent for c in p))
        self.N = Poly(int(c * scale) * sign for c in sent[0])
        self.D = Poly(int(c * scale) for c in sent[1])
        self.common = self.D.shared(self.N)
        self.n, self.d = self.N // self.common, self.D // self.common
        texts, excess = ([str(c) for c in reversed(p)] or ["0"] for p in sent), len(self.D) - len(self.N)
        names = "name numerator denominator relative_degree feedback detour sample_time_s dead_time_s"
        self.echo = named(names, get("name"), *texts, excess if self.n else None, feedback, detour, None, "0")
        self.gain = None if get("gain") is None else exact(get("gain"))
        self.low, self.high = (-inf, inf) if get("gain_window") is None else map(exact, get("gain_window"))

    def closed(self, gain: Fraction) -> Poly:
        return self.D * Poly((gain.denominator,)) + self.N * Poly((gain.numerator,))

    def places(self, hints: set[Fraction]) -> Any:
        """Give cause, w^2 and K of everything that can change a count."""
        n, d, zero, hidden = self.n, self.d, Value(0, 0), ONE
        (u0, v0), (u1, v1) = d.halves(), n.halves()
        a, b = u0 * u1 + X * v0 * v1, u1 * u1 + X * v1 * v1
        if not v0 and not v1:
            a, b, v0, v1, hidden = u0, u1, u0.slope(), u1.slope(), Poly.shared(*self.common.halves())
        if n[0] and d[0] and n[1:] + d[1:]:
            yield "origin", zero, Value(*[Fraction(-d[0], n[0])] * 2)
        if h := (u0 * v1 + MINUS * v0 * u1) * hidden:
            u, v, w = (sum(map(abs, terms)) for terms in ((*u0, *u1), (*v0, *v1), hidden))
            rows_u, rows_v = max(len(v0), len(v1)) + len(hidden), max(len(u0), len(u1))
            # a = 0 is an axis pole and b = 0 an axis zero of L: no gain has its root there
            for x in (x for x in h.positive_roots(hints) if not x.holds(a) and not x.holds(b)):
                yield "crossing", x, Value(*x.ends, x.f, a, b, bound=u**rows_u * (v * w) ** rows_v)
        if len(n) == len(d):
            yield "infinity", None, Value(*[Fraction(-d[-1], n[-1])] * 2)
        for x, _ in d.axis_roots(hints):
            yield "open_loop", x, zero
        if len(n) > len(d):
            yield "open_loop", None, zero

    def edges(self, hints: set[Fraction]) -> list[Any]:
        """Give causes, squares and gains of the places, ascending, as one where BITS tell no gains apart."""
        groups: dict[Any, list[Any]] = {}
        for place in self.places(hints) if self.n else ():
            groups.setdefault(tuple(place[2].cell(BITS)), []).append(place)
        return [list(zip(*groups[cell], strict=True)) for cell in sorted(groups)]


def named(names: str, *values: Any) -> dict[str, Any]:
    return dict(zip(names.split(), values, strict=True))


def agreed(rounding: Any, low: Fraction, high: Fraction) -> Any:
    if rounding(low) != rounding(high):
        raise ValueError(f"{BITS} bits do not settle how a value near {float(low)} is rounded")
    return rounding(low)


def frequency(x: Value | None) -> dict[str, Any]:
    if x is None:
        return named("rad_per_s hz exact", None, None, None)
    (low, high), scale = x.cell(BITS), 4**BITS
    top, root = ceil(high * scale**2), Fraction(isqrt(low.numerator), isqrt(low.denominator))
    w = [Fraction(isqrt(floor(low * scale**2)), scale), Fraction(isqrt(top - 1) + 1 if top else 0, scale)]
    text = None if low < high else str(root) if root**2 == low else f"sqrt({low})"
    return named("rad_per_s hz exact", agreed(float, *w), agreed(float, w[0] / TAU[1], w[1] / TAU[0]), text)


def simplest(low: Any, high: Any) -> Fraction:
    """Give 0 if it lies between, else the fraction of the smallest denominator, then of the smallest size."""
    if low >= high:
        raise ValueError("intervals round gains are not disjoint")
    if low < 0:
        return Fraction(0) if high > 0 else -simplest(-high, -low)
    whole = floor(low)
    inverse = 1 / (low - whole) if low > whole else inf
    return whole + (Fraction(1) if whole + 1 < high else 1 / simplest(1 / (high - whole), inverse))


def edge_of(edge: Any, claim: dict[str, Any], around: Any) -> tuple[dict[str, Any], dict[str, Any]]:
    """Give the edge between two bands and its evidence, intervals as narrow as they are in the claim."""
    causes, squares, gains, x = [*dict.fromkeys(edge[0])], *edge[1:], edge[2][0]
    same = all(around[0][key] == around[1][key] for key in ("rhp_poles", "axis_poles"))
    decimal = agreed(lambda y: Context(30).divide(*map(Decimal, y.as_integer_ratio())), *x.cell(BITS))
    square = Value(*x.ends, x.f, MINUS * x.a * x.a, x.b * x.b, bound=x.bound)
    root = "-" * (x.low < 0) + f"sqrt({square.low})" if square.low == square.high else None
    text = str(x.low) if x.low == x.high else root
    values = agreed(float, *x.cell(BITS)), decimal, text, causes, same, [*map(frequency, squares)]
    document = named("gain decimal exact causes counts_equal frequencies", *values)
    (low, high), m = (x.low, x.high), None
    if low < high and len(gains) > 1:
        low, high = map(exact, claim["gain_between"])
        m = Poly(int(exact(c)) for c in reversed(claim["gain_polynomial"]))
        inside = all(gain.side(low) > 0 > gain.side(high) and gain.holds(m) for gain in gains)
        if not inside or gcd(*m) != 1 or m[-1] < 0 or changes(m.chain(m.slope()), low, high) != 1:
            raise ValueError("gain_polynomial does not prove that gains are equal")
    elif low == high and (len(gains) > 1 or (squares[0] and squares[0].low < squares[0].high)):
        m = Poly((-low.numerator, low.denominator))
    pairs = [y and y.cell(192, pair) for y, pair in zip_longest(squares, claim["omega_squared_between"])]
    spans = [span and [str(end) for end in span] for span in (x.cell(64, claim["gain_between"]), *pairs)]
    values = spans[0], spans[1 : len(squares) + 1], m and [str(c) for c in reversed(m)]
    return document, named("gain_between omega_squared_between gain_polynomial", *values)


def due(loop: Loop, claims: list[Any]) -> dict[str, Any]:
    """Derive what the answer must say, from the question and from what is proved of the evidence of edges."""
    hints = {exact(end) for e in claims for pair in e["omega_squared_between"] if pair for end in pair}
    every = loop.edges(hints)
    first = sum(all(gain.side(loop.low) < 0 for gain in gains) for _, _, gains in every)
    last = sum(all(gain.side(loop.high) <= 0 for gain in gains) for _, _, gains in every)
    if len(edges := every[first:last]) != len(claims):
        raise ValueError(f"{len(edges)} edges are due, the evidence holds {len(claims)}")
    cells = [e[2][0].cell(64, claim["gain_between"]) for e, claim in zip(edges, claims, strict=True)]
    starts, stops = [loop.low, *(cell[1] for cell in cells)], [*(cell[0] for cell in cells), loop.high]
    ends = [float(x) if abs(x) < inf else None for x in (loop.low, *(e[2][0].low for e in edges), loop.high)]
    below = [-inf, *(max(gain.high for gain in gains) for _, _, gains in every)][first:]
    above = [*(min(gain.low for gain in gains) for _, _, gains in every), inf][first:]
    (right, axis, _), hidden_axis = loop.D.counts(), loop.common.counts()[1]
    enclosed = right + (axis - hidden_axis) * loop.left
    bands, samples = [], []
    for start, stop, low, high, around in zip(starts, stops, below, above, pairwise(ends), strict=False):
        empty = start >= stop and (start == loop.low or stop == loop.high)  # an edge at the window's end
        sample = simplest(low, high) if empty else simplest(start, stop)
        rhp, on_axis, verdict = loop.closed(sample).counts()
        values = *around, verdict, rhp, on_axis, rhp - enclosed if on_axis == hidden_axis else None
        bands.append(named("lower upper verdict rhp_poles axis_poles clockwise_encirclements", *values))
        samples.append({"sample_gain": None if empty else str(sample)})
    written = [edge_of(*each) for each in zip(edges, claims, pairwise(bands), strict=True)]
    evidence = {"edges": [each for _, each in written], "bands": samples}
    poles = [{**frequency(x), "multiplicity": m} for x, m in loop.D.axis_roots(hints)]
    levels, modes, commissioned = loop.common.levels() if loop.n else [ONE], [], None
    apart = [*(one // other for one, other in pairwise(levels)), ONE]
    for m, mode in enumerate((one // other for one, other in pairwise(apart)), 1):
        values = [str(Fraction(c, mode[-1])) for c in reversed(mode)], *mode.counts()[:2]
        modes += [named("polynomial rhp_roots axis_roots", *values)] * m * (len(mode) > 1)
    open_loop = {"rhp_poles": right, "enclosed_poles": enclosed, "axis_poles": poles, "hidden_modes": modes}
    if loop.gain is not None:
        p, sides = loop.closed(loop.gain), [gains[0].side(loop.gain) for _, _, gains in edges]
        rhp, axis, verdict = p.counts() if p else (None, None, "ill_posed")
        verdict = "ill_posed" if len(loop.N) == len(loop.D) > len(p) else verdict
        values = str(loop.gain), None if 0 in sides else sum(x < 0 for x in sides), verdict, rhp, axis
        commissioned = named("gain exact band verdict rhp_poles axis_poles", float(loop.gain), *values)
    parts = loop.echo, open_loop, [each for each, _ in written], bands, commissioned, evidence
    return named("loop open_loop edges bands commissioned evidence", *parts)


def differences(where: str, given: Any, due: Any) -> Any:
    """Name where the two differ; all numbers given are floats, and a decimal is given as text."""
    if type(given) is type(due) and (type(due) is dict or (type(due) is list and len(given) == len(due))):
        for key in due if type(due) is dict else range(len(due)):
            yield from differences(f"{where}/{key}", given[key], due[key])
    elif type(due) is not Decimal or type(given) is not str or Decimal(given) != due:
        kind = float if type(due) is int else type(due)
        if type(given) is not kind or given != due:
            yield f"{where}: {given!r} is written, {due!r} is due"


def main(paths: list[str]) -> int:
    sys.set_int_max_str_digits(0)
    code = 2
    try:
        question, answer = (Path(path).read_text("utf-8") for path in paths)
        loop = Loop(json.loads(question, object_pairs_hook=unique, parse_int=str, parse_float=str))
        document = {**json.loads(answer, object_pairs_hook=unique, parse_int=float)}
        code = 1
        faults = [*differences("", document, due(loop, document["evidence"]["edges"]))]
    except Exception as fault:  # noqa: BLE001 - whatever goes wrong, nothing is believed
        faults = [f"{'the answer' if code == 1 else 'question or answer'} cannot be followed: {fault!r}"]
    proved = "Loop, open loop, edges, bands, evidence, and verdict and counts at the gain in service hold."
    print(*faults or [proved, "Not rechecked: closed-loop poles, nearest stable band, words."], sep="\n")
    return code if faults else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
