"""How long the heaviest questions within the limits take: ``python -m tests.benchmarks.heaviest``.

The design promises two seconds. Prints the seconds of processor time of each question of the family, the
better of two runs, longest first. Nothing is asserted: run it on a quiet machine.
"""

import json
import os
import time

from schemas.reader import read_json
from service.analysis.errors import OutOfRange
from service.exchange import answer_document, json_bytes
from tests.heavy import HEAVY

PROMISED = 2.0


def main() -> None:
    """Print the table."""
    print(f"load average {os.getloadavg()[0]:.1f}")
    taken = {name: min(_seconds(question), _seconds(question)) for name, question in HEAVY.items()}
    for name, seconds in sorted(taken.items(), key=lambda item: -item[1]):
        print(f"{seconds:6.2f} s  {'over the promise  ' if seconds > PROMISED else ''}{name}")


def _seconds(question: object) -> float:
    body = json.dumps(question).encode()
    start = time.process_time()
    try:
        json_bytes(answer_document(read_json(body)))
    except OutOfRange as refusal:
        print(f"refused: {refusal}")
    return time.process_time() - start


if __name__ == "__main__":
    main()
