"""Run the commands of README.md exactly as printed, in order, and compare what they print with what it says.

A fenced `bash` block is one command for `bash -e`. A `text` or `json` block right after it holds its
standard output: a text line by line, a JSON document as a document. A `bash` block under the comment
`<!-- keeps running -->` serves until the next such block; the next command waits until it answers.
"""

import json
import os
import re
import signal
import subprocess
import sys
import time
from dataclasses import dataclass
from pathlib import Path
from urllib.error import URLError
from urllib.request import urlopen

PROJECT = Path(__file__).resolve().parent.parent
SERVICE = "http://127.0.0.1:8000/readyz"
START_SECONDS = 60
STOP_SECONDS = 30

STEP = re.compile(
    r"^(?P<serves><!-- keeps running -->\n)?```bash\n(?P<command>.*?)^```\n"
    r"(?:\n?```(?P<kind>text|json)\n(?P<output>.*?)^```\n)?",
    re.MULTILINE | re.DOTALL,
)


@dataclass(frozen=True)
class Step:
    """A command of the README, and the output printed under it."""

    command: str
    serves: bool
    kind: str | None
    output: str | None


def steps(text: str) -> list[Step]:
    """List the commands of the document ``text``, in order."""
    return [
        Step(match["command"], match["serves"] is not None, match["kind"], match["output"])
        for match in STEP.finditer(text)
    ]


def run(step: Step) -> None:
    """Run a command that ends; exit where it fails or prints something else."""
    show = subprocess.PIPE if step.output is not None else None
    done = subprocess.run(
        ["bash", "-e", "-c", step.command], cwd=PROJECT, stdout=show, text=True, check=False
    )
    if done.returncode:
        sys.exit(f"README: exit code {done.returncode} from\n{step.command}")
    if step.output is not None and not same(step.kind, step.output, done.stdout):
        sys.exit(f"README: printed\n{step.output}\nbut now it is\n{done.stdout}\nfrom\n{step.command}")


def same(kind: str | None, printed: str, found: str) -> bool:
    """Tell whether the output ``found`` is the one ``printed``."""
    if kind == "json":
        return bool(json.loads(printed) == json.loads(found))
    return [line.rstrip() for line in printed.splitlines()] == [line.rstrip() for line in found.splitlines()]


def start(step: Step) -> subprocess.Popen[bytes]:
    """Start a command that serves, and wait until it does."""
    process = subprocess.Popen(["bash", "-e", "-c", step.command], cwd=PROJECT, start_new_session=True)
    deadline = time.monotonic() + START_SECONDS
    while process.poll() is None and time.monotonic() < deadline:
        try:
            with urlopen(SERVICE, timeout=5):
                return process
        except (URLError, ConnectionError, TimeoutError):
            time.sleep(0.2)
    stop(process)
    sys.exit(f"README: nothing answers at {SERVICE} after\n{step.command}")


def stop(process: subprocess.Popen[bytes]) -> None:
    """Tell a serving command to stop; end it with all it started where it does not."""
    process.terminate()
    try:
        process.wait(timeout=STOP_SECONDS)
    except subprocess.TimeoutExpired:
        os.killpg(process.pid, signal.SIGKILL)


def main() -> None:
    """Run every step, one serving command at a time."""
    found = steps((PROJECT / "README.md").read_text())
    if not found:
        sys.exit("README: no command found")
    serving = None
    try:
        for step in found:
            print(f"\n== README: {step.command}", flush=True)
            if not step.serves:
                run(step)
                continue
            if serving:
                stop(serving)
            serving = start(step)
    finally:
        if serving:
            stop(serving)


if __name__ == "__main__":
    main()
