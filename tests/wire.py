"""Question documents for tests of the wire: valid ones, and ones with something wrong in them."""

import json
from collections.abc import Callable, Mapping
from typing import Any, Final

import pytest
from hypothesis import strategies as st

from schemas.limits import QuestionLimits
from schemas.problem import Fault
from schemas.question import InvalidQuestion, read_question

HOIST: Mapping[str, Any] = {
    "name": "hoist drive, speed loop",
    "numerator": ["5/2", 10],
    "denominator": [1, "1/3", 4, 0],
    "gain": "0.1",
    "curve": False,
}
"""The question of the wire contract's own example."""

LOOP: Mapping[str, Any] = {"numerator": [1], "denominator": [1, 1]}
"""The fields of the least question."""


def refusal(document: object, limits: QuestionLimits | None = None) -> dict[str, Fault]:
    """Read a document that is no question; gives its faults by their pointers, one fault a place."""
    with pytest.raises(InvalidQuestion, match=":") as refused:
        read_question(document, limits or QuestionLimits())
    by_pointer = {fault.pointer: fault for fault in refused.value.faults}
    assert len(by_pointer) == len(refused.value.faults)
    return by_pointer


NO: Final = st.sampled_from([False])


def small_numbers() -> st.SearchStrategy[int | str]:
    """Small exact numbers, as JSON integers, decimals and fractions."""
    return st.one_of(
        st.integers(-9, 9),
        st.decimals(-9, 9, places=2).map(lambda value: f"{value:f}"),
        st.builds(lambda over, below: f"{over}/{below}", st.integers(-9, 9), st.integers(1, 9)),
    )


def coefficients(most: int = 5) -> st.SearchStrategy[list[Any]]:
    """Coefficients whose first is one."""
    return st.lists(small_numbers(), max_size=most - 1).map(lambda rest: [1, *rest])


def blocks() -> st.SearchStrategy[dict[str, Any]]:
    """Blocks in both of their forms."""
    pair = st.tuples(small_numbers(), st.integers(1, 9)).map(list)
    roots = st.lists(st.one_of(small_numbers(), pair), max_size=2)
    return st.one_of(
        st.fixed_dictionaries({"numerator": coefficients(3), "denominator": coefficients(3)}),
        st.fixed_dictionaries({"poles": roots}, optional={"zeros": roots, "factor": st.integers(1, 9)}),
    )


def questions() -> st.SearchStrategy[dict[str, Any]]:
    """Valid question documents, of polynomials or of blocks, with any of their fields."""
    options: dict[str, st.SearchStrategy[Any]] = {
        "name": st.none() | st.text(st.characters(exclude_categories=["Cs"]), max_size=20),
        "gain": st.none() | small_numbers(),
        "feedback": st.sampled_from(["negative", "positive"]),
        "detour": st.sampled_from(["right", "left"]),
        "gain_window": st.none() | st.tuples(st.integers(-99, -10), st.integers(10, 99)).map(list),
        "curve": NO | st.integers(10, 5000).map(lambda points: {"points": points}),
        "evidence": st.booleans(),
        "sample_time_s": st.none(),
        "dead_time_s": st.just(0),
        "root_paths": NO,
        "step_response": NO,
        "require": st.none(),
    }
    polynomials = {"numerator": coefficients(), "denominator": coefficients()}
    in_series = {"blocks": st.lists(blocks(), min_size=1, max_size=3)}
    return st.one_of(
        st.fixed_dictionaries(polynomials, optional=options),
        st.fixed_dictionaries(in_series, optional=options),
    )


JUNK: tuple[Any, ...] = (
    None,
    True,
    False,
    0,
    -1,
    0.5,
    float("nan"),
    float("-inf"),
    "",
    "1/0",
    "1e999999999",
    "\ud800",
    "٣",
    [],
    {},
    [[]],
    [None],
    [0, 0],
    {"points": 10**9},
    {"numerator": [1]},
    "0" * 130,
)
"""Values that are wrong at most places of a question, and right at some."""


def _replace(node: Any, draw: Callable[[st.SearchStrategy[Any]], Any]) -> Any:
    """Walk down into ``node`` a random way and replace, drop or add something there."""
    if isinstance(node, dict) and node and draw(st.booleans()):
        key = draw(st.sampled_from(sorted(node)))
        return {**node, key: _replace(node[key], draw)}
    if isinstance(node, list) and node and draw(st.booleans()):
        index = draw(st.integers(0, len(node) - 1))
        return [*node[:index], _replace(node[index], draw), *node[index + 1 :]]
    if isinstance(node, dict) and draw(st.booleans()):
        return {**node, draw(st.sampled_from(["zeros", "gian", "a/b~c", "_schema", ""])): 1}
    if isinstance(node, dict) and node and draw(st.booleans()):
        dropped = draw(st.sampled_from(sorted(node)))
        return {key: value for key, value in node.items() if key != dropped}
    return draw(st.sampled_from(JUNK))


@st.composite
def faulty_questions(draw: Callable[[st.SearchStrategy[Any]], Any]) -> Any:
    """Question documents in which one to three things were replaced, dropped or added."""
    document = draw(questions())
    for _ in range(draw(st.integers(1, 3))):
        document = _replace(document, draw)
    return document


def body(document: Any) -> bytes:
    """Write ``document`` as JSON bytes; halves of surrogate pairs as escapes, NaN as the token it is not."""
    return json.dumps(document).encode("ascii")
