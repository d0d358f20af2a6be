"""Faults between fields."""

from collections.abc import Mapping
from typing import Any

import pytest

from schemas.question import read_question
from schemas.reader import RepeatedKeys
from tests.wire import LOOP, refusal


@pytest.mark.parametrize(
    ("document", "pointers"),
    [
        pytest.param({}, ["/numerator", "/denominator"], id="neither form"),
        pytest.param({"numerator": [1]}, ["/denominator"], id="numerator alone"),
        pytest.param({"denominator": [1]}, ["/numerator"], id="denominator alone"),
        pytest.param(
            {"numerator": [1], "denominator": [1], "blocks": [{"factor": 1}]},
            ["/numerator", "/denominator"],
            id="both forms",
        ),
        pytest.param({"numerator": [1], "blocks": [{"factor": 1}]}, ["/numerator"], id="one and a half"),
    ],
)
def test_a_loop_stands_in_exactly_one_form(document: Mapping[str, Any], pointers: list[str]) -> None:
    assert list(refusal(document)) == pointers


@pytest.mark.parametrize("field", ["numerator", "denominator"])
def test_a_degree_is_taken_to_its_limit_without_leading_zeros(field: str) -> None:
    assert read_question({**LOOP, field: [0] * 9 + [1] * 61}).blocks
    fault = refusal({**LOOP, field: [1] * 62})[f"/{field}"]
    assert (fault.limit, fault.allowed, fault.received) == ("degree", 60, 61)
    assert field in fault.detail


@pytest.mark.parametrize(
    ("within", "one_more"),
    [
        pytest.param({"poles": [[0, 1]] * 15}, {"poles": [1]}, id="poles"),
        pytest.param({"zeros": [1] * 30}, {"zeros": [1]}, id="zeros"),
        pytest.param(
            {"numerator": [1], "denominator": [1] * 31},
            {"numerator": [1], "denominator": [0, 1, 1]},
            id="polynomials",
        ),
    ],
)
def test_degrees_of_blocks_add_up(within: Mapping[str, Any], one_more: Mapping[str, Any]) -> None:
    assert len(read_question({"blocks": [within, within]}).blocks) == 2
    fault = refusal({"blocks": [within, within, one_more]})["/blocks"]
    assert (fault.limit, fault.allowed, fault.received) == ("degree", 60, 61)


@pytest.mark.parametrize("gain", ["-1", "0", "7/3"], ids=["lowest", "inside", "highest"])
def test_a_gain_in_its_window_is_taken(gain: str) -> None:
    assert read_question({**LOOP, "gain": gain, "gain_window": [-1, "7/3"]}).gain is not None


@pytest.mark.parametrize("gain", ["-1.0000001", "2.3333334"], ids=["below", "above"])
def test_a_gain_outside_its_window_is_refused(gain: str) -> None:
    assert list(refusal({**LOOP, "gain": gain, "gain_window": [-1, "7/3"]})) == ["/gain"]


@pytest.mark.parametrize(
    ("window", "pointer", "detail"),
    [
        pytest.param([2, 1], "", "must be below the second", id="reversed"),
        pytest.param([1, "3/3"], "", "must be below the second", id="without width"),
        pytest.param([1], "", "[lowest, highest]", id="one end"),
        pytest.param([1, 2, 3], "", "[lowest, highest]", id="three ends"),
        pytest.param("1,2", "", "[lowest, highest]", id="a text"),
        pytest.param([True, 2], "/0", "boolean", id="a boolean end"),
        pytest.param([1, None], "/1", "Not a number", id="an open end"),
    ],
)
def test_a_window_is_two_numbers_in_order(window: object, pointer: str, detail: str) -> None:
    faults = refusal({**LOOP, "gain_window": window})
    assert list(faults) == [f"/gain_window{pointer}"]
    assert detail in faults[f"/gain_window{pointer}"].detail


@pytest.mark.parametrize(
    ("field", "value"),
    [
        ("sample_time_s", "1/8"),
        ("dead_time_s", "0.01"),
        ("root_paths", {"points": 50}),
        ("step_response", {"points": 50}),
        ("require", {}),
        (
            "require",
            {
                "stable": True,
                "gain_margin_db_at_least": 6,
                "phase_margin_deg_at_least": 30,
                "delay_margin_s_at_least": "1/100",
                "delay_margin_periods_at_least": 2,
                "modulus_margin_at_least": "0.5",
                "sensitivity_peak_at_most": 2,
                "complementary_peak_at_most": "1.5",
                "stable_over": [1, 1],
            },
        ),
    ],
)
def test_what_this_version_does_not_offer_is_refused_as_such(field: str, value: object) -> None:
    faults = refusal({**LOOP, field: value})
    assert list(faults) == [f"/{field}"]
    assert "Not offered by this version" in faults[f"/{field}"].detail


@pytest.mark.parametrize(
    ("field", "value"),
    [
        ("sample_time_s", None),
        ("dead_time_s", 0),
        ("dead_time_s", "0/3"),
        ("root_paths", False),
        ("step_response", False),
        ("require", None),
    ],
)
def test_the_one_value_offered_is_taken(field: str, value: object) -> None:
    assert read_question({**LOOP, field: value}) == read_question(LOOP)


@pytest.mark.parametrize(
    ("field", "value", "pointer", "detail"),
    [
        pytest.param("sample_time_s", 0, "", "above zero", id="no period"),
        pytest.param("sample_time_s", "-1", "", "above zero", id="negative period"),
        pytest.param("sample_time_s", "1/0", "", "over zero", id="period over zero"),
        pytest.param("dead_time_s", "-1", "", "not be below zero", id="negative dead time"),
        pytest.param("dead_time_s", None, "", "null is no number", id="null dead time"),
        pytest.param("require", {"stable": False}, "/stable", "only be true", id="require instability"),
        pytest.param("require", {"stable": 1}, "/stable", "true or false", id="stable a number"),
        pytest.param("require", {"stable_over": [2, 1]}, "/stable_over", "at most", id="reversed interval"),
        pytest.param("require", {"gain_db": 1}, "/gain_db", "Unknown key.", id="unknown requirement"),
        pytest.param(
            "require",
            {"gain_margin_db_at_least": "6dB"},
            "/gain_margin_db_at_least",
            "Not a number",
            id="unit",
        ),
    ],
)
def test_the_form_of_what_is_not_offered_is_checked_all_the_same(
    field: str, value: object, pointer: str, detail: str
) -> None:
    faults = refusal({**LOOP, field: value})
    assert list(faults) == [f"/{field}{pointer}"]
    assert detail in faults[f"/{field}{pointer}"].detail


def test_a_repeated_key_is_refused() -> None:
    faults = refusal(RepeatedKeys([*LOOP.items(), ("gain", 1), ("gain", 1), ("numerator", [1])]))
    assert list(faults) == ["/gain", "/numerator"]
    assert all("more than once" in fault.detail for fault in faults.values())
