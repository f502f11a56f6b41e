"""The document that is committed, and the application that it describes."""
import json

import pytest
from precontact_service import create_app
from serving import ROOT

FOLDER = ROOT / "openapi"


@pytest.fixture(scope="session")
def app():
    """The application."""
    return create_app(access_log=False)


@pytest.fixture
def client(app):
    """A client of it."""
    return app.test_client()


@pytest.fixture(scope="session")
def document():
    """The committed document."""
    return json.loads((FOLDER / "openapi.json").read_bytes())
