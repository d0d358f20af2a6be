"""The answer as a person reads it."""

import json
import re
from typing import Any

import pytest

from service.command.local import local_answer
from service.command.table import PIPED_WIDTH, table_text
from service.settings import Limits


def answered(numerator: list[Any], denominator: list[Any], **fields: Any) -> dict[str, Any]:
    question = {"numerator": numerator, "denominator": denominator, "curve": False, **fields}
    document: dict[str, Any] = json.loads(local_answer(json.dumps(question).encode(), Limits()))
    return document


HOIST = answered([2.5, 10], [1, "1/3", 4, 0], gain=0.1, name="hoist drive")
HEADINGS = ("BANDS", "EDGES", "OPEN LOOP", "COMMISSIONED GAIN", "EVIDENCE", "CAUTIONS")


def sections(answer: dict[str, Any]) -> dict[str, str]:
    """The text under each heading, and under "" what stands before the first; runs of spaces are one."""
    found = {"": ""}
    heading = ""
    for line in table_text(answer).splitlines():
        if line in HEADINGS:
            heading = line
            found[heading] = ""
        else:
            found[heading] += re.sub(" +", " ", line.strip()) + "\n"
    return found


def test_the_verdict_comes_first_under_the_name_and_the_cautions_come_last() -> None:
    text = table_text(HOIST | {"summary": "A sentence."})
    assert text.startswith("hoist drive\nA sentence.\n\nBANDS\n")
    assert [line for line in text.splitlines() if line in HEADINGS] == [
        heading for heading in HEADINGS if heading != "EVIDENCE"
    ]
    assert sections(HOIST | {"cautions": [{"code": "a", "text": "Mind."}]})["CAUTIONS"] == "- Mind.\n"


def test_a_loop_without_name_starts_with_the_verdict() -> None:
    assert table_text(answered([1], [1, 1]) | {"summary": "A sentence."}).startswith("A sentence.\n")


def test_each_band_has_its_counts_and_its_verdict_in_words() -> None:
    bands = sections(HOIST)["BANDS"]
    assert "0 K < 0 unstable 1 0 1\n" in bands
    assert "1 0 < K < 0.1455 stable 0 0 0 in service\n" in bands
    assert "2 K > 0.1455 unstable 2 0 2\n" in bands


def test_encirclements_that_are_not_defined_say_so() -> None:
    assert "1 -1 < K < 0 marginal 0 2 not defined\n" in sections(answered([1], [1, 0, 1]))["BANDS"]


def test_each_edge_has_its_exact_form_its_cause_and_its_frequency_in_both_units() -> None:
    edges = sections(HOIST)["EDGES"]
    assert "0 0 open loop 0 0 0 change\n" in edges
    assert "0.1455 8/55 crossing 2.089 0.3325 sqrt(48/11) change\n" in edges


def test_an_edge_without_exact_form_shows_its_thirty_digits() -> None:
    answer = answered([1, 2], [1, 1, 5, 4, 2])
    decimals = [edge["decimal"] for edge in answer["edges"] if edge["exact"] is None]
    assert decimals
    assert all(decimal in sections(answer)["EDGES"] for decimal in decimals)


def test_an_edge_with_several_frequencies_has_a_line_for_each() -> None:
    answer = answered([1, 2], [1, 1, 5, 5, 3, 2])
    assert "1 1 crossing 1 0.1592 1 no change\n2 0.3183 2\n" in sections(answer)["EDGES"]


def test_an_edge_at_infinity_says_so() -> None:
    edges = sections(answered([1, -1], [1, 1]))["EDGES"]
    assert "-1 -1 infinity infinite infinite change\n" in edges


def test_a_loop_without_edges_has_no_table_of_them() -> None:
    assert "EDGES" not in sections(answered([0], [1, 1]))


def test_the_open_loop_shows_poles_right_of_the_axis_and_on_it() -> None:
    answer = answered([1], [1, -1, 4, -4, 0, 0], detour="left")
    assert sections(answer)["OPEN LOOP"].splitlines()[:3] == [
        "1 pole right of the axis, 5 inside the contour",
        "pole at the origin, multiplicity 2",
        "pole pair on the axis at 2 rad/s (0.3183 Hz), exactly 2",
    ]


