"""The words in which summary and cautions speak of gains, poles and frequencies."""

from collections.abc import Sequence
from typing import Final

from service.analysis.answer import Edge, Frequency

_NUMBERS: Final = (
    "no",
    "one",
    "two",
    "three",
    "four",
    "five",
    "six",
    "seven",
    "eight",
    "nine",
    "ten",
    "eleven",
    "twelve",
)
_LONGEST_EXACT: Final = 12


def counted(number: int, noun: str) -> str:
    """Write "one pole", "two poles"."""
    word = _NUMBERS[number] if number < len(_NUMBERS) else str(number)
    return f"{word} {noun}" if number == 1 else f"{word} {noun}s"


def gain_text(value: float, exact: str | None) -> str:
    """Write a gain: exactly where that is short, with four significant digits where that says more."""
    digits = f"{value:.4g}"
    if exact is None or len(exact) > _LONGEST_EXACT:
        return digits
    return exact if exact == digits or exact.lstrip("-").isdigit() else f"{exact} ({digits})"


def edge_text(edge: Edge) -> str:
    """Write an edge's gain."""
    return gain_text(edge.gain, edge.exact)


def listed(parts: Sequence[str]) -> str:
    """Join as "a", "a and b", "a, b and c"."""
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"


def manner(frequencies: Sequence[Frequency]) -> str:
    """Say how roots cross at these frequencies: oscillating, running away, or by way of infinity."""
    parts = []
    if any(f.rad_per_s == 0 for f in frequencies):
        parts.append("running away without oscillation (frequency zero)")
    oscillating = [
        f"{f.rad_per_s:.4g} rad/s ({f.hz:.4g} Hz)" for f in frequencies if f.rad_per_s and f.hz is not None
    ]
    if oscillating:
        parts.append(f"oscillating at {listed(oscillating)}")
    if any(f.rad_per_s is None for f in frequencies):
        parts.append("by way of infinity, where the closed loop changes its order")
    return listed(parts)
