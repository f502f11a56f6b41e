"""Who may import whom, and how long a module may be."""
import ast
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
RULES, SERVICE = ROOT / "rules" / "precontact_rules", ROOT / "service" / "precontact_service"
MODULES = sorted(path for folder in ("rules", "service", "tests", "deploy") for path in (ROOT / folder).rglob("*.py") if "node_modules" not in path.parts)
SERVICE_MAY = {"precontact_rules", "flask", "flask_smorest", "marshmallow", "apispec", "werkzeug", "markupsafe", "orjson", "gunicorn"}
SEALING_MAY = {"joserfc"}
AUTHORING_MAY = {"numpy", "yaml", "pint", "rfc8785", "precontact_rules"}


def imported(path):
    """Top-level names of the packages that a module imports; a relative import keeps its dots."""
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.Import):
            yield from (alias.name.partition(".")[0] for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.level == 0:
            yield node.module.partition(".")[0]
        elif isinstance(node, ast.ImportFrom):
            yield "." * node.level + (node.module or "")


def outside(path):
    """Imported packages that are neither the standard library's nor relative."""
    return {name for name in imported(path) if not name.startswith(".") and name not in sys.stdlib_module_names}


def test_the_engine_needs_numpy_alone():
    for path in RULES.glob("*.py"):
        assert outside(path) <= {"numpy"}, path
        assert not any(name.startswith((".authoring", ".sealing")) for name in imported(path)), path


def test_the_engine_knows_no_http():
    for path in RULES.glob("*.py"):
        assert not {"http", "urllib", "socket", "wsgiref"} & set(imported(path)), path


def test_authoring_needs_its_own_few():
    for path in (RULES / "authoring").glob("*.py"):
        assert outside(path) <= AUTHORING_MAY, path


def test_sealing_needs_its_library_alone():
    for path in (RULES / "sealing").glob("*.py"):
        assert outside(path) <= SEALING_MAY, path
        assert "authoring" not in set(imported(path)), path


def test_the_service_imports_the_rules_and_not_their_authoring():
    for path in SERVICE.rglob("*.py"):
        assert outside(path) <= SERVICE_MAY, path
        assert "authoring" not in path.read_text(), path


def test_nothing_imports_the_service():
    for path in RULES.rglob("*.py"):
        assert "precontact_service" not in set(imported(path)), path


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(ROOT)))
def test_module_is_short(path):
    assert len(path.read_text().splitlines()) <= 400


def test_the_top_level_holds_what_it_should():
    allowed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "service", "rules", "openapi", "tests", "deploy"}
    assert {path.name for path in ROOT.iterdir() if not path.name.startswith(".")} <= allowed
