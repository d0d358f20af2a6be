"""Settings shared by all tests: the same examples from run to run, so that a red run is red again."""

from hypothesis import HealthCheck, settings

from tests.effort import FACTOR, SEARCHING

settings.register_profile(
    "halfturn",
    max_examples=100 * FACTOR,
    deadline=None,
    derandomize=not SEARCHING,
    database=None,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.load_profile("halfturn")
