"""Families of nasty loops for hypothesis, each named for what makes it hard.

A loop is built from factors with known places (left of the axis, right of it, on it), so that a family holds
what its name says by construction. Degrees stay small: the difficulty is in the structure.
"""

from fractions import Fraction

from hypothesis import strategies as st
from hypothesis.strategies import DrawFn, SearchStrategy

from tests.oracle import Loop
from tests.polynomials import (
    Polynomial,
    add,
    degree,
    in_square,
    multiply,
    polynomial,
    power,
    scaled,
    stretched,
)

S = polynomial(1, 0)

positives = st.builds(Fraction, st.integers(1, 12), st.sampled_from([1, 2, 3, 5, 8, 10]))
"""Small positive fractions."""

non_zeros = st.builds(lambda size, sign: sign * size, positives, st.sampled_from([1, -1]))
"""Small fractions of either sign, never zero."""

decades = st.integers(-12, 12).map(lambda exponent: Fraction(10) ** exponent)
"""Powers of ten over 24 decades."""


def mirrored(p: Polynomial) -> Polynomial:
    """Give p(-s): every root changes sides."""
    return stretched(p, Fraction(-1))


left_factors = st.one_of(
    st.builds(lambda a: polynomial(1, a), positives),
    st.builds(lambda b, c: polynomial(1, b, c), positives, positives),
)
"""Monic factors with all roots left of the axis."""

right_factors = left_factors.map(mirrored)
"""Factors with all roots right of the axis."""

axis_pairs = st.builds(lambda x: polynomial(1, 0, x), positives)
"""s^2 + x: a pair on the axis at a frequency that is mostly irrational."""

axis_factors = st.one_of(st.just(S), axis_pairs)
"""s or s^2 + x."""

any_factors = st.one_of(left_factors, right_factors, axis_factors)


def products(factors: SearchStrategy[Polynomial], least: int, most: int) -> SearchStrategy[Polynomial]:
    """Give products of ``least`` to ``most`` factors."""
    return st.lists(factors, min_size=least, max_size=most).map(lambda drawn: multiply(*drawn))


@st.composite
def plain(draw: DrawFn) -> Loop:
    """Strictly proper, poles and zeros anywhere off the axis."""
    off_axis = st.one_of(left_factors, right_factors)
    denominator = draw(products(off_axis, 1, 3))
    zeros = draw(products(off_axis, 0, 2).filter(lambda p: degree(p) < degree(denominator)))
    return Loop(scaled(zeros, draw(non_zeros)), denominator)


@st.composite
def poles_on_the_axis(draw: DrawFn) -> Loop:
    """Axis poles up to triple, at zero and not, beside anything."""
    axis = power(draw(axis_factors), draw(st.integers(1, 3)))
    denominator = multiply(axis, draw(products(any_factors, 0, 2)))
    return Loop(scaled(draw(products(left_factors, 0, 2)), draw(non_zeros)), denominator)


@st.composite
def zeros_on_the_axis(draw: DrawFn) -> Loop:
    """Axis zeros up to double, so that the curve passes through the origin and K runs to infinity there."""
    axis = power(draw(axis_factors), draw(st.integers(1, 2)))
    numerator = multiply(axis, draw(products(left_factors, 0, 1)))
    return Loop(scaled(numerator, draw(non_zeros)), draw(products(any_factors, 1, 3)))


def _sharing(place: SearchStrategy[Polynomial]) -> SearchStrategy[Loop]:
    """Give loops whose numerator and denominator share factors of one place, up to three times."""

    @st.composite
    def build(draw: DrawFn) -> Loop:
        shared = draw(place)
        base = draw(st.one_of(plain(), poles_on_the_axis()))
        often = draw(st.integers(1, 2))
        return Loop(
            multiply(base.numerator, power(shared, often)),
            multiply(base.denominator, power(shared, draw(st.integers(often, 3)))),
        )

    return build()


@st.composite
def biproper(draw: DrawFn) -> Loop:
    """As many zeros as poles: an edge at infinite frequency."""
    denominator = draw(products(any_factors, 1, 3))
    lower = st.lists(st.integers(-9, 9), min_size=degree(denominator), max_size=degree(denominator))
    return Loop(polynomial(draw(non_zeros), *draw(lower)), denominator)


