"""Putting one question from the command line."""

import json
from collections.abc import Iterator
from pathlib import Path
from threading import Thread

import pytest
from click.testing import CliRunner, Result
from werkzeug.serving import make_server

from service import create_app
from service.command import main
from service.command.local import local_answer
from service.settings import Limits
from service.version import VERSION

EXAMPLES = sorted((Path(__file__).parents[3] / "examples").glob("*.json"))
OPTIONS = ["--numerator", "2.5,10", "--denominator", "1,1/3,4,0", "--gain", "0.1"]
QUESTION = b'{"numerator": [2.5, 10], "denominator": [1, "1/3", 4, 0], "gain": 0.1, "curve": false}'


def ask(*arguments: str, question: bytes | None = None) -> Result:
    return CliRunner().invoke(main, ["ask", *arguments], input=question)


@pytest.fixture(scope="module")
def service() -> Iterator[str]:
    server = make_server("127.0.0.1", 0, create_app(Limits()))
    thread = Thread(target=server.serve_forever, kwargs={"poll_interval": 0.01})
    thread.start()
    yield f"http://127.0.0.1:{server.port}"
    server.shutdown()
    thread.join()
    server.server_close()


@pytest.mark.parametrize("example", EXAMPLES, ids=lambda path: path.stem)
def test_each_example_is_answered_with_its_verdict_first(example: Path) -> None:
    result = ask(str(example))
    assert (result.exit_code, result.stderr) == (0, "")
    summary = json.loads(local_answer(example.read_bytes(), Limits()))["summary"]
    name, *lines = result.stdout.split("\n\nBANDS\n")[0].splitlines()
    assert name == json.loads(example.read_bytes())["name"]
    assert " ".join(lines) == summary


def test_a_file_standard_input_and_options_put_the_same_question(tmp_path: Path) -> None:
    file = tmp_path / "question.json"
    file.write_bytes(QUESTION)
    answers = {
        ask(str(file), "--json").stdout_bytes,
        ask("-", "--json", question=QUESTION).stdout_bytes,
        ask("--json", *OPTIONS).stdout_bytes,
    }
    assert answers == {local_answer(QUESTION, Limits())}


def test_every_option_reaches_the_question() -> None:
    result = ask(
        *("--json", *OPTIONS, "--name", "a loop", "--feedback", "positive", "--detour", "left"),
        *("--gain-window", "-1/2, 3", "--evidence"),
    )
    answer = json.loads(result.stdout)
    loop = answer["loop"]
    assert (loop["name"], loop["feedback"], loop["detour"]) == ("a loop", "positive", "left")
    assert (answer["bands"][0]["lower"], answer["bands"][-1]["upper"]) == (-0.5, 3.0)
    assert answer["commissioned"]["exact"] == "1/10"
    assert answer["evidence"] is not None


def test_options_replace_what_a_file_says() -> None:
    answer = json.loads(ask("-", "--json", "--gain", "7", question=QUESTION).stdout)
    assert answer["commissioned"]["exact"] == "7"
    assert answer["loop"]["denominator"] == ["1", "1/3", "4", "0"]


@pytest.mark.parametrize("output", [["--json"], []], ids=["document", "table"])
def test_a_service_gives_the_same_output(service: str, output: list[str]) -> None:
    there = ask("--service", service, *output, *OPTIONS)
    assert there.exit_code == 0
    assert there.stdout_bytes == ask(*output, *OPTIONS).stdout_bytes


def test_the_question_goes_to_a_service_exactly(service: str) -> None:
    asked = ["-", "--json", "--gain", "1e-60"]
    question = b'{"numerator": [0.1], "denominator": [1, 0.30000000000000000000000000000001, 2]}'
    there = ask("--service", service, *asked, question=question)
    assert there.stdout_bytes == ask(*asked, question=question).stdout_bytes
    assert json.loads(there.stdout)["loop"]["numerator"] == ["1/10"]


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        pytest.param([], "Name a FILE, or give --numerator and --denominator.", id="nothing"),
        pytest.param(["--gain", "3"], "Name a FILE, or give --numerator", id="no-loop"),
        pytest.param(["no-such-file.json"], "No such file or directory", id="no-file"),
        pytest.param(["."], "Is a directory", id="a-directory"),
        pytest.param(["--numerator", "1"], "/denominator: Missing", id="no-denominator"),
        pytest.param(
            ["--numerator", "1,x", "--denominator", "1,1"], "/numerator/1: Not a number", id="no-number"
        ),
        pytest.param(["--numerator", "1", "--denominator", "1,"], "/denominator/1: Not a number", id="comma"),
        pytest.param(
            ["--numerator", "1", "--denominator", "0"], "/denominator: All coeff", id="no-loop-at-all"
        ),
        pytest.param([*OPTIONS, "--gain", "1e999999999"], "/gain: Over the limit 'exponent'", id="monster"),
        pytest.param(
            [*OPTIONS, "--gain-window", "1"], "/gain_window: Expected [lowest, highest]", id="window"
        ),
        pytest.param([*OPTIONS, "--gain", ""], "/gain: Not a number", id="empty"),
        pytest.param([*OPTIONS, "--detour", "up"], "Invalid value for '--detour'", id="choice"),
        pytest.param([*OPTIONS, "--service", "here"], "'here' is no address such as http://", id="address"),
        pytest.param([*OPTIONS, "--service", "ftp://a"], "'ftp://a' is no address", id="scheme"),
        pytest.param([*OPTIONS, "--service", "http://[a"], "'http://[a' is no address", id="brackets"),
        pytest.param([*OPTIONS, "--service", "http://a:b"], "'http://a:b' is no address", id="port"),
    ],
)
def test_bad_input_is_named_on_standard_error_and_ends_with_2(arguments: list[str], message: str) -> None:
    result = ask(*arguments)
    assert (result.exit_code, result.stdout) == (2, "")
    assert message in result.stderr


def test_a_service_refuses_in_the_same_words(service: str) -> None:
    arguments = ["--numerator", "1,x", "--denominator", "0", "--gain", "1e999"]
    there, here = ask("--service", service, *arguments), ask(*arguments)
    assert there.exit_code == here.exit_code == 2
    assert there.stderr.splitlines()[1:] == here.stderr.splitlines()[1:]


def test_a_name_that_the_output_cannot_encode_is_escaped() -> None:
    result = CliRunner(charset="ascii").invoke(main, ["ask", *OPTIONS, "--name", "Förderband"])
    assert result.exit_code == 0
    assert result.stdout.startswith("F\\xf6rderband\n")


def test_no_service_ends_with_3() -> None:
    result = ask("--service", "http://127.0.0.1:9", *OPTIONS)
    assert (result.exit_code, result.stdout) == (3, "")
    assert "No service answers at http://127.0.0.1:9/v1/stability" in result.stderr


def test_the_version_is_that_of_the_engine() -> None:
    result = CliRunner().invoke(main, ["--version"])
    assert (result.exit_code, result.stdout) == (0, f"halfturn {VERSION}\n")


@pytest.mark.parametrize("command", [[], ["ask"], ["serve"]], ids=["halfturn", "ask", "serve"])
def test_help_shows_an_example(command: list[str]) -> None:
    result = CliRunner().invoke(main, [*command, "--help"])
    assert result.exit_code == 0
    assert "Example" in result.stdout
    assert f"  halfturn {' '.join(command)}".rstrip() in result.stdout


def test_the_help_carries_the_caution() -> None:
    text = " ".join(CliRunner().invoke(main, ["--help"]).stdout.split())
    assert "It is no safety function" in text
    assert "responsible licensed engineer decide" in text
