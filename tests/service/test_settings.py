"""The settings."""

import pytest

from schemas.limits import QuestionLimits
from service.settings import SETTINGS, BadSettings, Limits, Setting, read_limits

EACH = [pytest.param(each, id=each.name) for each in SETTINGS]


def test_without_settings_the_defaults_hold() -> None:
    assert read_limits({}) == Limits()


def test_every_limit_can_be_set() -> None:
    assert {each.name for each in SETTINGS} == set(Limits().values())


@pytest.mark.parametrize("setting", EACH)
def test_a_variable_sets_its_limit_alone(setting: Setting) -> None:
    values = read_limits({setting.variable: str(setting.highest)}).values()
    assert values == {**Limits().values(), setting.name: setting.highest}


@pytest.mark.parametrize("setting", EACH)
def test_a_limit_is_set_within_its_bounds(setting: Setting) -> None:
    assert read_limits({setting.variable: str(setting.lowest)}).values()[setting.name] == setting.lowest
    for value in (setting.lowest - 1, setting.highest + 1):
        with pytest.raises(BadSettings, match=f"{setting.variable} is '{value}', but must be a whole number"):
            read_limits({setting.variable: str(value)})


@pytest.mark.parametrize("text", ["", " 60", "6e1", "60.0", "+60", "0x3c", "sixty", "٣", "9" * 5000])
def test_a_setting_is_a_whole_number(text: str) -> None:
    with pytest.raises(BadSettings, match="HALFTURN_DEGREE"):
        read_limits({"HALFTURN_DEGREE": text})


def test_all_that_is_wrong_is_told_at_once() -> None:
    with pytest.raises(BadSettings, match="HALFTURN_DEGREE") as refused:
        read_limits({"HALFTURN_DEGREE": "x", "HALFTURN_BLOCKS": "0", "HALFTURN_DIGITS": "5"})
    assert [line.split(" is ")[0] for line in str(refused.value).splitlines()] == [
        "HALFTURN_DEGREE",
        "HALFTURN_BLOCKS",
    ]


def test_variables_of_others_are_let_be() -> None:
    assert read_limits({"HALFTURN_PORT": "tcp://10.0.0.1:80", "DEGREE": "2"}) == Limits()


def test_limits_of_the_question_are_gathered() -> None:
    given = read_limits({"HALFTURN_DEGREE": "7", "HALFTURN_EXPONENT": "0"}).question
    assert given == QuestionLimits(degree=7, exponent=0)
