"""The document that is committed, and the application that it describes."""
import json

import pytest
from serving import ROOT

FOLDER = ROOT / "openapi"


@pytest.fixture(scope="session")
def document():
    """The committed document."""
    return json.loads((FOLDER / "openapi.json").read_bytes())
