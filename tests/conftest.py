"""What all tests share: the rule set as its sources are now."""
from pathlib import Path

import pytest

from precontact_rules import RuleSet
from precontact_rules.authoring.build import build, canonical

SOURCE = Path(__file__).resolve().parents[1] / "rules" / "source"


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
