"""Exact stability analysis of feedback loops. Pure: no HTTP, no JSON, no clock, no environment.

``answer`` is the only door.
"""

from service.analysis.door import answer
from service.analysis.loop import POLYNOMIAL_BITS

__all__ = ["POLYNOMIAL_BITS", "answer"]
