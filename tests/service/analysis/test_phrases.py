"""The words for numbers, gains and ways of crossing."""

import pytest

from service.analysis.answer import Edge, Frequency
from service.analysis.phrases import counted, edge_text, gain_text, listed, manner

ORIGIN = Frequency(0.0, 0.0, "0")
SLOW = Frequency(1.0, 0.15915494309189535, "1")
FAST = Frequency(20.5, 3.26267633338385, "41/2")
INFINITE = Frequency(None, None, None)


@pytest.mark.parametrize(
    ("number", "text"),
    [(0, "no poles"), (1, "one pole"), (2, "two poles"), (12, "twelve poles"), (13, "13 poles")],
)
def test_small_numbers_are_words_and_one_alone_is_singular(number: int, text: str) -> None:
    assert counted(number, "pole") == text


@pytest.mark.parametrize(
    ("value", "exact", "text"),
    [
        pytest.param(8.0, "8", "8", id="a whole number"),
        pytest.param(-123456.0, "-123456", "-123456", id="a longer one keeps its digits"),
        pytest.param(8 / 55, "8/55", "8/55 (0.1455)", id="a fraction"),
        pytest.param(-0.5, "-1/2", "-1/2 (-0.5)", id="a negative one"),
        pytest.param(2**0.5, "sqrt(2)", "sqrt(2) (1.414)", id="a root"),
        pytest.param(1.9999999980000001, "2000000000/1000000001", "2", id="a long fraction"),
        pytest.param(0.4617234, None, "0.4617", id="no exact form"),
        pytest.param(1e-12, "1/1000000000000", "1e-12", id="tiny"),
    ],
)
def test_a_gain_is_written_exactly_where_that_is_short(value: float, exact: str | None, text: str) -> None:
    assert gain_text(value, exact) == text


def test_an_edge_is_written_as_its_gain() -> None:
    edge = Edge(8 / 55, "0.145454545454545454545454545455", "8/55", ("crossing",), False, (SLOW,))  # noqa: FBT003
    assert edge_text(edge) == "8/55 (0.1455)"


@pytest.mark.parametrize(
    ("parts", "text"), [(["a"], "a"), (["a", "b"], "a and b"), (["a", "b", "c"], "a, b and c")]
)
def test_parts_are_joined_as_in_speech(parts: list[str], text: str) -> None:
    assert listed(parts) == text


@pytest.mark.parametrize(
    ("frequencies", "text"),
    [
        pytest.param([ORIGIN], "running away without oscillation (frequency zero)", id="origin"),
        pytest.param([SLOW], "oscillating at 1 rad/s (0.1592 Hz)", id="pair"),
        pytest.param(
            [SLOW, FAST], "oscillating at 1 rad/s (0.1592 Hz) and 20.5 rad/s (3.263 Hz)", id="two pairs"
        ),
        pytest.param(
            [INFINITE], "by way of infinity, where the closed loop changes its order", id="infinity"
        ),
        pytest.param(
            [ORIGIN, SLOW, INFINITE],
            "running away without oscillation (frequency zero), oscillating at 1 rad/s (0.1592 Hz) and by "
            "way of infinity, where the closed loop changes its order",
            id="all",
        ),
    ],
)
def test_the_manner_of_crossing_follows_the_frequencies(frequencies: list[Frequency], text: str) -> None:
    assert manner(frequencies) == text
