"""What the tests of the field page share: the page's folder, and one visit whose report they read."""
import json
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

HERE = Path(__file__).parent
PAGE = HERE.parents[1] / "rules" / "handheld" / "page"
VISIT_SECONDS = 900      # of a slow machine that is busy with other things


def pytest_addoption(parser):
    """Lets a person look at the page."""
    parser.addoption("--pictures", type=Path, help="folder for a picture of every view of the field page")


@pytest.fixture(scope="session")
def visit(request, tmp_path_factory):
    """What was seen on one visit to the page: see visit.mjs."""
    pictures = request.config.getoption("--pictures", default=None)
    if pictures:
        pictures.mkdir(parents=True, exist_ok=True)
    command = ["node", HERE / "visit.mjs", shutil.which("chromium"), sys.executable, tmp_path_factory.mktemp("export")]
    command += [pictures] if pictures else []
    done = subprocess.run(command, capture_output=True, text=True, timeout=VISIT_SECONDS)
    assert done.returncode == 0, done.stderr[-4000:]
    return json.loads(done.stdout)
