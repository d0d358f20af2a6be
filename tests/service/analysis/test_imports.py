"""The analysis is pure: whatever it imports, however far down, knows no web, no environment and no clock."""

import ast
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[3]

ALLOWED_LIBRARIES = {"flint", "numpy", "scipy"}

FORBIDDEN_STANDARD = {
    "asyncio", "datetime", "http", "io", "logging", "multiprocessing", "os", "pathlib", "random", "secrets",
    "shutil", "signal", "socket", "sqlite3", "subprocess", "sys", "tempfile", "threading", "time", "urllib",
    "uuid",
}  # fmt: skip

FORBIDDEN_CALLS = {"open", "print", "input", "exec", "eval", "__import__", "breakpoint"}


def modules_below(root: Path, package: str) -> dict[str, Path]:
    """Map the dotted name of every module of a package to its file."""
    found = {}
    for path in sorted((root / package.replace(".", "/")).rglob("*.py")):
        parts = path.relative_to(root).with_suffix("").parts
        found[".".join(parts[:-1] if parts[-1] == "__init__" else parts)] = path
    return found


def imports_of(module: str, path: Path) -> set[str]:
    """Give the dotted names a module imports, inside functions too, relative ones resolved."""
    names = set()
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            package = module if path.name == "__init__.py" else module.rpartition(".")[0]
            for _ in range(node.level - 1):
                package = package.rpartition(".")[0]
            base = ".".join(filter(None, [package if node.level else "", node.module or ""]))
            names |= {f"{base}.{alias.name}" for alias in node.names}
    return names


def is_pure(imported: str, package: str) -> bool:
    """Tell whether an import stays within the package, mathematics and the harmless standard library."""
    top = imported.partition(".")[0]
    if top == package.partition(".")[0]:
        return imported == package or imported.startswith(f"{package}.")
    return top in ALLOWED_LIBRARIES or (top in sys.stdlib_module_names and top not in FORBIDDEN_STANDARD)


def impurities(root: Path, package: str) -> list[str]:
    """List the imports and calls by which a package is not pure; all of its modules are walked."""
    found = []
    for module, path in modules_below(root, package).items():
        found += [
            f"{module} imports {imported}"
            for imported in sorted(imports_of(module, path))
            if not is_pure(imported, package)
        ]
        found += [
            f"{module} calls {node.func.id}"
            for node in ast.walk(ast.parse(path.read_text()))
            if isinstance(node, ast.Call)
            and isinstance(node.func, ast.Name)
            and node.func.id in FORBIDDEN_CALLS
        ]
    return found


def test_the_analysis_reaches_nothing_impure() -> None:
    """Every module it can reach of ours lies within the package, so walking the package walks them all."""
    assert "service.analysis.question" in modules_below(ROOT, "service.analysis")
    assert impurities(ROOT, "service.analysis") == []


@pytest.mark.parametrize(
    ("source", "expected"),
    [
        pytest.param("import flask", "flask", id="web"),
        pytest.param("from marshmallow import fields", "marshmallow.fields", id="schemas' library"),
        pytest.param("from schemas.numbers import exact", "schemas.numbers.exact", id="schemas"),
        pytest.param("from os import environ", "os.environ", id="environment"),
        pytest.param("import time", "time", id="clock"),
        pytest.param("from datetime import datetime", "datetime.datetime", id="date"),
        pytest.param("import random", "random", id="chance"),
        pytest.param("import logging", "logging", id="log"),
        pytest.param("from service import settings", "service.settings", id="another part"),
        pytest.param("from .. import settings", "service.settings", id="another part, relative"),
        pytest.param("def f():\n    import flask", "flask", id="inside a function"),
    ],
)
def test_the_walk_finds_an_impure_import(tmp_path: Path, source: str, expected: str) -> None:
    package = tmp_path / "service" / "analysis"
    package.mkdir(parents=True)
    (package / "clean.py").write_text(
        "import math\nfrom flint import fmpz\nfrom service.analysis import other\n"
    )
    (package / "other.py").write_text(source)
    assert impurities(tmp_path, "service.analysis") == [f"service.analysis.other imports {expected}"]


def test_the_walk_finds_an_impure_call(tmp_path: Path) -> None:
    (tmp_path / "service" / "analysis").mkdir(parents=True)
    (tmp_path / "service" / "analysis" / "other.py").write_text("text = open('answer').read()\n")
    assert impurities(tmp_path, "service.analysis") == ["service.analysis.other calls open"]
