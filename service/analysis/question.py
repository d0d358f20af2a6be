"""What the analysis is asked: one loop, exactly, and what to say of it."""

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

Feedback = Literal["negative", "positive"]
Detour = Literal["right", "left"]


@dataclass(frozen=True, slots=True)
class PolynomialBlock:
    """A block N(s)/D(s); coefficients in descending powers of s, leading zeros allowed."""

    numerator: tuple[Fraction, ...]
    denominator: tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class ComplexRoot:
    """A zero or pole re + j im with im != 0; its conjugate is implied. In rad/s."""

    re: Fraction
    im: Fraction


@dataclass(frozen=True, slots=True)
class RootBlock:
    """A block factor * prod(s - zero) / prod(s - pole); zeros and poles in rad/s."""

    zeros: tuple[Fraction | ComplexRoot, ...]
    poles: tuple[Fraction | ComplexRoot, ...]
    factor: Fraction


Block = PolynomialBlock | RootBlock


@dataclass(frozen=True, slots=True)
class Question:
    """A loop L(s) as blocks in series, closed as 1 + K L = 0 (negative) or 1 - K L = 0 (positive feedback).

    ``gain`` is the commissioned gain K, ``gain_window`` the lowest and highest gain to report, both
    dimensionless as far as the analysis is concerned and exact.
    """

    blocks: tuple[Block, ...]
    gain: Fraction | None = None
    feedback: Feedback = "negative"
    detour: Detour = "right"
    gain_window: tuple[Fraction, Fraction] | None = None
    evidence: bool = False
