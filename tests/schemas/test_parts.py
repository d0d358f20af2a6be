"""The fields that hold no exact numbers: each takes one form."""

import pytest

from schemas.question import read_question
from schemas.reader import NumberText
from tests.wire import LOOP, refusal


@pytest.mark.parametrize(
    ("field", "value", "detail"),
    [
        pytest.param("name", NumberText("5"), "Expected a text or null.", id="name a number"),
        pytest.param("name", ["a"], "Expected a text or null.", id="name a list"),
        pytest.param("name", "a\ud800b", "half of a surrogate pair", id="name with a lone surrogate"),
        pytest.param("feedback", "Negative", 'Expected "negative" or "positive".', id="feedback misspelt"),
        pytest.param("feedback", None, 'Expected "negative" or "positive".', id="feedback null"),
        pytest.param("feedback", ["negative"], 'Expected "negative" or "positive".', id="feedback a list"),
        pytest.param("detour", "up", 'Expected "right" or "left".', id="detour unknown"),
        pytest.param("detour", True, 'Expected "right" or "left".', id="detour a boolean"),
        pytest.param("evidence", "true", "Expected true or false.", id="evidence a text"),
        pytest.param("evidence", NumberText("1"), "Expected true or false.", id="evidence a number"),
        pytest.param("evidence", None, "Expected true or false.", id="evidence null"),
        pytest.param("curve", True, 'Expected {"points": n} or false.', id="curve true"),
        pytest.param("curve", None, 'Expected {"points": n} or false.', id="curve null"),
        pytest.param("curve", NumberText("0"), 'Expected {"points": n} or false.', id="curve zero"),
        pytest.param("root_paths", None, 'Expected {"points": n} or false.', id="root_paths null"),
        pytest.param("step_response", [], 'Expected {"points": n} or false.', id="step_response a list"),
        pytest.param("require", [], "Expected an object.", id="require a list"),
        pytest.param("numerator", "1,2", "Expected a list.", id="numerator a text"),
        pytest.param("numerator", {}, "Expected a list.", id="numerator an object"),
        pytest.param("numerator", None, "Expected a list.", id="numerator null"),
        pytest.param("numerator", [], "An empty list.", id="numerator empty"),
        pytest.param("denominator", [], "An empty list.", id="denominator empty"),
    ],
)
def test_a_field_refuses_other_forms(field: str, value: object, detail: str) -> None:
    faults = refusal({**LOOP, field: value})
    assert list(faults) == [f"/{field}"]
    assert detail in faults[f"/{field}"].detail


@pytest.mark.parametrize(
    ("curve", "pointer", "detail"),
    [
        pytest.param({}, "/curve/points", "from 10 to 5000", id="no points"),
        pytest.param({"points": NumberText("9")}, "/curve/points", "from 10 to 5000", id="too few"),
        pytest.param({"points": NumberText("-10")}, "/curve/points", "from 10 to 5000", id="negative"),
        pytest.param({"points": NumberText("10.5")}, "/curve/points", "from 10 to 5000", id="no integer"),
        pytest.param({"points": "300"}, "/curve/points", "from 10 to 5000", id="a text"),
        pytest.param({"points": True}, "/curve/points", "from 10 to 5000", id="a boolean"),
        pytest.param({"points": None}, "/curve/points", "from 10 to 5000", id="null"),
        pytest.param({"points": 300, "every": 1}, "/curve/every", "Unknown key.", id="unknown key"),
    ],
)
def test_points_are_an_integer_within_bounds(curve: object, pointer: str, detail: str) -> None:
    faults = refusal({**LOOP, "curve": curve})
    assert list(faults) == [pointer]
    assert detail in faults[pointer].detail


def test_points_beyond_their_limit_name_it() -> None:
    fault = refusal({**LOOP, "curve": {"points": NumberText("5001")}})["/curve/points"]
    assert (fault.limit, fault.allowed, fault.received) == ("points", 5000, 5001)


@pytest.mark.parametrize("points", ["10", "5000", "3e2", "300.0"])
def test_points_may_be_written_as_any_whole_json_number(points: str) -> None:
    assert read_question({**LOOP, "curve": {"points": NumberText(points)}}).curve == float(points)


def test_a_name_is_taken_to_its_limit() -> None:
    assert read_question({**LOOP, "name": "é" * 200}).name == "é" * 200
    fault = refusal({**LOOP, "name": "é" * 201})["/name"]
    assert (fault.limit, fault.allowed, fault.received) == ("name_length", 200, 201)


@pytest.mark.parametrize("field", ["numerator", "denominator"])
def test_a_list_is_taken_to_its_limit(field: str) -> None:
    assert read_question({**LOOP, field: [0] * 255 + [1]}).blocks
    fault = refusal({**LOOP, field: [0] * 256 + [1]})[f"/{field}"]
    assert (fault.limit, fault.allowed, fault.received) == ("list_entries", 256, 257)