def test_an_axis_pole_without_exact_form_shows_none() -> None:
    assert "at 1.176 rad/s (0.1871 Hz)\n" in sections(answered([1, 1], [1, 0, 5, 0, 5]))["OPEN LOOP"]


def test_a_hidden_mode_is_shown_with_its_polynomial() -> None:
    text = sections(answered([1, -1], [1, 1, -2]))["OPEN LOOP"]
    assert "hidden mode s - 1: 1 root right of the axis, 0 on it, in the counts of every band\n" in text


def test_the_commissioned_gain_shows_its_exact_form_its_band_and_its_poles() -> None:
    text = sections(HOIST)["COMMISSIONED GAIN"]
    assert text.startswith("K = 0.1, exactly 1/10, in band 1: stable; 0 poles right of the axis, 0 on it\n")
    assert "-0.04838 2.055 1 0.02353 20.67\n" in text
    assert "-0.2366 0 1 1 4.227\n" in text


def test_a_gain_on_an_edge_is_said_to_be_there_and_its_undamped_poles_decay_never() -> None:
    text = sections(answered([1], [1, 3, 3, 1], gain=8))["COMMISSIONED GAIN"]
    assert text.startswith("K = 8, exactly 8, at an edge: marginal; 0 poles right of the axis, 2 on it\n")
    assert "0 1.732 1 0 none\n" in text


@pytest.mark.parametrize(
    ("gain", "numerator", "denominator", "words"),
    [
        pytest.param(20, [1], [1, 3, 2, 0], "1, from 0 to 0.3 times this gain", id="between"),
        pytest.param(1, [1, 1], [1, 2, -15], "1, beyond 15 times this gain", id="unbounded-above"),
        pytest.param(-20, [1, 1], [1, 2, 10], "2, below 0.1 times this gain", id="unbounded-below"),
    ],
)
def test_the_way_to_the_nearest_stable_band_is_in_multiples_of_the_gain(
    gain: int, numerator: list[int], denominator: list[int], words: str
) -> None:
    text = sections(answered(numerator, denominator, gain=gain))["COMMISSIONED GAIN"]
    assert f"nearest stable band: {words}\n" in text


def test_an_ill_posed_gain_is_called_so_and_has_no_count_where_the_polynomial_vanishes() -> None:
    text = sections(answered([2], [1], gain="-1/2"))["COMMISSIONED GAIN"]
    assert text.startswith(
        "K = -0.5, exactly -1/2, at an edge: ill-posed; no count: the closed-loop polynomial vanishes\n"
    )


def test_evidence_is_mentioned_where_it_was_asked_for() -> None:
    assert "EVIDENCE" not in sections(HOIST)
    text = sections(answered([1], [1, 3, 3, 1], evidence=True))["EVIDENCE"]
    assert text == "given for 2 edges and 3 bands; --json shows it in full\n\n"


def test_piped_the_table_is_plain_and_bounded_in_width() -> None:
    text = table_text(answered(["1/3"] * 7, ["2/7"] * 12, gain="123456789/987654321", name="a" * 200))
    assert "\x1b" not in text
    assert max(map(len, text.splitlines())) <= PIPED_WIDTH
    assert all(line == line.rstrip() for line in text.splitlines())


def test_in_a_terminal_the_table_takes_its_width_and_colours_what_the_words_say(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setenv("FORCE_COLOR", "1")
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.setenv("COLUMNS", "60")
    coloured = table_text(HOIST)
    plain = re.sub(r"\x1b\[[0-9;]*m", "", coloured)
    assert coloured != plain
    assert max(map(len, plain.splitlines())) <= 60
    assert all(verdict in plain for verdict in ("stable", "unstable"))


def test_a_name_is_shown_as_it_is_but_obeys_nothing() -> None:
    assert table_text(HOIST | {"loop": {"name": "[red]\x1b[2J:warning:"}}).startswith(
        "[red]\\x1b[2J:warning:\n"
    )
