"""Halfturn: for which gains is a feedback loop stable? Answered exactly."""

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from flask import Flask

    from service.settings import Limits

__all__ = ["create_app"]


def create_app(limits: "Limits | None" = None) -> "Flask":
    """Build the HTTP service, a WSGI application; `service.http.application.create_app` says more."""
    # Imported here, so that the analysis and the command, which lie below this package, load without Flask.
    from service.http.application import create_app as create  # noqa: PLC0415

    return create(limits)
