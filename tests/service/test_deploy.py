"""deploy/run as a person meets it."""
import json
import os
import re
import shlex
import shutil
import signal
import socket
import subprocess
import sys
import time
import tomllib

import pytest
from serving import ROOT, free_port, wait_until_ready

RUN = ROOT / "deploy" / "run"


def environment(port):
    """What a fresh shell has: no Python path of ours."""
    kept = {key: value for key, value in os.environ.items() if key not in ("PYTHONPATH", "VIRTUAL_ENV", "PRECONTACT_KEYS")}
    return {**kept, "PORT": str(port)}


@pytest.fixture(scope="module")
def session(tmp_path_factory):
    """(everything printed up to the repeated command, port, exit status after Ctrl-C) of one run from another folder."""
    port, elsewhere = free_port(), tmp_path_factory.mktemp("elsewhere")
    process = subprocess.Popen([str(RUN)], cwd=elsewhere, env=environment(port), stdout=subprocess.PIPE, stderr=subprocess.DEVNULL, text=True, start_new_session=True)
    said = []
    for line in process.stdout:
        said.append(line)
        if line.startswith("    -d "):
            break
    text = "".join(said)
    command = text[text.index("  curl"):]
    body, path = shlex.split(command.replace("\\\n", " "))[-1], command.split(f":{port}")[1].split(" ")[0]
    import urllib.request
    request = urllib.request.Request(f"http://127.0.0.1:{port}{path}", body.encode(), {"Content-Type": "application/json"})
    answer = json.loads(urllib.request.urlopen(request, timeout=10).read())
    os.killpg(process.pid, signal.SIGINT)                # what Ctrl-C does: the whole group hears it
    status = process.wait(20)
    return text, answer, port, status


def test_the_greeting_names_the_field_page_and_says_loudly_what_its_key_is(session):
    text, _, port, _ = session
    assert f"http://127.0.0.1:{port}/field/" in text
    assert "\nDEVELOPMENT KEY: " in text and "PRECONTACT_KEYS" in text


def test_the_worked_check_is_in_words_and_numbers(session):
    text, answer, port, _ = session
    assert f"http://127.0.0.1:{port}" in text
    assert f"Verdict: {answer['verdict'].upper()}" in text
    flat = " ".join(text.split())
    assert all(" ".join(finding["sentence"].split()) in flat for finding in answer["findings"])
    assert all(" ".join(caution["text"].split()) in flat for caution in answer["cautions"])
    assert "probability between" in text and "{" not in text[:text.index("Repeat it:")]


def test_ctrl_c_ends_it_and_frees_the_port(session):
    _, _, port, status = session
    assert status == 0
    with socket.socket() as probe:
        probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        probe.bind(("127.0.0.1", port))


def test_a_taken_port_is_said_clearly():
    with socket.socket() as holder:
        holder.bind(("127.0.0.1", 0))
        holder.listen()
        port = holder.getsockname()[1]
        done = subprocess.run([str(RUN)], env=environment(port), capture_output=True, text=True, timeout=60)
    assert done.returncode == 1 and not done.stdout
    assert done.stderr.count("\n") == 1 and f"Port {port} is taken" in done.stderr and f"PORT={port + 1}" in done.stderr


@pytest.mark.parametrize("port", ["http", "0", "65536", "-1", ""])
def test_a_port_that_is_none(port):
    done = subprocess.run([str(RUN)], env=environment(port), capture_output=True, text=True, timeout=60)
    assert done.returncode == 1 and "from 1 to 65535" in done.stderr and "Traceback" not in done.stderr


def test_term_ends_it_too_and_the_second_run_is_quick():
    port, started = free_port(), time.monotonic()
    process = subprocess.Popen([str(RUN)], env=environment(port), stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL, start_new_session=True)
    wait_until_ready(port, process)
    assert time.monotonic() - started < 15
    process.terminate()
    assert process.wait(20) == 0


FAKE_ENVIRONMENT = """
import sys
from pathlib import Path
class Unable(Exception):
    pass
def environment(name, lock):
    return Path(sys.executable)
def installed_by_apt(packages):
    return False
def python_path():
    return ""
"""


