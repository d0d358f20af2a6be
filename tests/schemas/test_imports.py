"""The wire contract stands below everything else."""

import ast
import sys
from pathlib import Path

import pytest

FOLDER = Path(__file__).parents[2] / "schemas"
MODULES = sorted(FOLDER.glob("*.py"))


def test_there_are_modules_to_look_at() -> None:
    assert {"reader.py", "numbers.py", "question.py", "answer.py", "problem.py"} <= {
        each.name for each in MODULES
    }


@pytest.mark.parametrize("module", MODULES, ids=lambda path: path.stem)
def test_a_schema_imports_the_standard_library_marshmallow_and_schemas_alone(module: Path) -> None:
    roots = set()
    for node in ast.walk(ast.parse(module.read_text())):
        if isinstance(node, ast.Import):
            roots |= {alias.name.split(".")[0] for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0
            roots.add((node.module or "").split(".")[0])
    assert roots - sys.stdlib_module_names <= {"marshmallow", "schemas"}
