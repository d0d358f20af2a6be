"""The recheck: it lets every true answer pass, and none in which a single value was changed."""

import ast
import importlib.util
import json
import math
import subprocess
import sys
from collections.abc import Iterator
from fractions import Fraction
from pathlib import Path
from types import ModuleType
from typing import Any

import mpmath
import pytest
from hypothesis import given, settings

from schemas.reader import read_json
from service.exchange import answer_document, json_bytes
from tests.oracle import Loop
from tests.strategies import any_loops, detours, feedbacks
from tests.wire import body, questions

SCRIPT = Path(__file__).parents[2] / "examples" / "recheck.py"
HOLDS, FAILS, BAD_INPUT = 0, 1, 2

RECHECKED = ("loop", "open_loop", "edges", "bands", "commissioned", "evidence")
LEFT = {"closed_loop_poles", "nearest_stable", "margins"}
"""The parts of ``commissioned`` that the recheck says it leaves."""

CASES: dict[str, dict[str, Any]] = {
    "the contract's own": {"numerator": [2.5, 10], "denominator": [1, "1/3", 4, 0], "gain": 0.1},
    "gain in service on an edge": {"numerator": [1], "denominator": [1, 3, 2, 0], "gain": 6},
    "positive feedback": {"numerator": [1], "denominator": [1, 3, 2, 0], "gain": -5, "feedback": "positive"},
    "double integrator": {"numerator": [1], "denominator": [1, 0, 0], "gain": -2},
    "quadruple integrator, detour on the left": {
        "numerator": [1],
        "denominator": [1, 0, 0, 0, 0],
        "detour": "left",
    },
    "axis pair and origin, detour on the left": {
        "numerator": [1],
        "denominator": [1, 0, 1, 0],
        "detour": "left",
    },
    "triple axis pair": {"numerator": [1, 5, 10, 10, 5, 1], "denominator": [1, 0, 12, 0, 48, 0, 64]},
    "irrational axis poles": {"numerator": [1, 1], "denominator": [1, 0, 5, 0, 5]},
    "axis poles 1e-6 apart": {
        "numerator": [1, 0],
        "denominator": [1, 0, "2.000002000001", 0, "1.000002000001"],
    },
    "axis zeros": {"numerator": [1, 0, 1], "denominator": [1, 3, 2, 0]},
    "zero at the origin": {"numerator": [1, 0, 0], "denominator": [1, 3, 3, 1]},
    "irrational gains": {"numerator": [1, 2], "denominator": [1, 1, 5, 4, 2]},
    "gain the root of a fraction": {"numerator": [1, 0], "denominator": [-1, 1, 0, 0, 2]},
    "rational gain at irrational squares": {"numerator": [1], "denominator": [1, 0, 3, 0, 1, 1]},
    "two frequencies at one rational gain": {"numerator": [1, 2], "denominator": [1, 1, 5, 5, 3, 2]},
    "touching, stable on both sides": {"numerator": [1, 1, 1], "denominator": [1, 2, 1, 1, 0]},
    "touching, unstable on both sides": {"numerator": [1, 0], "denominator": [1, 2, 2, 1, 1], "gain": 1},
    "unstable gap 2e-9 wide": {"numerator": [1, 1, 1], "denominator": [1, 2, 1, "1.000000001", 0]},
    "damping 1e-9": {"numerator": [1, 1], "denominator": [1, "2e-9", 1], "gain": -1e-9},
    "hidden unstable mode": {"numerator": [1, -1], "denominator": [1, 1, -2]},
    "hidden modes of several multiplicities": {
        "blocks": [
            {"zeros": [[0, 3], [1, 2]], "poles": [0, [0, 3], [0, 5], -1, 2, 2], "factor": "1/3"},
            {"zeros": [2, 2], "poles": [-20, [1, 2]]},
            {"numerator": [0, 1], "denominator": [0, 2, 1]},
        ],
        "gain": 1.5,
    },
    "hidden integrator beside a seen one": {"numerator": [1, 3, 0], "denominator": [1, 3, 2, 0, 0]},
    "lossless": {"numerator": [1, 0, 4], "denominator": [1, 0, 9, 0, 0], "gain": 1},
    "lossless with a collision": {"numerator": [1], "denominator": [1, 0, 4, 0, 0], "gain": 4},
    "lossless with a hidden axis mode": {"numerator": [1, 0, 9], "denominator": [1, 0, 13, 0, 36]},
    "odd": {"numerator": [1, 0], "denominator": [1, 0, 1]},
    "biproper": {"numerator": [1, -2], "denominator": [1, -1], "gain": -1},
    "degree drops by three": {"numerator": [1, 0, 0, 9], "denominator": [1, 0, 0, 1]},
    "origin and infinity at one gain": {"numerator": [1, -2, 2], "denominator": [1, 2, 2]},
    "improper": {"numerator": [1, 0, 0, 0, 0], "denominator": [1, 1], "gain": 0},
    "improper with an integrator": {"numerator": [1, 2, 3], "denominator": [1, 0], "detour": "left"},
    "constant": {"numerator": [2], "denominator": [1], "gain": "-1/2"},
    "everything cancels": {"numerator": [1, 1], "denominator": [1, 1], "gain": -1},
    "no numerator": {"numerator": [0, 0], "denominator": [0, 1, 0, 1, 0], "detour": "left", "gain": 3},
    "negative leading coefficient": {"numerator": [1], "denominator": [-1, 1]},
    "two frequencies at one irrational gain": {
        "numerator": [1, 0, 1, 0, 0, 0],
        "denominator": [-1, 1, -4, 3, -4, 3, -4, 1, -1],
    },
    "24 decades": {"numerator": ["1e-12"], "denominator": ["1e12", 3, "1e-12", 0]},
    "window round an edge": {
        "numerator": [1],
        "denominator": [1, 3, 2, 0],
        "gain": 1,
        "gain_window": ["1/2", 7],
    },
    "window from edge to edge": {"numerator": [1], "denominator": [1, 3, 2, 0], "gain_window": [0, 6]},
    "window without edges": {"numerator": [1], "denominator": [1, 3, 2, 0], "gain": 2, "gain_window": [1, 3]},
    "window's end beside an irrational edge": {
        "numerator": [1, 0],
        "denominator": [-1, 1, 0, 0, 2],
        "gain_window": [0, "1.4142135623730950488016887242"],
    },
}
"""Questions of all degenerate kinds, by what makes them so."""

