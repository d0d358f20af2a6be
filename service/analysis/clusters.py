"""Moving crowded guesses of polynomial roots apart, at any precision asked for.

All points repel each other while Newton's method attracts them (L. W. Ehrlich, 1967; O. Aberth, 1973).
That is slow where roots cluster, so a cluster is looked at through the Taylor polynomial about its
centre: the centre moves to the mean of the cluster quadratically, and the polynomial's lowest terms,
levelled to the cluster's own scale, give new guesses in floating point. No move proves anything; what a
guess is worth tell ``proven_radius`` and ``joined``, on which ``enclosures`` builds its proof.
"""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from flint import acb, arb, fmpz_poly

from service.analysis.guesses import companion_roots, exactly
from service.analysis.precision import working


@dataclass(frozen=True, slots=True)
class Guess:
    """A point and a proven bound on its distance from the nearest root."""

    at: acb
    radius: arb


_SWEEPS: Final = 40
_LOOKS: Final = 2
_REPULSION_BITS: Final = 64
_CENTRE_STEPS: Final = 20


def separate(p: fmpz_poly, guesses: Sequence[Guess], bits: int, precision: int) -> tuple[list[Guess], bool]:
    """Return better guesses for all roots of p, not paired, and whether none crowd any more."""
    moved = list(guesses)
    with working(precision):
        derivative = p.derivative()
        for _ in range(_LOOKS):
            moved = _repelled(p, derivative, moved, bits)
            crowds = [g for g in joined([m.at for m in moved], [m.radius for m in moved]) if len(g) > 1]
            if not crowds:
                return moved, True
            for crowd in crowds:
                for i, z in zip(crowd, _looked_at(p, [moved[i].at for i in crowd]), strict=False):
                    moved[i] = Guess(z, arb.pos_inf())
    return moved, False


def proven_radius(p: fmpz_poly, derivative: fmpz_poly, z: acb) -> arb:
    """Bound the distance from z to the nearest root of p."""
    step = p(z) / derivative(z)
    return (abs(step) * p.degree()).abs_upper() if step.is_finite() else arb.pos_inf()


def _repelled(p: fmpz_poly, derivative: fmpz_poly, guesses: Sequence[Guess], bits: int) -> list[Guess]:
    """Take Aberth's steps until moves are small.

    Small is 2^-bits of a point's size, and a small part of its distance from the others.
    """
    points = [g.at for g in guesses]
    unsettled = [i for i, g in enumerate(guesses) if not g.radius * (1 << bits) < abs(g.at)]
    moving = unsettled
    for _ in range(_SWEEPS):
        still = []
        for i in moving:
            z = points[i]
            newton = p(z) / derivative(z)
            with working(_REPULSION_BITS):
                repulsion = sum((1 / (z - other) for j, other in enumerate(points) if j != i), acb(0))
                alone = abs(newton * repulsion) * (16 * len(points)) < 1
            if alone and abs(newton) * (1 << bits) < abs(z):
                continue
            step = newton / (1 - newton * repulsion)
            if step.is_finite():
                points[i] = (z - step).mid()
                still.append(i)
        moving = still
        if not moving:
            break
    moved = list(guesses)
    for i in unsettled:
        moved[i] = Guess(points[i], proven_radius(p, derivative, points[i]))
    return moved


def joined(points: Sequence[acb], radii: Sequence[arb]) -> list[list[int]]:
    """Group the numbers of the discs that are not proven disjoint."""
    owner = list(range(len(points)))

    def find(i: int) -> int:
        while owner[i] != i:
            i = owner[i]
        return i

    for i, j in _suspects(points, radii):
        if not abs(points[i] - points[j]) > radii[i] + radii[j]:
            owner[find(i)] = find(j)
    groups: dict[int, list[int]] = {}
    for i in range(len(points)):
        groups.setdefault(find(i), []).append(i)
    return list(groups.values())


def _suspects(points: Sequence[acb], radii: Sequence[arb]) -> Iterator[tuple[int, int]]:
    """Yield the pairs that double precision, with a margin for its rounding, cannot tell to be disjoint."""
    centres = np.array([complex(z) for z in points])
    reach = np.array([float(r) for r in radii]) * (1 + 1e-9) + 1e-12 * np.abs(centres) + 1e-300
    with np.errstate(invalid="ignore"):
        near = ~(np.abs(centres[:, None] - centres[None, :]) > reach[:, None] + reach[None, :])
    yield from ((int(i), int(j)) for i, j in np.argwhere(np.triu(near, 1)))


def _looked_at(p: fmpz_poly, points: list[acb]) -> list[acb]:
    """Guess the roots of a cluster anew, at its own scale."""
    count = len(points)
    centre = (sum(points, acb(0)) / count).mid()
    derivatives = [p]
    for i in range(count):
        derivatives.append(derivatives[-1].derivative() // (i + 1))
    scale = None
    for _ in range(_CENTRE_STEPS):
        local = [d(centre) for d in derivatives]
        scale = _scale(local)
        step = -local[count - 1] / (local[count] * count)
        if scale is None or not step.is_finite() or abs(step) * (2 * count) < arb(2) ** scale:
            break
        centre = (centre + step).mid()
    if scale is None:
        return points
    unit = arb(2) ** scale
    levelled = [complex(c * unit**i / (local[count] * unit**count)) for i, c in enumerate(local)]
    return [(centre + exactly(u, scale)).mid() for u in companion_roots(levelled).tolist()]


def _scale(local: Sequence[acb]) -> int | None:
    """Return the binary exponent of the size of the roots near 0, from the Taylor coefficients there."""
    lead = _log2(local[-1])
    sizes = [(_log2(c) - lead) / (len(local) - 1 - i) for i, c in enumerate(local[:-1]) if c.abs_upper() > 0]
    finite = lead > -math.inf and sizes and max(sizes) < math.inf
    return math.ceil(max(sizes)) if finite else None


def _log2(value: acb) -> float:
    bound = value.abs_upper()
    return float(bound.log()) / math.log(2) if bound > 0 else -math.inf
