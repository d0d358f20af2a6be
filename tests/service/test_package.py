"""The package as a whole."""

import subprocess
import sys
from pathlib import Path

import service


def test_only_the_service_loads_flask() -> None:
    program = "import sys, service.exchange; print('flask' in sys.modules, 'marshmallow' in sys.modules)"
    run = subprocess.run(  # noqa: S603 (our own program)
        [sys.executable, "-c", program],
        cwd=Path(__file__).parents[2],
        capture_output=True,
        text=True,
        check=True,
    )
    assert run.stdout.split() == ["False", "True"]


def test_the_application_is_built_from_the_package() -> None:
    assert service.__all__ == ["create_app"]
    assert service.create_app().test_client().get("/healthz").status_code == 200
