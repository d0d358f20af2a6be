"""One application with the default limits, for every test of the service."""

import pytest
from flask import Flask
from flask.testing import FlaskClient

from service import create_app
from service.settings import Limits


@pytest.fixture(scope="session")
def app() -> Flask:
    """The application."""
    return create_app(Limits())


@pytest.fixture
def client(app: Flask) -> FlaskClient:
    """A client of it."""
    return app.test_client()
