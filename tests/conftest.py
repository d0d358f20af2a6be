"""Settings shared by all tests: the same examples from run to run, so that a red run is red again.

HALFTURN_EXAMPLES multiplies the number of examples and takes new ones, for a longer search by hand.
"""

import os

from hypothesis import HealthCheck, settings

_DEFAULT_EXAMPLES = 100

settings.register_profile(
    "steady",
    max_examples=_DEFAULT_EXAMPLES,
    deadline=None,
    derandomize=True,
    database=None,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.register_profile(
    "search",
    parent=settings.get_profile("steady"),
    max_examples=_DEFAULT_EXAMPLES * int(os.environ.get("HALFTURN_EXAMPLES", "1")),
    derandomize=False,
)
settings.load_profile("search" if "HALFTURN_EXAMPLES" in os.environ else "steady")
