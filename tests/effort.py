"""How many examples a property takes: the same ones from run to run, or more and new ones on request.

HALFTURN_EXAMPLES multiplies the number of examples and takes new ones, for a longer search by hand.
"""

import os

from hypothesis import settings

SEARCHING = "HALFTURN_EXAMPLES" in os.environ
FACTOR = int(os.environ.get("HALFTURN_EXAMPLES", "1"))


def examples(number: int) -> settings:
    """Decorate a property that is to take a number of examples other than the profile's."""
    return settings(max_examples=number * FACTOR)
