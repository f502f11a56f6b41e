"""The snippets of the embedding guide, laid out as an app would have them, with a rule set sealed by a key made for the run."""
import json
import re
import shutil
import subprocess
from pathlib import Path

import pytest

from precontact_rules import released
from precontact_rules.sealing import KeyRing, field

HERE = Path(__file__).parent
HANDHELD = HERE.parents[1] / "rules" / "handheld"
SNIPPET = re.compile(r"^```\w+ (\S+)\n(.*?)^```$", re.MULTILINE | re.DOTALL)
QUESTION = {"circuit": "thevenin", "source": {"voltage_volt": 24, "resistance_ohm": 470000}, "instrument": "multimeter-dc-volts", "limit_percent": 1}


@pytest.fixture(scope="session")
def snippets():
    """{path in the guide: text} of every snippet."""
    return dict(SNIPPET.findall((HANDHELD / "README.md").read_text()))


@pytest.fixture(scope="session")
def released_set():
    """The rule set that the guide names."""
    return released.load("1.0.0")


@pytest.fixture(scope="session")
def rule_set_folder(tmp_path_factory):
    """A rule-set/ folder as the service and `precontact-rules seal` make it."""
    folder = tmp_path_factory.mktemp("publisher")
    files = field.rule_set_files(KeyRing.ephemeral(), released.FOLDER)
    for name, content in files.items():
        path = folder / Path(name).name
        path.write_bytes(content)
    return folder


@pytest.fixture
def app_folder(tmp_path, snippets, rule_set_folder):
    """app_folder(part) -> a folder with the snippets of one part, the rule set beside them, and the runtime as an installed package."""

    def laid_out(part):
        for name, text in snippets.items():
            if name.startswith(f"{part}/"):
                (tmp_path / Path(name).name).write_text(text)
        shutil.copytree(rule_set_folder, tmp_path / "rule-set")
        (tmp_path / "question.json").write_text(json.dumps(QUESTION))
        return tmp_path

    return laid_out


def with_packages(folder):
    """Make the packages of tools/ and the runtime importable in an app's folder, as `npm install` does."""
    modules = folder / "node_modules"
    modules.mkdir()
    for package in ("@noble", "@sinonjs", "base-64"):
        (modules / package).symlink_to(HERE / "tools" / "node_modules" / package)
    shutil.copytree(HANDHELD, modules / "precontact-handheld", ignore=shutil.ignore_patterns("page", "node_modules"))
    return folder


def said(command, folder, **options):
    """What a command prints, as JSON."""
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, timeout=300, **options)
    assert done.returncode == 0, done.stderr[-3000:]
    return json.loads(done.stdout)
