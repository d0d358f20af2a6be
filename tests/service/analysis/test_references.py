"""The engine against values not made here; each stands in tests/references with its source beside it."""

import json
from fractions import Fraction
from functools import cache
from math import isclose
from pathlib import Path
from typing import Any

import pytest

from service.analysis.answer import Answer, Frequency
from service.analysis.errors import InvalidLoop
from tests.asking import ask, band_ends, edge_gain, gains_inside
from tests.oracle import Loop, closed_loop_counts, counts, has_repeated_axis_root
from tests.polynomials import add, polynomial

REFERENCES = Path(__file__).parents[2] / "references"


def load(name: str, key: str) -> list[dict[str, Any]]:
    entries: list[dict[str, Any]] = json.loads((REFERENCES / name).read_text())[key]
    return entries


ROWS = load("degenerate.json", "rows")
LOOPS = load("critical_gains.json", "loops")
POLYNOMIALS = load("root_counts.json", "polynomials")


def rows_with(key: str) -> pytest.MarkDecorator:
    """Run a test for each row of the degenerate table that says something of ``key``."""
    return pytest.mark.parametrize(
        "row",
        [pytest.param(row, id=f"{row['row']} {row['name']}") for row in ROWS if key in row],
    )


every_loop = pytest.mark.parametrize("entry", [pytest.param(entry, id=entry["name"]) for entry in LOOPS])
every_polynomial = pytest.mark.parametrize(
    "entry", [pytest.param(entry, id=" ".join(entry["polynomial"])) for entry in POLYNOMIALS]
)


def loop_of(entry: dict[str, Any]) -> Loop:
    return Loop(polynomial(*entry["numerator"]), polynomial(*entry["denominator"]))


@cache
def _asked(loop: Loop, fields: tuple[tuple[str, Any], ...]) -> Answer:
    return ask(loop, **dict(fields))


def answer_to(entry: dict[str, Any], **fields: Any) -> Answer:
    """Ask a row's question, as sent: leading zeros and all."""
    sent = Loop(*(tuple(map(Fraction, entry[key])) for key in ("numerator", "denominator")))
    fields |= {key: entry[key] for key in ("feedback", "detour") if key in entry}
    return _asked(sent, tuple(sorted(fields.items())))


def matches(value: Fraction, text: str) -> bool:
    """Compare with an exact fraction, with digits cut off at "...", or with a rounded decimal marked "~"."""
    if not text.endswith("...") and not text.startswith("~"):
        return value == Fraction(text)
    digits = text.strip("~.")
    mantissa, _, exponent = digits.partition("e")
    unit = Fraction(10) ** (int(exponent or 0) - len(mantissa.partition(".")[2]))
    if text.startswith("~"):
        return abs(value - Fraction(digits)) <= unit / 2
    return 0 <= abs(value) - abs(Fraction(digits)) < unit and (value < 0) == digits.startswith("-")


def frequency_matches(frequency: Frequency, text: str | None) -> bool:
    """Compare a frequency with None (infinity), with its exact text, or with decimals."""
    if text is None or frequency.rad_per_s is None:
        return text is None and frequency == Frequency(None, None, None)
    if text.endswith("...") or text.startswith("~"):
        return frequency.exact is None and matches_double(frequency.rad_per_s, text)
    return frequency.exact == text


def matches_double(value: float, text: str) -> bool:
    """Compare a double with digits cut off, to its own spacing, or with a rounded decimal."""
    return matches(Fraction(value), text) or (
        text.endswith("...") and isclose(value, float(text.strip(".")), rel_tol=2**-52)
    )


@rows_with("edges")
def test_table_edges(row: dict[str, Any]) -> None:
    edges = answer_to(row).edges
    assert len(edges) == len(row["edges"])
    for edge, text in zip(edges, row["edges"], strict=True):
        assert matches(edge_gain(edge), text)
        assert (edge.exact == text) or text.endswith("...")


@rows_with("bands")
def test_table_band_counts(row: dict[str, Any]) -> None:
    assert [[band.rhp_poles, band.axis_poles] for band in answer_to(row).bands] == row["bands"]


@rows_with("bands")
def test_the_oracle_counts_what_the_table_says(row: dict[str, Any]) -> None:
    """Guards the table itself: the oracle's counts between the edges the engine found."""
    found = [
        closed_loop_counts(
            loop_of(row), gains_inside(*ends, Fraction(1, 2))[1], row.get("feedback", "negative")
        )
        for ends in band_ends(answer_to(row))
    ]
    assert [list(band) for band in found] == row["bands"]


@rows_with("bands")
def test_table_bands_fulfil_z_is_p_plus_n(row: dict[str, Any]) -> None:
    found = answer_to(row)
    for band in found.bands:
        if band.clockwise_encirclements is not None:
            assert band.rhp_poles == found.open_loop.enclosed_poles + band.clockwise_encirclements


@rows_with("encirclements")
def test_table_encirclements(row: dict[str, Any]) -> None:
    assert [band.clockwise_encirclements for band in answer_to(row).bands] == row["encirclements"]


@rows_with("causes")
def test_table_causes(row: dict[str, Any]) -> None:
    assert [list(edge.causes) for edge in answer_to(row).edges] == row["causes"]


@rows_with("counts_equal")
def test_table_edges_with_equal_counts(row: dict[str, Any]) -> None:
    assert [edge.counts_equal for edge in answer_to(row).edges] == row["counts_equal"]


@rows_with("frequencies")
def test_table_frequencies(row: dict[str, Any]) -> None:
    for edge, expected in zip(answer_to(row).edges, row["frequencies"], strict=True):
        if expected is not None:
            assert len(edge.frequencies) == len(expected)
            assert all(map(frequency_matches, edge.frequencies, expected))


