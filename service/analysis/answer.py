"""What the analysis answers. Field names are those of the wire contract; values are final.

Floats are the doubles nearest to the true values; ``exact`` and the texts of evidence are exact forms
("8/55", "sqrt(48/11)", "-sqrt(2)"), None where the value has none of these.
"""

from dataclasses import dataclass
from typing import Literal

Verdict = Literal["stable", "marginal", "unstable", "ill_posed"]
Cause = Literal["open_loop", "origin", "crossing", "infinity"]


@dataclass(frozen=True, slots=True)
class Loop:
    """The loop as understood: coefficients multiplied out, in descending powers of s, as exact texts."""

    numerator: tuple[str, ...]
    denominator: tuple[str, ...]
    relative_degree: int | None
    feedback: str
    detour: str


@dataclass(frozen=True, slots=True)
class Frequency:
    """A frequency w >= 0 on the imaginary axis; all None at infinity."""

    rad_per_s: float | None
    hz: float | None
    exact: str | None


@dataclass(frozen=True, slots=True)
class AxisPole:
    """An open-loop pole at j rad_per_s (and its conjugate, where not zero)."""

    rad_per_s: float
    hz: float
    exact: str | None
    multiplicity: int


@dataclass(frozen=True, slots=True)
class HiddenMode:
    """Roots shared by numerator and denominator: a monic squarefree polynomial, descending powers of s."""

    polynomial: tuple[str, ...]
    rhp_roots: int
    axis_roots: int


@dataclass(frozen=True, slots=True)
class OpenLoop:
    """What the loop is before it is closed."""

    rhp_poles: int
    enclosed_poles: int
    axis_poles: tuple[AxisPole, ...]
    hidden_modes: tuple[HiddenMode, ...]


@dataclass(frozen=True, slots=True)
class Edge:
    """A gain at which the count can change. ``decimal`` has 30 significant digits."""

    gain: float
    decimal: str
    exact: str | None
    causes: tuple[Cause, ...]
    counts_equal: bool
    frequencies: tuple[Frequency, ...]


@dataclass(frozen=True, slots=True)
class Band:
    """An open interval of gains between edges (None: unbounded) with its counts."""

    lower: float | None
    upper: float | None
    verdict: Verdict
    rhp_poles: int
    axis_poles: int
    clockwise_encirclements: int | None


@dataclass(frozen=True, slots=True)
class ClosedLoopPole:
    """A closed-loop pole re + j im in rad/s; ``time_constant_s`` is -1/re (negative: it grows)."""

    re: float
    im: float
    multiplicity: int
    damping_ratio: float | None
    time_constant_s: float | None


@dataclass(frozen=True, slots=True)
class NearestStable:
    """The nearest stable band on the gain's own side of zero, its ends as multiples of the gain."""

    band: int
    ratio_from: float | None
    ratio_to: float | None


@dataclass(frozen=True, slots=True)
class Commissioned:
    """The gain in service; ``band`` is None at an edge, counts None where the polynomial vanishes."""

    gain: float
    exact: str
    band: int | None
    verdict: Verdict
    rhp_poles: int | None
    axis_poles: int | None
    closed_loop_poles: tuple[ClosedLoopPole, ...]
    nearest_stable: NearestStable | None
    margins: None


@dataclass(frozen=True, slots=True)
class EdgeEvidence:
    """Rational intervals round an edge's gain and its squared frequencies, in the order of the edge's.

    ``omega_squared_between`` has ("0", "0") at the origin and None at infinity; ``gain_polynomial``
    has integer coefficients in descending powers of K and exactly one root in ``gain_between``.
    """

    gain_between: tuple[str, str]
    omega_squared_between: tuple[tuple[str, str] | None, ...]
    gain_polynomial: tuple[str, ...] | None


@dataclass(frozen=True, slots=True)
class BandEvidence:
    """A rational gain inside the band, at which the counts can be made again; None in an empty band."""

    sample_gain: str | None


@dataclass(frozen=True, slots=True)
class Evidence:
    """What a third party needs to re-derive the verdicts, in the order of edges and bands."""

    edges: tuple[EdgeEvidence, ...]
    bands: tuple[BandEvidence, ...]


@dataclass(frozen=True, slots=True)
class Caution:
    """Something this loop makes worth saying: a stable code for programs, a sentence for people."""

    code: str
    text: str


@dataclass(frozen=True, slots=True)
class Answer:
    """Everything there is to say of one loop."""

    loop: Loop
    open_loop: OpenLoop
    edges: tuple[Edge, ...]
    bands: tuple[Band, ...]
    commissioned: Commissioned | None
    summary: str
    cautions: tuple[Caution, ...]
    evidence: Evidence | None
