"""README, DEVELOPERS, examples and locks say what the project is."""

import re
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

from service import create_app
from service.command import main
from service.settings import SETTINGS, Limits, Setting

PROJECT = Path(__file__).parents[1]
README = (PROJECT / "README.md").read_text()
DEVELOPERS = (PROJECT / "DEVELOPERS.md").read_text()
LOCKS = ["requirements.lock", "requirements-dev.lock"]
CAUTION = "is not a safety function: the standards for functional safety that apply to the plant"


@pytest.mark.parametrize("setting", SETTINGS, ids=lambda setting: setting.name)
def test_the_readme_names_every_setting(setting: Setting) -> None:
    assert f"`{setting.variable}`" in README


def options() -> Iterator[str]:
    for command in main.commands.values():
        for parameter in command.params:
            yield from (option for option in parameter.opts if option.startswith("--"))


@pytest.mark.parametrize("option", sorted(set(options())))
def test_the_readme_names_every_option_of_the_command(option: str) -> None:
    assert re.search(rf"`[^`\n]*{option}\b", README)


def addresses() -> Iterator[str]:
    for rule in create_app(Limits()).url_map.iter_rules():
        if not rule.arguments:
            yield str(rule)


@pytest.mark.parametrize("address", sorted(set(addresses())))
def test_the_readme_names_every_address(address: str) -> None:
    assert re.search(rf"`(GET|POST) {re.escape(address)}`", README)


def test_the_readme_carries_the_caution() -> None:
    assert CAUTION in " ".join(README.split())


def modules() -> Iterator[Path]:
    for folder in ("schemas", "service"):
        for path in sorted((PROJECT / folder).rglob("*.py")):
            if path.name != "__init__.py":
                yield path.relative_to(PROJECT)


def test_the_map_names_every_module_and_no_other() -> None:
    tree = DEVELOPERS.split("```")[1]
    named = re.findall(r"^ +(\w+\.py) ", tree, re.MULTILINE)
    assert sorted(named) == sorted(path.name for path in modules())


@pytest.mark.parametrize("example", sorted((PROJECT / "examples").glob("*.json")), ids=lambda path: path.stem)
def test_every_example_is_described(example: Path) -> None:
    assert f"| `{example.name}` |" in (PROJECT / "examples" / "README.md").read_text()


def normal(name: str) -> str:
    return re.sub(r"[-_.]+", "-", name).lower()


@pytest.mark.parametrize(
    ("lock", "extras"), [("requirements.lock", []), ("requirements-dev.lock", ["dev"])], ids=LOCKS
)
def test_a_lock_pins_all_the_project_asks_for(lock: str, extras: list[str]) -> None:
    project = tomllib.loads((PROJECT / "pyproject.toml").read_text())["project"]
    asked = [
        *project["dependencies"],
        *(it for extra in extras for it in project["optional-dependencies"][extra]),
    ]
    names = {normal(match[0]) for it in asked if (match := re.match(r"[\w.-]+", it))}
    pinned = set(re.findall(r"^([a-z0-9-]+)==", (PROJECT / lock).read_text(), re.MULTILINE))
    assert names <= pinned


@pytest.mark.parametrize("lock", LOCKS)
def test_a_lock_has_a_hash_for_everything_and_names_no_place(lock: str) -> None:
    text = (PROJECT / lock).read_text()
    requirements = re.split(r"^(?=[a-z0-9-]+==)", text, flags=re.MULTILINE)[1:]
    assert requirements
    assert all("--hash=sha256:" in requirement for requirement in requirements)
    assert not re.search(r"://|(?<![\w.-])/\w|--index|--find-links", text)
