"""Where an analysis runs: in this process, one at a time."""

from service.execution.here import Busy, analyse

__all__ = ["Busy", "analyse"]
