"""Waits until the service is ready, asks it one question, and shows the answer as a person would read it: greeting.py SERVER_PID HOST PORT."""
import http.client
import json
import os
import shlex
import signal
import sys
import textwrap
import time
from pathlib import Path

from precontact_rules.phrase import number_text

QUESTION = Path(__file__).resolve().parent / "first_question.json"
_PATIENCE = 60      # seconds until readiness
_WIDTH = 100
_DEVELOPMENT = ("DEVELOPMENT KEY: its rule sets are sealed with a key made for this run and gone with it. Before anybody relies on them, set PRECONTACT_KEYS to "
                "a key file (DEVELOPERS.md, Keys).")


def greet(server, host, port):
    """Exit status: 0 when the check was shown, or when the server ended by itself."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)       # Ctrl-C is for the server
    host = "127.0.0.1" if host in ("0.0.0.0", "::") else host
    try:
        if _ready(server, host, port):
            print(worked_check(host, port), flush=True)
        return 0
    except (OSError, ValueError, KeyError) as error:
        print(f"deploy/run: the service runs, but the worked check failed: {error!r}", file=sys.stderr, flush=True)
        return 1


def _ready(server, host, port):
    until = time.monotonic() + _PATIENCE
    complaint = f"not ready after {_PATIENCE} s; the log above says why."
    while time.monotonic() < until:
        if os.getppid() != server:
            return False
        try:
            status, said = _ask(host, port, "GET", "/readyz")
            if status == 200:
                return True
            complaint = f"it runs, but must not be used: {said['detail']}"
            break
        except OSError:
            time.sleep(0.1)
    print(f"deploy/run: {complaint} Stopping.", file=sys.stderr, flush=True)
    os.kill(server, signal.SIGTERM)
    return False


def _ask(host, port, method, path, body=None):
    connection = http.client.HTTPConnection(host, port, timeout=10)
    try:
        connection.request(method, path, body, {"Content-Type": "application/json"} if body else {})
        response = connection.getresponse()
        return response.status, json.loads(response.read())
    finally:
        connection.close()


def worked_check(host, port):
    """The question of first_question.json, its answer in words and numbers, and the command that repeats it."""
    question = json.loads(QUESTION.read_text())
    path, body = f"/v1/checks/{question['check']}", json.dumps(question["body"])
    status, answer = _ask(host, port, "POST", path, body)
    if status != 200:
        raise ValueError(answer)
    _, described = _ask(host, port, "GET", path)
    _, keys = _ask(host, port, "GET", "/v1/keys")
    lines = [
        f"Precontact is ready on http://{host}:{port} (rule set {answer['rule_set']['version']}). Stop with Ctrl-C.",
        f"Its API: http://{host}:{port}/  The field page, which goes on without a network: http://{host}:{port}/field/",
        *(["", _paragraph(_DEVELOPMENT, "")] if keys["development"] else []),
        "", f"A check, worked: {question['about']}", "", f"  Verdict: {answer['verdict'].upper()}",
        *(_paragraph(finding["sentence"], "  ") for finding in answer["findings"]),
        "", "  Numbers:", *_numbers(answer, described),
        "", "  Cautions:", *(_paragraph(f"{caution['word'].upper()}: {caution['text']}", "    ") for caution in answer["cautions"]),
    ]
    if answer["assumptions"]:
        lines += ["", "  Assumed:", *(_paragraph(item["because"], "    ") for item in answer["assumptions"])]
    lines += ["", "Repeat it:", f"  curl -s http://{host}:{port}{path} -H 'Content-Type: application/json' \\", f"    -d {shlex.quote(body)}", ""]
    return "\n".join(lines)


def _paragraph(text, indent):
    return textwrap.fill(text, _WIDTH, initial_indent=indent, subsequent_indent=indent + "  ", break_on_hyphens=False)


def _numbers(answer, described):
    """One line for each result that has a number: its meaning, value and interval."""
    for result in described["results"]:
        shown = answer["results"].get(result["key"])
        if isinstance(shown, dict) and isinstance(shown["value"], (int, float)) and not isinstance(shown["value"], bool):
            value, low, high = (None if shown.get(key) is None else _text(shown[key], result["unit"], described["units"]) for key in ("value", "low", "high"))
            if low:
                value += f", with 95 % probability between {low} and {high}"
            yield _paragraph(f"{result['meaning']['en']}: {value}", "    ")


def _text(value, unit, units):
    """A result with its unit, as in the sentences of an answer."""
    return number_text(value * units[unit]["factor"], unit, units, "en")


if __name__ == "__main__":
    sys.exit(greet(int(sys.argv[1]), sys.argv[2], int(sys.argv[3])))
