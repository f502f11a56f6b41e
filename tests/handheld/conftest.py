"""The released rule set, where the runtime is, and how its scripts are run."""
import json
import shutil
import subprocess
from pathlib import Path

import pytest

from precontact_rules import released

HERE = Path(__file__).parent
RUNTIME = HERE.parents[1] / "rules" / "handheld" / "index.js"


@pytest.fixture(scope="session")
def released_set():
    """The rule set that handhelds carry."""
    return released.latest()


@pytest.fixture(scope="session")
def bundle_path(released_set, tmp_path_factory):
    """A file with the released bundle's bytes."""
    path = tmp_path_factory.mktemp("bundle") / f"{released_set.version}.json"
    path.write_bytes(released_set.bytes)
    return path


@pytest.fixture(scope="session")
def run_script():
    """run_script(name, *arguments) -> what a script of this folder prints as JSON, run by Node; in Chromium too where the script opens one."""

    def run(name, *arguments, timeout=900):
        browser = [shutil.which("chromium")] if name.endswith("_chromium.js") else []
        done = subprocess.run(["node", HERE / name, *browser, *map(str, arguments)], capture_output=True, text=True, timeout=timeout)
        assert done.returncode == 0, f"{name} failed:\n{done.stderr[-3000:]}"
        return json.loads(done.stdout)

    return run