@st.composite
def improper(draw: DrawFn) -> Loop:
    """More zeros than poles: K = 0 is an edge at infinity."""
    denominator = draw(products(any_factors, 0, 2))
    excess = draw(st.integers(1, 3))
    size = degree(denominator) + excess
    lower = st.lists(st.integers(-9, 9), min_size=size, max_size=size)
    return Loop(polynomial(draw(non_zeros), *draw(lower)), denominator)


@st.composite
def degree_drops(draw: DrawFn) -> Loop:
    """Numerator and denominator agree in their leading coefficients: several roots pass through infinity."""
    denominator = draw(products(any_factors, 1, 3))
    size = draw(st.integers(0, degree(denominator) - 1))
    rest = polynomial(*draw(st.lists(st.integers(-9, 9), min_size=size, max_size=size)))
    return Loop(scaled(add(denominator, rest), draw(non_zeros)), denominator)


@st.composite
def constant(draw: DrawFn) -> Loop:
    """No dynamics at all, or no gain at all."""
    value = polynomial(draw(non_zeros))
    if draw(st.booleans()):
        return Loop(value, polynomial(draw(non_zeros)))
    return Loop((), draw(products(any_factors, 0, 2)))


@st.composite
def lossless(draw: DrawFn) -> Loop:
    """Even numerator and denominator: the whole axis image is real; sometimes a hidden factor beside."""
    in_x = st.one_of(
        st.builds(lambda a: polynomial(1, a), st.one_of(non_zeros, st.just(Fraction(0)))),
        st.builds(lambda b, c: polynomial(1, b, c), non_zeros, non_zeros),
    )
    numerator = scaled(in_square(draw(products(in_x, 0, 2))), draw(non_zeros))
    denominator = in_square(draw(products(in_x, 1, 2)))
    hidden = draw(st.one_of(st.just(polynomial(1)), any_factors))
    return Loop(multiply(numerator, hidden), multiply(denominator, hidden))


@st.composite
def odd(draw: DrawFn) -> Loop:
    """One polynomial even, the other odd: L is imaginary on the axis."""
    even = multiply(*draw(st.lists(axis_pairs, min_size=0, max_size=2)))
    other = multiply(S, *draw(st.lists(axis_pairs, min_size=0, max_size=2)))
    numerator, denominator = draw(st.sampled_from([(even, other), (other, even)]))
    return Loop(scaled(numerator, draw(non_zeros)), denominator)


@st.composite
def touching(draw: DrawFn) -> Loop:
    """Meet -1/K0 at a known frequency with contact of order 2, 3 or 4 (at least).

    With D + K0 N = (s^2 + x0) q and N = c q + (s^2 + x0)^k t, q conj(D) is real on the axis up to a
    factor (x0 - x)^k, and so 1 + K0 L = (x0 - x) q conj(D) / |D|^2 has contact of order k + 1.
    """
    pair = draw(axis_pairs)
    q = draw(products(st.one_of(left_factors, right_factors), 1, 2))
    order = draw(st.integers(1, 3))
    t = scaled(draw(products(any_factors, 0, 1)), draw(non_zeros))
    numerator = add(scaled(q, draw(non_zeros)), multiply(power(pair, order), t))
    denominator = add(multiply(pair, q), scaled(numerator, -draw(non_zeros)))
    return Loop(numerator, denominator) if denominator else Loop(numerator, q)


@st.composite
def touching_irrationally(draw: DrawFn) -> Loop:
    """Meet -1/K and turn back at a gain that is no fraction, at the frequencies of a quartic P(s^2).

    With N = b q and D = (s^2 + a) q + c P^2 the imaginary part of N conj(D) has the factor P^2 on the axis,
    and K = (x - a)/b where P vanishes: as irrational as x = w^2 is there.
    """
    quartic = draw(
        st.sampled_from([polynomial(1, 0, 4, 0, 2), polynomial(1, 0, 0, 0, -3), polynomial(1, 0, 3, 0, 1)])
    )
    q = draw(left_factors)
    through = multiply(polynomial(1, 0, draw(non_zeros)), q)
    denominator = add(through, scaled(power(quartic, 2), draw(non_zeros)))
    return Loop(scaled(q, draw(non_zeros)), denominator)


