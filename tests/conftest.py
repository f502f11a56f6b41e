"""What all tests share: the rule set as its sources are now, the application, the wheel."""
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from precontact_rules import RuleSet
from precontact_rules.authoring.build import build, canonical

ROOT = Path(__file__).resolve().parents[1]
SOURCE = ROOT / "rules" / "source"


def pytest_addoption(parser):
    """Lets a person who edits rules try a copy of the sources."""
    parser.addoption("--rule-source", type=Path, default=SOURCE, help="folder of rule sources to test instead of rules/source")


@pytest.fixture(scope="session")
def rule_set(request):
    """The rule set built from the working sources, not the released one."""
    bundle, faults, _ = build(request.config.getoption("--rule-source"))
    assert not faults, "\n".join(map(str, sorted(faults)))
    return RuleSet(canonical(bundle))


@pytest.fixture(scope="session")
def app():
    """The application as it is deployed, without its log."""
    from precontact_service import create_app        # only where asked for: the rules' tests need no service

    return create_app(access_log=False)


@pytest.fixture
def client(app):
    """A client of the whole stack, from the outermost layer inwards."""
    return app.test_client()


@pytest.fixture(scope="session")
def wheel(tmp_path_factory):
    """The wheel that this repository builds, made from a copy: building leaves things behind, and a test must not."""
    folder = tmp_path_factory.mktemp("wheel")
    copy = folder / "copy"
    copy.mkdir()
    for part in ("rules", "service"):
        shutil.copytree(ROOT / part, copy / part, ignore=shutil.ignore_patterns("__pycache__", "*.egg-info", "node_modules"))
    for file in ("pyproject.toml", "README.md"):
        shutil.copy(ROOT / file, copy)
    subprocess.run([sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation", "--wheel-dir", folder, "."],
                   cwd=copy, check=True, capture_output=True)
    return next(folder.glob("*.whl"))
