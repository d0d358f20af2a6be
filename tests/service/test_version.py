"""One version everywhere."""

import tomllib
from pathlib import Path

from service.version import ENGINE, VERSION


def test_the_version_is_that_of_the_distribution() -> None:
    project = tomllib.loads((Path(__file__).parents[2] / "pyproject.toml").read_text())["project"]
    assert project["version"] == VERSION
    assert f"halfturn {VERSION}" == ENGINE
