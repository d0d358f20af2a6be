"""Certified enclosures of all complex roots of a squarefree integer polynomial.

Guesses come from a floating-point eigenvalue computation and are improved by Newton's method; where
they crowd, ``clusters`` moves them apart. None of this proves anything. The proof is the classical one:
the disc round z of radius n |p(z)/p'(z)| holds a root, so n disjoint discs hold one root each
(P. Henrici, Applied and Computational Complex Analysis, vol. 1, section 6.4). A disc centred on the
real axis that is disjoint from all others holds a real root.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final

from flint import acb, arb, fmpz_poly

from service.analysis.clusters import Guess, joined, proven_radius, separate
from service.analysis.errors import TooHard
from service.analysis.guesses import exactly, guess_roots
from service.analysis.precision import working

_NEWTON_STEPS: Final = 3
_HIGHEST_BITS: Final = 1 << 15
_NUDGE: Final = acb(1, 2**-8)
"""Turns guesses off the real axis, on which a double guess could never part into a conjugate pair."""


@dataclass(frozen=True, slots=True)
class Disc:
    """A disc with exact centre, the upper one of a mirrored pair where the centre is not real."""

    centre: acb
    radius: arb

    def images(self) -> tuple[acb, ...]:
        """Return the centre and, off the real axis, its mirror image."""
        return (self.centre,) if self.centre.imag == 0 else (self.centre, self.centre.conjugate())

    def settled(self, bits: int) -> bool:
        """Whether the radius is below 2^-bits times the distance of the centre from 0."""
        return bool(self.radius.is_finite() and self.radius * (1 << bits) < abs(self.centre))

    def balls(self) -> Iterator[acb]:
        """Yield a ball round the disc, and round its mirror image."""
        around = arb(0, self.radius)
        for z in self.images():
            yield acb(z.real + around) if z.imag == 0 else acb(z.real + around, z.imag + around)


def enclose_roots(p: fmpz_poly, bits: int) -> list[acb]:
    """Enclose every root of p in a ball of its own, radius below 2^-bits of the distance from 0.

    p is squarefree with p(0) != 0. Real roots have an exactly zero imaginary part, the others come in
    conjugate pairs.

    Raises TooHard where the roots cannot be told apart at the highest precision.
    """
    guessed = [exactly(u, exponent) for u, exponent in guess_roots(p)]
    precision = bits + 64
    found, guesses = _tried(p, [z for z in guessed if z.imag >= 0], bits, precision)
    if len(guesses) != p.degree():
        guesses = [Guess(z, arb.pos_inf()) for z in guessed]
    precision += p.height_bits()
    while found is None and precision < _HIGHEST_BITS:
        guesses, apart = separate(p, guesses, bits, precision)
        if apart:
            found, _ = _tried(p, _upper(guesses), bits, precision)
        precision *= 2
    if found is None:
        raise TooHard(
            f"Roots of this loop lie so close together that {precision} bits do not tell them apart."
        )
    with working(precision):
        return [ball for disc in found for ball in disc.balls()]


def _upper(guesses: list[Guess]) -> list[acb]:
    """Return the points above the real axis and, made real, those within their radius of it."""
    level = [not abs(g.at.imag) > g.radius for g in guesses]
    return [
        acb(g.at.real) if real else g.at
        for g, real in zip(guesses, level, strict=True)
        if real or g.at.imag > 0
    ]


def _tried(
    p: fmpz_poly, centres: list[acb], bits: int, precision: int
) -> tuple[list[Disc] | None, list[Guess]]:
    """Improve the centres; return their discs if these are proven to hold all roots, one each.

    Otherwise return a guess for each root, the centre where an improved one is not good enough.
    """
    with working(precision):
        derivative = p.derivative()
        discs = [_improved(p, derivative, z) for z in centres]
        places = [(i, z) for i, d in enumerate(discs) for z in d.images()]
        groups = joined([z for _, z in places], [discs[i].radius for i, _ in places])
        alone = {places[group[0]][0] for group in groups if len(group) == 1}
        good = {i for i in alone if discs[i].settled(bits)}
        if len(places) == len(groups) == p.degree() and len(good) == len(discs):
            return discs, []
        guesses = [Guess(z, discs[i].radius) for i in good for z in discs[i].images()]
        for i, centre in enumerate(centres):
            if i not in good:
                images = Disc((centre * _NUDGE).mid(), arb.pos_inf()).images()
                guesses += [Guess(z, arb.pos_inf()) for z in images][: 1 if centre.imag == 0 else 2]
        return None, guesses


def _improved(p: fmpz_poly, derivative: fmpz_poly, centre: acb) -> Disc:
    z = centre
    for _ in range(_NEWTON_STEPS):
        step = p(z) / derivative(z)
        if not step.is_finite():
            break
        z = (z - step).mid()
    return Disc(z, proven_radius(p, derivative, z))
