"""The program that runs the README's commands."""

import importlib.util
import sys
from pathlib import Path
from types import ModuleType

import pytest

RUNNER = Path(__file__).parents[2] / ".ci" / "readme.py"


@pytest.fixture(scope="module")
def runner() -> ModuleType:
    spec = importlib.util.spec_from_file_location("readme_runner", RUNNER)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    # A dataclass looks its module up by name while it is made.
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


DOCUMENT = """
# A document

```bash
echo one
```

```text
one
```

```python
not_a_command()
```

<!-- keeps running -->
```bash
serve
```

```bash
echo '{"a": 1}'
```
```json
{
  "a": 1
}
```

```bash
echo two
```

Prose between: the next block is nobody's output.

```text
one
```
"""


def test_commands_are_found_in_order_with_their_output(runner: ModuleType) -> None:
    found = [(step.command, step.serves, step.kind, step.output) for step in runner.steps(DOCUMENT)]
    assert found == [
        ("echo one\n", False, "text", "one\n"),
        ("serve\n", True, None, None),
        ("echo '{\"a\": 1}'\n", False, "json", '{\n  "a": 1\n}\n'),
        ("echo two\n", False, None, None),
    ]


def test_what_is_printed_as_the_document_says_passes(runner: ModuleType) -> None:
    for step in runner.steps(DOCUMENT):
        if not step.serves:
            runner.run(step)


@pytest.mark.parametrize(
    ("command", "kind", "output", "message"),
    [
        pytest.param("echo other", "text", "one\n", "now it is\nother", id="another-text"),
        pytest.param("echo '{\"a\": 2}'", "json", '{"a": 1}\n', "now it is", id="another-document"),
        pytest.param("exit 3", None, None, "exit code 3", id="failure"),
        pytest.param("false\ntrue", None, None, "exit code 1", id="failure-before-the-end"),
    ],
)
def test_what_is_not_as_the_document_says_fails(
    runner: ModuleType, command: str, kind: str | None, output: str | None, message: str
) -> None:
    with pytest.raises(SystemExit, match=message):
        runner.run(runner.Step(command, serves=False, kind=kind, output=output))


def test_a_text_may_differ_in_trailing_spaces_alone(runner: ModuleType) -> None:
    assert runner.same("text", "a\nb\n", "a  \nb\n")
    assert not runner.same("text", "a\nb\n", "a\n b\n")


def test_a_service_that_ends_at_once_fails(runner: ModuleType) -> None:
    with pytest.raises(SystemExit, match="nothing answers"):
        runner.start(runner.Step("exit 1", serves=True, kind=None, output=None))
