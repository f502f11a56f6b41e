"""Every snippet of the embedding guide runs as it stands, and answers what the Python engine answers."""
import functools
import http.server
import json
import os
import shutil
import subprocess
import sys
import threading
import zipfile

import pytest

from .conftest import HANDHELD, HERE, QUESTION, said, with_packages


class Quiet(http.server.SimpleHTTPRequestHandler):
    """A plain web server that prints nothing."""

    def log_message(self, *_):
        """Nothing."""


@pytest.fixture
def served(rule_set_folder):
    """Address of a plain web server with the publisher's files."""
    with http.server.ThreadingHTTPServer(("127.0.0.1", 0), functools.partial(Quiet, directory=rule_set_folder)) as server:
        threading.Thread(target=server.serve_forever, daemon=True).start()
        yield f"http://127.0.0.1:{server.server_port}"
        server.shutdown()


def answered(released_set, language="en"):
    return json.loads(json.dumps(released_set.answer("loading-error", QUESTION, language)))


def test_node(app_folder, released_set):
    assert said(["node", "answer.mjs"], with_packages(app_folder("node"))) == answered(released_set)


def test_node_says_what_is_wrong_with_a_question(app_folder):
    folder = with_packages(app_folder("node"))
    script = folder / "answer.mjs"
    script.write_text(script.read_text().replace("resistance_ohm: 470000", "resistance_ohm: -1"))
    done = subprocess.run(["node", "answer.mjs"], cwd=folder, capture_output=True, text=True, timeout=300)
    assert not done.stdout and "/source/resistance_ohm: -1 ohm is outside the range" in done.stderr


def test_node_refuses_what_was_changed(app_folder):
    folder = with_packages(app_folder("node"))
    bundle = folder / "rule-set" / "1.0.0.json"
    bundle.write_bytes(bundle.read_bytes().replace(b"0.95", b"0.96", 1))
    done = subprocess.run(["node", "answer.mjs"], cwd=folder, capture_output=True, text=True, timeout=300)
    assert done.returncode and "bytes-changed" in done.stderr


def test_node_kept_up_to_date(app_folder, released_set, served):
    folder = with_packages(app_folder("node"))
    ask = ["node", "kept.mjs", served, json.dumps(QUESTION)]
    assert said(ask, folder) == answered(released_set, "es")
    offline = ["node", "kept.mjs", "http://127.0.0.1:9", json.dumps(QUESTION)]      # nothing listens there: what is kept goes on answering
    assert said(offline, folder) == answered(released_set, "es")


def test_web_view(app_folder, released_set):
    folder = app_folder("webview")
    shutil.copytree(HANDHELD, folder / "precontact-handheld", ignore=shutil.ignore_patterns("page", "node_modules"))
    questions = [{"id": 1, "check": "loading-error", "question": QUESTION, "language": "es"}, {"id": 2, "check": "loading-error", "question": {}}]
    ready, answer, refused = said(["node", HERE / "web_view.mjs", shutil.which("chromium"), folder, json.dumps(questions)], folder)
    cases = len(released_set.data["cases"])
    assert ready == {"ready": "1.0.0", "proof": {"agree": cases, "of": cases, "wrong": []}}
    assert answer == {"id": 1, "answer": answered(released_set, "es")}
    assert refused["id"] == 2 and {"/circuit"} <= {problem["pointer"] for problem in refused["problems"]}


@pytest.mark.parametrize("changed", [False, True])
def test_react_native(app_folder, released_set, served, changed):
    """In a JavaScript context that has nothing but the language itself, a clock, a timer and a fetch without streams."""
    folder = with_packages(app_folder("native"))
    shutil.copy(folder / "rule-set" / "keys.json", folder)
    report = said(["node", HERE / "native.mjs", folder, served, json.dumps(QUESTION), str(changed)], folder)
    assert report["missing"] == ["TextDecoder", "TextEncoder", "atob", "btoa", "crypto", "document", "process", "window"]
    if changed:
        assert (report["update"]["state"], report["update"]["reason"]["code"]) == ("refused", "wrong-digest")
        return
    assert report["update"]["state"] == "installed" and report["proof"] == {"agree": 366, "of": 366, "wrong": []}
    assert report["answer"] == answered(released_set)


@pytest.fixture(scope="session")
def installed(wheel, tmp_path_factory):
    """A folder with what the wheel of this repository installs."""
    folder = tmp_path_factory.mktemp("installed")
    zipfile.ZipFile(wheel).extractall(folder)
    return folder


# Refuses what an app that embeds the engine need not have; numpy's own optional parts may stay.
WITHOUT_FRAMEWORK = """
import importlib.abc, runpy, sys
class Refusing(importlib.abc.MetaPathFinder):
    def find_spec(self, name, path=None, target=None):
        if name.split(".")[0] in {refused}:
            raise ImportError(f"{{name}} is not here")
sys.meta_path.insert(0, Refusing())
runpy.run_path(sys.argv[1], run_name="__main__")
"""
FRAMEWORK = {"flask", "flask_smorest", "marshmallow", "apispec", "webargs", "orjson", "gunicorn", "werkzeug", "yaml", "pint"}


@pytest.mark.parametrize("script, refused", [("answer.py", FRAMEWORK | {"joserfc", "cryptography"}), ("verified.py", FRAMEWORK)])
def test_python(app_folder, released_set, installed, script, refused):
    folder = app_folder("python")
    command = [sys.executable, "-c", WITHOUT_FRAMEWORK.format(refused=refused), script]
    assert said(command, folder, env={**os.environ, "PYTHONPATH": str(installed)}) == answered(released_set)


def test_every_snippet_is_run(snippets):
    assert set(snippets) == {"node/answer.mjs", "node/kept.mjs", "webview/index.html", "webview/bridge.js", "native/engine.js", "native/precontact.js",
                             "python/answer.py", "python/verified.py"}
