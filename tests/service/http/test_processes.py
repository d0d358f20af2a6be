"""The same question gets the same bytes from every process."""

import os
import subprocess
import sys
from pathlib import Path

PROGRAM = """
import hashlib
from service import create_app
from tests.wire import HOIST, body
client = create_app().test_client()
unknown = {f"k{index}": 1 for index in range(30)}
for data in (body(HOIST), body({**HOIST, "evidence": True}), body({**HOIST, **unknown, "gain": "x"})):
    response = client.post("/v1/stability", data=data, content_type="application/json")
    print(response.status_code, response.headers.get("ETag"), hashlib.sha256(response.data).hexdigest())
for address in ("/openapi.json", "/reference", "/v1/limits", "/problems"):
    print(address, hashlib.sha256(client.get(address).data).hexdigest())
print(client.delete("/v1/stability").text)
"""


def _said(hash_seed: str) -> str:
    """What a process of its own says, whose sets and dicts of texts are ordered by ``hash_seed``."""
    run = subprocess.run(  # noqa: S603 (our own program)
        [sys.executable, "-c", PROGRAM],
        env={**os.environ, "PYTHONHASHSEED": hash_seed, "PYTHONPATH": "."},
        cwd=Path(__file__).parents[3],
        capture_output=True,
        text=True,
        check=True,
    )
    return run.stdout


def test_two_processes_say_the_same() -> None:
    first = _said("1")
    assert first.splitlines()[0].startswith("200 ")
    assert first == _said("2")