@rows_with("rhp_poles")
def test_table_open_loop_poles(row: dict[str, Any]) -> None:
    assert answer_to(row).open_loop.rhp_poles == row["rhp_poles"]


@rows_with("enclosed_poles")
def test_table_enclosed_poles(row: dict[str, Any]) -> None:
    assert answer_to(row).open_loop.enclosed_poles == row["enclosed_poles"]


@rows_with("axis_poles")
def test_table_axis_poles(row: dict[str, Any]) -> None:
    listed = answer_to(row).open_loop.axis_poles
    assert [pole.multiplicity for pole in listed] == [pole["multiplicity"] for pole in row["axis_poles"]]
    for pole, expected in zip(listed, row["axis_poles"], strict=True):
        assert frequency_matches(Frequency(pole.rad_per_s, pole.hz, pole.exact), expected["rad_per_s"])


@rows_with("hidden_modes")
def test_table_hidden_modes(row: dict[str, Any]) -> None:
    listed = answer_to(row).open_loop.hidden_modes
    assert [
        {"polynomial": list(m.polynomial), "rhp_roots": m.rhp_roots, "axis_roots": m.axis_roots}
        for m in listed
    ] == row["hidden_modes"]


@rows_with("commissioned")
def test_table_verdicts_at_a_gain(row: dict[str, Any]) -> None:
    for expected in row["commissioned"]:
        found = answer_to(row, gain=Fraction(expected["gain"])).commissioned
        assert found is not None
        assert found.verdict == expected["verdict"]
        assert [found.rhp_poles, found.axis_poles] == (expected["counts"] or [None, None])


@rows_with("nearest_stable")
def test_table_nearest_stable_bands(row: dict[str, Any]) -> None:
    for expected in row["nearest_stable"]:
        found = answer_to(row, gain=Fraction(expected["gain"])).commissioned
        assert found is not None
        assert found.nearest_stable is not None
        assert found.nearest_stable.band == expected["band"]
        for end in {"ratio_from", "ratio_to"} & set(expected):
            ratio = None if expected[end] is None else float(Fraction(expected[end]))
            assert getattr(found.nearest_stable, end) == ratio


def test_a_denominator_that_is_zero_is_no_loop() -> None:
    """Row 46 of the table."""
    with pytest.raises(InvalidLoop, match="The denominator is zero"):
        ask(Loop(polynomial(1), (Fraction(0), Fraction(0))))


def test_both_polynomials_times_1e40_are_the_same_loop() -> None:
    """Row 49 of the table: the whole answer but its echo."""
    one = ask(Loop(polynomial(1), polynomial(1, 3, 2, 0)))
    other = ask(Loop(polynomial(10**40), polynomial(10**40, 3 * 10**40, 2 * 10**40, 0)))
    assert (one.edges, one.bands, one.open_loop, one.summary) == (
        other.edges,
        other.bands,
        other.open_loop,
        other.summary,
    )


@pytest.mark.parametrize(("feedback", "exact"), [("negative", "sqrt(8)"), ("positive", "-sqrt(8)")])
def test_a_gain_that_is_the_root_of_a_fraction_is_written_so(feedback: str, exact: str) -> None:
    """First principles: s^4 + K s^2 + 2 has its axis pairs meet at w^2 = sqrt 2, K = 2 sqrt 2."""
    (edge,) = ask(Loop(polynomial(1, 0, 0), polynomial(1, 0, 0, 0, 2)), feedback=feedback).edges
    assert (edge.exact, edge.causes) == (exact, ("crossing",))
    (frequency,) = edge.frequencies
    assert frequency.exact is None
    assert frequency.rad_per_s == 2**0.25


@every_loop
def test_handbook_critical_gains(entry: dict[str, Any]) -> None:
    edges = answer_to(entry).edges
    for gain, frequency in zip(entry["edges"], entry["rad_per_s"], strict=True):
        (edge,) = [edge for edge in edges if matches(edge_gain(edge), gain)]
        (at,) = edge.frequencies
        assert frequency_matches(at, frequency)


@every_loop
def test_handbook_loops_are_stable_where_their_source_says(entry: dict[str, Any]) -> None:
    for verdict in ("stable", "unstable"):
        for gain in entry[verdict]:
            found = answer_to(entry, gain=Fraction(gain)).commissioned
            assert found is not None
            assert found.verdict == verdict


@every_polynomial
def test_textbook_root_counts_as_open_loop(entry: dict[str, Any]) -> None:
    p = polynomial(*entry["polynomial"])
    found = ask(Loop((), p)).open_loop
    on_axis = sum(pole.multiplicity * (1 if pole.rad_per_s == 0 else 2) for pole in found.axis_poles)
    assert [found.rhp_poles, on_axis] == entry["counts"]
    assert [pole.exact for pole in found.axis_poles] == entry.get("rad_per_s", [])


@every_polynomial
def test_textbook_root_counts_as_closed_loop(entry: dict[str, Any]) -> None:
    p = polynomial(*entry["polynomial"])
    found = ask(Loop(polynomial(1), add(p, polynomial(-1))), gain=Fraction(1)).commissioned
    assert found is not None
    assert [found.rhp_poles, found.axis_poles] == entry["counts"]
    assert (found.verdict == "marginal") == (entry["counts"][0] == 0 and not has_repeated_axis_root(p))


@every_polynomial
def test_textbook_root_counts_by_the_oracle(entry: dict[str, Any]) -> None:
    assert list(counts(polynomial(*entry["polynomial"]))) == entry["counts"]