@st.composite
def meeting(draw: DrawFn) -> Loop:
    """Two axis pairs (or one twice, or one and the origin) at one gain: D + K0 N is their product."""
    closed = multiply(draw(axis_pairs), draw(axis_factors), draw(products(left_factors, 0, 1)))
    size = draw(st.integers(1, degree(closed)))
    numerator = polynomial(draw(non_zeros), *draw(st.lists(st.integers(-9, 9), min_size=size, max_size=size)))
    denominator = add(closed, scaled(numerator, -draw(non_zeros)))
    return Loop(numerator, denominator) if denominator else Loop(numerator, closed)


def folded(p: Polynomial, a: Fraction, times: int) -> Polynomial:
    """Give s^times p(s + a/s), times >= deg p."""
    both = polynomial(1, 0, a)
    return add(
        *(
            scaled(multiply(power(both, degree(p) - i), power(S, times - degree(p) + i)), c)
            for i, c in enumerate(p)
        )
    )


@st.composite
def tied(draw: DrawFn) -> Loop:
    """Put s + a/s for s: every crossing happens at two frequencies at once, at mostly irrational gains.

    The real part of s + a/s has the sign of that of s, so nothing changes sides.
    """
    base = draw(
        st.one_of(plain(), st.builds(Loop, products(left_factors, 0, 1), products(left_factors, 2, 2)))
    )
    times = max(degree(base.numerator), degree(base.denominator))
    a = draw(positives)
    return Loop(folded(base.numerator, a, times), folded(base.denominator, a, times))


@st.composite
def wide(draw: DrawFn) -> Loop:
    """Corner frequencies and gains over 24 decades, mostly left of the axis."""
    places = st.one_of(positives, positives, non_zeros)
    corners = st.builds(lambda place, decade: polynomial(1, place * decade), places, decades)
    denominator = multiply(power(S, draw(st.integers(0, 2))), draw(products(corners, 1, 4)))
    numerator = draw(products(corners, 0, 3))
    return Loop(scaled(numerator, draw(non_zeros) * draw(decades)), denominator)


@st.composite
def barely_damped(draw: DrawFn) -> Loop:
    """Resonances with a damping of 1e-9 of either sign, some side by side within 1e-9."""
    w = draw(positives)
    tiny = Fraction(1, 10**9)
    detuned = st.sampled_from([Fraction(0), tiny, 1 + tiny])
    dampings = st.sampled_from([tiny, -tiny, 2 * tiny])
    resonances = st.builds(
        lambda damping, detuning: polynomial(1, 2 * damping * w, (w + detuning) ** 2), dampings, detuned
    )
    denominator = draw(products(resonances, 1, 2))
    numerator = draw(products(st.one_of(left_factors, resonances, st.just(S)), 0, 2))
    return Loop(scaled(numerator, draw(non_zeros)), multiply(denominator, draw(products(left_factors, 0, 1))))


@st.composite
def negative_lead(draw: DrawFn) -> Loop:
    """Either polynomial, or both, with a negative leading coefficient."""
    loop = draw(st.one_of(plain(), poles_on_the_axis(), biproper()))
    signs = draw(st.sampled_from([(1, -1), (-1, 1), (-1, -1)]))
    return Loop(scaled(loop.numerator, signs[0]), scaled(loop.denominator, signs[1]))


FAMILIES: dict[str, SearchStrategy[Loop]] = {
    "plain": plain(),
    "poles_on_the_axis": poles_on_the_axis(),
    "zeros_on_the_axis": zeros_on_the_axis(),
    "shared_on_the_axis": _sharing(axis_factors),
    "shared_right": _sharing(right_factors),
    "shared_left": _sharing(left_factors),
    "biproper": biproper(),
    "improper": improper(),
    "degree_drops": degree_drops(),
    "constant": constant(),
    "lossless": lossless(),
    "odd": odd(),
    "touching": touching(),
    "touching_irrationally": touching_irrationally(),
    "meeting": meeting(),
    "tied": tied(),
    "wide": wide(),
    "barely_damped": barely_damped(),
    "negative_lead": negative_lead(),
}

any_loops = st.one_of(*FAMILIES.values())
"""A loop of any family."""

feedbacks = st.sampled_from(["negative", "positive"])
detours = st.sampled_from(["right", "left"])