def test_a_group_that_cannot_run_fails_the_command_unless_it_is_left_out(tmp_path):
    # The runner itself, on two made-up groups: one that runs, and one that needs a command that no machine has.
    for folder in ("deploy", "tests/fine", "tests/wanting"):
        (tmp_path / folder).mkdir(parents=True)
    (tmp_path / "deploy" / "environment.py").write_text(FAKE_ENVIRONMENT)
    shutil.copy(ROOT / "tests" / "run", tmp_path / "tests")
    (tmp_path / "tests" / "wanting" / "needs.json").write_text('{"commands": {"no-such-command": "no-such-package"}}')
    for group in ("fine", "wanting"):
        (tmp_path / "tests" / group / f"test_{group}.py").write_text("def test_it():\n    pass\n")

    def run(*arguments):
        return subprocess.run([sys.executable, str(tmp_path / "tests" / "run"), *arguments], capture_output=True, text=True, timeout=120)

    whole, less, unknown = run(), run("--leave-out", "wanting"), run("nonsense")
    assert whole.returncode == 1 and "NOT RUN: wanting: no-such-command" in whole.stderr and "1 passed" in whole.stdout
    assert less.returncode == 0 and "NOT RUN" not in less.stderr and "Left out as asked: wanting" in less.stdout
    assert less.stdout.strip().splitlines()[-1].strip("= ").startswith("1 passed")
    assert unknown.returncode == 2 and "fine, wanting" in unknown.stderr


@pytest.fixture
def environment_module(monkeypatch):
    """deploy/environment.py, which may install nothing."""
    monkeypatch.syspath_prepend(str(ROOT / "deploy"))
    import environment as module
    monkeypatch.setattr(module, "installed_by_apt", lambda packages: False)
    return module


def test_a_python_that_cannot_make_environments_is_said_clearly(environment_module, monkeypatch, tmp_path):
    broken = tmp_path / "python3"
    broken.write_text("#!/bin/sh\necho 'ensurepip is not available'\nexit 1\n")
    broken.chmod(0o755)
    monkeypatch.setattr(environment_module.sys, "executable", str(broken))
    monkeypatch.setattr(environment_module, "CACHE", tmp_path / "cache")
    monkeypatch.setattr(environment_module, "ROOT", tmp_path)
    lock = tmp_path / "requirements.lock"
    lock.write_text("")
    with pytest.raises(environment_module.Unable) as refused:
        environment_module.environment("service", lock)
    assert "apt-get install python3-venv" in str(refused.value) and "ensurepip is not available" in str(refused.value)
    assert not list((tmp_path / "cache").glob("service-*"))


def test_another_lock_makes_another_environment_and_drops_the_old(environment_module, monkeypatch, tmp_path):
    monkeypatch.setattr(environment_module, "CACHE", tmp_path / "cache")
    monkeypatch.setattr(environment_module, "ROOT", tmp_path)
    lock = tmp_path / "requirements.lock"
    lock.write_text("# one\n")
    first = environment_module.environment("service", lock)
    assert first.exists() and environment_module.environment("service", lock) == first
    lock.write_text("# two\n")
    second = environment_module.environment("service", lock)
    assert second != first and second.exists() and not first.exists()


def test_every_dependency_is_locked_with_hashes_and_both_locks_agree():
    def pins(path):
        lines = path.read_text().splitlines()
        return {line.split("==")[0]: line.split("==")[1].split(" ")[0] for line in lines if line[:1].isalnum()}

    service, tests = pins(ROOT / "deploy" / "requirements.lock"), pins(ROOT / "tests" / "requirements.lock")
    assert service.items() <= tests.items()
    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    extras = project["optional-dependencies"]
    direct = [*project["dependencies"], *extras["service"], *extras["sealing"]]
    direct.remove("precontact[sealing]")
    assert {name.lower(): version for name, version in (entry.split("==") for entry in direct)}.items() <= service.items()
    for path in (ROOT / "deploy" / "requirements.lock", ROOT / "tests" / "requirements.lock"):
        entries = re.split(r"\n(?=[a-z0-9])", path.read_text())[1:]
        assert entries and all("--hash=sha256:" in entry for entry in entries)
