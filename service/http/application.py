"""The application factory: which address leads where."""

import os
from pathlib import Path
from typing import Final

from flask import Flask, Response

from service.http.assets import Assets
from service.http.limits import LimitList
from service.http.negotiation import HTML
from service.http.pages import Pages
from service.http.probes import Probes
from service.http.problems import register_problems
from service.http.stability import Stability
from service.settings import Limits, read_limits

_TEMPLATES: Final = Path(__file__).parents[1] / "page" / "templates"

_NOTHING_LOADS: Final = "default-src 'none'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"
_OWN_STYLE_LOADS: Final = f"{_NOTHING_LOADS}; style-src 'self'; img-src 'self'"
_EVERYWHERE: Final = (
    ("X-Content-Type-Options", "nosniff"),
    ("Referrer-Policy", "no-referrer"),
    ("Cross-Origin-Opener-Policy", "same-origin"),
    ("X-Frame-Options", "DENY"),
)
_ON_PAGES: Final = (*_EVERYWHERE, ("Content-Security-Policy", _OWN_STYLE_LOADS))
_ELSEWHERE: Final = (*_EVERYWHERE, ("Content-Security-Policy", _NOTHING_LOADS))


def create_app(limits: Limits | None = None) -> Flask:
    """Build the application, limited by ``limits``, or else by what the environment says.

    Raises `service.settings.BadSettings`.
    """
    limits = read_limits(os.environ) if limits is None else limits
    app = Flask("service.http", static_folder=None, template_folder=_TEMPLATES)
    # A doubled slash would be answered with a redirect, a page in no form of ours.
    app.url_map.merge_slashes = False
    _register_resources(app, limits)
    register_problems(app)
    app.after_request(_secure)
    return app


def _register_resources(app: Flask, limits: Limits) -> None:
    stability, probes, pages = Stability(limits), Probes(), Pages(limits)
    for address, method, view in (
        ("/v1/stability", "POST", stability.post),
        ("/v1/stability", "GET", stability.get),
        ("/v1/limits", "GET", LimitList(limits).get),
        ("/healthz", "GET", probes.alive),
        ("/readyz", "GET", probes.ready),
        ("/openapi.json", "GET", pages.openapi),
        ("/reference", "GET", pages.reference),
        ("/problems", "GET", pages.problems),
        ("/problems/<name>", "GET", pages.problem),
        ("/", "GET", pages.start),
        ("/assets/<name>", "GET", Assets().get),
    ):
        app.add_url_rule(address, endpoint=f"{method} {address}", view_func=view, methods=[method])


def _secure(response: Response) -> Response:
    """Add the headers that hold for every response; only a page may load anything, and only our own style."""
    response.headers.extend(_ON_PAGES if response.mimetype == HTML else _ELSEWHERE)
    return response
