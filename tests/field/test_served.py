"""The field page as the service serves it, with the service's own headers."""
import json
import shutil
import subprocess
import threading
from pathlib import Path

import pytest
from werkzeug.serving import make_server

HERE = Path(__file__).parent
GLANCE_SECONDS = 300      # of a slow machine that is busy with other things


@pytest.fixture(scope="module")
def glance(app):
    """What was seen on a short visit: see glance.mjs."""
    server = make_server("127.0.0.1", 0, app, threaded=True)
    threading.Thread(target=server.serve_forever, daemon=True).start()
    try:
        command = ["node", HERE / "glance.mjs", shutil.which("chromium"), f"http://127.0.0.1:{server.server_port}/field/"]
        done = subprocess.run(command, capture_output=True, text=True, timeout=GLANCE_SECONDS)
    finally:
        server.shutdown()
    assert done.returncode == 0, done.stderr[-4000:]
    return json.loads(done.stdout)


def test_it_answers(glance):
    assert glance["heading"] == "Verdict: Not acceptable"


def test_the_policy_in_the_header_is_strict_and_kept(glance):
    assert glance["policy"].startswith("default-src 'none'; script-src 'self';")
    assert glance["violations"] == []


def test_nothing_fails_and_nothing_leaves_the_origin(glance):
    assert (glance["errors"], glance["outside"]) == ([], [])