TAMPERED = [
    "the contract's own",
    "gain in service on an edge",
    "irrational axis poles",
    "gain the root of a fraction",
    "rational gain at irrational squares",
    "two frequencies at one rational gain",
    "hidden modes of several multiplicities",
    "lossless with a collision",
    "origin and infinity at one gain",
    "improper",
    "constant",
    "no numerator",
    "window from edge to edge",
]


@pytest.fixture(scope="module")
def recheck() -> ModuleType:
    spec = importlib.util.spec_from_file_location("recheck", SCRIPT)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def asked(fields: dict[str, Any]) -> bytes:
    return body({**fields, "evidence": True})


def answered(question: bytes) -> dict[str, Any]:
    document: dict[str, Any] = json.loads(json_bytes(answer_document(read_json(question))))
    return document


class Desk:
    """Where question and answer are laid before the recheck, as files."""

    def __init__(self, recheck: ModuleType, folder: Path) -> None:
        self.recheck, self.question, self.answer = recheck, folder / "question.json", folder / "answer.json"

    def lay(self, question: bytes, answer: object) -> None:
        self.question.write_bytes(question)
        self.answer.write_bytes(answer if isinstance(answer, bytes) else json.dumps(answer).encode())

    def code(self, question: bytes, answer: object) -> int:
        self.lay(question, answer)
        found: int = self.recheck.main([str(self.question), str(self.answer)])
        return found

    def run(self) -> subprocess.CompletedProcess[str]:
        """Run the program on what lies there as a stranger would: isolated, from another folder, bare."""
        command = [sys.executable, "-I", "-S", str(SCRIPT), str(self.question), str(self.answer)]
        return subprocess.run(  # noqa: S603 - our own program
            command, capture_output=True, text=True, check=False, cwd=self.question.parent
        )


@pytest.fixture
def desk(recheck: ModuleType, tmp_path: Path) -> Desk:
    return Desk(recheck, tmp_path)


@pytest.mark.parametrize("name", CASES)
def test_a_true_answer_holds(desk: Desk, capsys: pytest.CaptureFixture[str], name: str) -> None:
    question = asked(CASES[name])
    assert desk.code(question, answered(question)) == HOLDS, capsys.readouterr().out


