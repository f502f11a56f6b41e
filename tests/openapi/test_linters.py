"""What outside linters say of the document, and what schemathesis finds when it calls the running service by it."""
import json
import os
import re
import subprocess
import sys
from pathlib import Path

from serving import ROOT, served

TOOLS = Path(__file__).parent / "tools"
DOCUMENT = str(ROOT / "openapi" / "openapi.json")
CASES = 500
SECONDS = int(os.environ.get("PRECONTACT_FUZZ_SECONDS", "60"))


def tool(name, *arguments):
    """Run an npm tool of the tools folder; no telemetry, no look for newer versions."""
    environment = {**os.environ, "REDOCLY_TELEMETRY": "off", "REDOCLY_SUPPRESS_UPDATE_NOTICE": "true", "CI": "true"}
    return subprocess.run([str(TOOLS / "node_modules" / ".bin" / name), *arguments], cwd=TOOLS, capture_output=True, text=True, env=environment, timeout=120)


def test_redocly():
    done = tool("redocly", "lint", "--extends=recommended-strict", "--format=json", DOCUMENT)
    found = json.loads(done.stdout[done.stdout.index("{"):])
    assert done.returncode == 0 and found["totals"] == {"errors": 0, "warnings": 0, "ignored": 0}, json.dumps(found["problems"])[:3000]


def test_spectral():
    done = tool("spectral", "lint", "--ruleset", "spectral.yaml", "--fail-severity", "hint", DOCUMENT)
    assert done.returncode == 0, done.stdout[-3000:] + done.stderr[-3000:]


def test_spectral_would_notice(tmp_path, document):
    del document["info"]["description"], document["paths"]["/healthz"]["get"]["operationId"]
    (tmp_path / "broken.json").write_text(json.dumps(document))
    assert tool("spectral", "lint", "--ruleset", "spectral.yaml", "--fail-severity", "hint", str(tmp_path / "broken.json")).returncode == 1


def test_schemathesis(tmp_path):
    with served(tmp_path / "errors") as (port, _):
        done = subprocess.run(
            [sys.executable, "-m", "schemathesis.cli", "run", DOCUMENT, "--url", f"http://127.0.0.1:{port}", "--checks", "all", "--seed", "1",
             "--max-time", str(SECONDS), "--workers", "2", "--no-color"], capture_output=True, text=True, cwd=tmp_path, timeout=SECONDS * 3 + 120)
    assert done.returncode == 0, done.stdout[-6000:] + done.stderr[-2000:]
    assert int(re.search(r"(\d+) generated", done.stdout)[1]) >= CASES
    failures = [line for line in (tmp_path / "errors").read_text().splitlines() if '"event":"failure"' in line]
    assert not failures, failures[0]