@settings(max_examples=30)
@given(any_loops, feedbacks, detours)
def test_the_answer_to_any_nasty_loop_holds(
    recheck: ModuleType, tmp_path_factory: pytest.TempPathFactory, loop: Loop, feedback: str, detour: str
) -> None:
    desk = Desk(recheck, tmp_path_factory.mktemp("recheck"))
    numerator, denominator = ([str(c) for c in p] or ["0"] for p in loop)
    fields = {"numerator": numerator, "denominator": denominator, "feedback": feedback, "detour": detour}
    question = asked({**fields, "gain": 1})
    assert desk.code(question, answered(question)) == HOLDS


@settings(max_examples=25)
@given(questions())
def test_the_answer_to_a_question_of_any_form_holds(
    recheck: ModuleType, tmp_path_factory: pytest.TempPathFactory, fields: dict[str, Any]
) -> None:
    desk = Desk(recheck, tmp_path_factory.mktemp("recheck"))
    question = asked(fields)
    assert desk.code(question, answered(question)) == HOLDS


def changed_values(value: Any) -> Iterator[Any]:
    """Give what may stand in a value's place: its neighbours, another digit, null."""
    yield 0 if value is None else None
    if isinstance(value, bool):
        yield from (not value, int(value))
    elif isinstance(value, int):
        yield from (value + 1, value - 1)
    elif isinstance(value, float):
        yield from (math.nextafter(value, math.inf), math.nextafter(value, -math.inf))
    elif isinstance(value, str):
        places = [i for i, character in enumerate(value) if character in "0123456789"]
        for i in {*places[:1], *places[len(places) // 2 :][:1], *places[-1:]}:
            yield f"{value[:i]}{(int(value[i]) + 1) % 10}{value[i + 1 :]}"
        yield from () if places else ("crossing", "origin", "stable", "unstable")


def tampered(node: Any, where: str = "") -> Iterator[tuple[str, Any]]:
    """Give every document that differs from ``node`` in one value, one entry of a list, or one field."""
    if isinstance(node, dict):
        for key in node.keys() - LEFT:
            yield f"{where}/{key} is gone", {k: v for k, v in node.items() if k != key}
            for name, part in tampered(node[key], f"{where}/{key}"):
                yield name, {**node, key: part}
    elif isinstance(node, list):
        for i, each in enumerate(node):
            yield f"{where}/{i} is gone", [*node[:i], *node[i + 1 :]]
            yield f"{where}/{i} stands twice", [*node[:i], each, *node[i:]]
            for name, part in tampered(each, f"{where}/{i}"):
                yield name, [*node[:i], part, *node[i + 1 :]]
    else:
        for other in changed_values(node):
            if (type(other), other) != (type(node), node):
                yield f"{where}: {node!r} became {other!r}", other


@pytest.mark.parametrize("name", TAMPERED)
def test_no_changed_value_passes(recheck: ModuleType, desk: Desk, name: str) -> None:
    """What is due follows from question and evidence: it is derived anew only where the evidence changed."""
    question = asked(CASES[name])
    answer = answered(question)
    loop = recheck.Loop(json.loads(question, parse_int=str, parse_float=str))
    due = recheck.due(loop, answer["evidence"]["edges"])

    def passes(document: dict[str, Any]) -> bool:
        if document["evidence"] != answer["evidence"]:
            return desk.code(question, document) != FAILS
        try:
            return not any(recheck.differences("", json.loads(body(document), parse_int=float), due))
        except KeyError:
            return False

    assert passes(answer)
    changes = [
        (change, {**answer, part: other})
        for part in RECHECKED
        for change, other in tampered(answer[part], f"/{part}")
    ]
    assert len(changes) > 50
    assert [change for change, document in changes if passes(document)] == []


def test_no_other_polynomial_of_an_irrational_gain_passes(desk: Desk) -> None:
    """Here s + 1/s was put for s, so that the gain sqrt(2) is reached at two frequencies: K^2 - 2 says so."""
    question = asked(CASES["two frequencies at one irrational gain"])
    answer = answered(question)
    evidence = answer["evidence"]["edges"][0]
    assert evidence["gain_polynomial"] == ["1", "0", "-2"]
    changes = list(tampered(evidence["gain_polynomial"]))
    assert len(changes) > 10
    for change, polynomial in [*changes, ("none", None), ("twice it", ["2", "0", "-4"])]:
        evidence["gain_polynomial"] = polynomial
        assert desk.code(question, answer) == FAILS, change


def parsed(pair: list[str]) -> tuple[Fraction, Fraction]:
    return Fraction(pair[0]), Fraction(pair[1])


def texts(low: Fraction, high: Fraction) -> list[str]:
    return [str(low), str(high)]


def an_interval(kind: str) -> tuple[Any, Any, Any, Any]:
    """Give a question, its answer, and where one irrational interval of the evidence stands in it."""
    question = asked(CASES["irrational gains"])
    answer = answered(question)
    evidence = answer["evidence"]["edges"][-1]
    holder, key = (evidence, kind) if kind == "gain_between" else (evidence[kind], 0)
    return question, answer, holder, key


@pytest.mark.parametrize("share", [Fraction(-1), Fraction(1), Fraction(1, 2)], ids=["down", "up", "by half"])
@pytest.mark.parametrize("kind", ["gain_between", "omega_squared_between"])
def test_no_shifted_interval_passes(desk: Desk, kind: str, share: Fraction) -> None:
    question, answer, holder, key = an_interval(kind)
    low, high = parsed(holder[key])
    assert low < high
    holder[key] = texts(low + (high - low) * share, high + (high - low) * share)
    assert desk.code(question, answer) == FAILS


@pytest.mark.parametrize("times", [2, 3, 1 << 70], ids=["twice", "three times", "70 bits"])
@pytest.mark.parametrize("kind", ["gain_between", "omega_squared_between"])
def test_no_wider_interval_passes(desk: Desk, kind: str, times: int) -> None:
    question, answer, holder, key = an_interval(kind)
    low, high = parsed(holder[key])
    holder[key] = texts(low, low + (high - low) * times)
    assert desk.code(question, answer) == FAILS


def test_evidence_finer_than_it_need_be_passes(desk: Desk) -> None:
    question = asked(CASES["gain the root of a fraction"])
    answer = answered(question)
    evidence = answer["evidence"]["edges"][-1]
    low, high = parsed(evidence["gain_between"])
    assert (low, high) == (Fraction(math.isqrt(2 << 128), 1 << 64), low + Fraction(1, 1 << 64))
    low = Fraction(math.isqrt(2 << 256), 1 << 128)
    evidence["gain_between"] = texts(low, low + Fraction(1, 1 << 128))
    assert desk.code(question, answer) == HOLDS


def test_an_answer_to_another_question_does_not_pass(desk: Desk) -> None:
    one, other = asked(CASES["double integrator"]), asked(CASES["odd"])
    assert desk.code(one, answered(other)) == FAILS


def test_a_consistent_lie_does_not_pass(desk: Desk) -> None:
    """An edge left out with all that belongs to it: the rest fits together, the loop does not."""
    question = asked(CASES["unstable gap 2e-9 wide"])
    answer = answered(question)
    edges = [edge["exact"] for edge in answer["edges"]]
    gap = edges.index("1000000001/1000000000")
    for part in (answer["edges"], answer["evidence"]["edges"]):
        del part[gap - 1 : gap + 1]
    for part in (answer["bands"], answer["evidence"]["bands"]):
        del part[gap : gap + 2]
    answer["bands"][gap - 1]["upper"] = None
    assert desk.code(question, answer) == FAILS


def test_numbers_that_another_program_wrote_again_pass(desk: Desk) -> None:
    """A JavaScript client writes 0 for 0.0, and may indent and sort."""
    question = asked(CASES["lossless"])
    text = json.dumps(answered(question), sort_keys=True, indent=1)
    assert ": 0.0," in text
    assert desk.code(question, text.replace(": 0.0,", ": 0,").encode()) == HOLDS


def test_what_does_not_hold_is_named(desk: Desk) -> None:
    question = asked(CASES["the contract's own"])
    answer = answered(question)
    answer["bands"][1]["verdict"] = "marginal"
    answer["open_loop"]["axis_poles"][0]["multiplicity"] = 2
    desk.lay(question, answer)
    found = desk.run()
    assert found.returncode == FAILS
    assert found.stdout.splitlines() == [
        "/open_loop/axis_poles/0/multiplicity: 2.0 is written, 1 is due",
        "/bands/1/verdict: 'marginal' is written, 'stable' is due",
    ]


def test_what_holds_and_what_was_left_is_said(desk: Desk) -> None:
    question = asked(CASES["the contract's own"])
    desk.lay(question, answered(question))
    found = desk.run()
    assert (found.returncode, found.stderr) == (HOLDS, "")
    assert "verdict and counts at the gain in service hold" in found.stdout
    assert "Not rechecked: closed-loop poles" in found.stdout


BAD_QUESTIONS: dict[str, bytes] = {
    "no JSON": b"{",
    "no text": b"\xff",
    "no object": b"[]",
    "a key twice": b'{"numerator": [1], "numerator": [2], "denominator": [1, 1], "evidence": true}',
    "no evidence asked for": body({"numerator": [1], "denominator": [1, 1]}),
    "no loop": body({"evidence": True}),
    "two loops": asked({"numerator": [1], "denominator": [1], "blocks": [{"zeros": [1]}]}),
    "half a loop": asked({"numerator": [1]}),
    "sampled": asked({"numerator": [1], "denominator": [1, 1], "sample_time_s": "0.1"}),
    "dead time": asked({"numerator": [1], "denominator": [1, 1], "dead_time_s": 2, "gain_window": [0, 1]}),
    "zero denominator": asked({"numerator": [1], "denominator": [0, 0]}),
    "a boolean coefficient": asked({"numerator": [True], "denominator": [1, 1]}),
    "a coefficient that is no number": asked({"numerator": ["1_0"], "denominator": [1, 1]}),
    "a fraction over zero": asked({"numerator": ["1/0"], "denominator": [1, 1]}),
    "a monster": asked({"numerator": ["1e999999999"], "denominator": [1, 1]}),
    "not a number": asked({"numerator": [math.nan], "denominator": [1, 1]}),
    "unknown feedback": asked({"numerator": [1], "denominator": [1, 1], "feedback": "some"}),
    "unknown detour": asked({"numerator": [1], "denominator": [1, 1], "detour": "up"}),
}


@pytest.mark.parametrize("name", BAD_QUESTIONS)
def test_a_bad_question_is_bad_input(desk: Desk, name: str) -> None:
    assert desk.code(BAD_QUESTIONS[name], answered(asked(CASES["odd"]))) == BAD_INPUT


@pytest.mark.parametrize("answer", [b"{", b"[]", b"7", b"", b'{"edges": [], "edges": []}'])
def test_a_text_that_is_no_answer_is_bad_input(desk: Desk, answer: bytes) -> None:
    assert desk.code(asked(CASES["odd"]), answer) == BAD_INPUT


@pytest.mark.parametrize(
    "answer",
    [{}, {"type": "/problems/not-json"}, {"evidence": None}, {"evidence": {"edges": [{}], "bands": []}}],
    ids=["empty", "problem", "no evidence", "empty evidence"],
)
def test_an_object_that_proves_nothing_does_not_pass(desk: Desk, answer: dict[str, Any]) -> None:
    assert desk.code(asked(CASES["odd"]), answer) == FAILS


@pytest.mark.parametrize("count", [0, 1, 3])
def test_other_than_two_files_is_bad_input(desk: Desk, count: int) -> None:
    assert desk.recheck.main([str(SCRIPT)] * count) == BAD_INPUT


def test_files_that_are_not_there_are_bad_input_for_the_program_too(desk: Desk) -> None:
    found = desk.run()
    assert found.returncode == BAD_INPUT
    assert "FileNotFoundError" in found.stdout


def test_two_pi_lies_where_it_says(recheck: ModuleType) -> None:
    """Reference: mpmath's pi."""
    with mpmath.workdps(80):
        low, high = (mpmath.mpf(end.numerator) / end.denominator for end in recheck.TAU)
        assert low < 2 * mpmath.pi < high


def test_the_program_is_short_enough_to_be_audited() -> None:
    assert len(SCRIPT.read_text("utf-8").splitlines()) <= 400


def test_the_program_imports_the_standard_library_alone() -> None:
    nodes = list(ast.walk(ast.parse(SCRIPT.read_text("utf-8"))))
    imported = {alias.name for node in nodes if isinstance(node, ast.Import) for alias in node.names}
    imported |= {node.module or "" for node in nodes if isinstance(node, ast.ImportFrom)}
    assert "fractions" in imported
    assert {name.split(".")[0] for name in imported} <= sys.stdlib_module_names
