"""The handheld runtime against the Python engine on the same questions, in one run and alternating rounds; only ratios count (-s shows medians)."""
import json
import statistics
import subprocess
import time

import pytest

from precontact_rules import sealing
from precontact_rules.sealing import KeyRing

from .conftest import HERE, RUNTIME
from .drawing import stated

ROUNDS = 9
WARMING = 2               # seconds in which an engine that compiles as it runs comes to its full speed
MOST_QUESTIONS = 24       # of one set
MOST = {"exact": 1, "uncertain": 3, "posterior": 4}
MOST_START = 10           # uncertain checks
MOST_SLOWED = 10          # a phone's processor, a quarter as fast, against Python here


def exact(part):
    """The body without any spread."""
    if isinstance(part, dict):
        return stated(part) if {"value", "between"} & part.keys() else {key: exact(value) for key, value in part.items()}
    return [exact(item) for item in part] if isinstance(part, list) else part


class Spreading:
    """Gives every number that may be uncertain a spread, those of catalogue entries too."""

    def __init__(self, bundle):
        self.bundle, self.count = bundle, 0

    def body(self, fields, given):
        made = dict(given)
        for field in fields:
            value = given.get(field["key"])
            if value is None:
                continue
            if field["kind"] == "group":
                made[field["key"]] = self.body(field["fields"], value)
            elif field["kind"] == "list":
                made[field["key"]] = [self.body(field["fields"], item) for item in value]
            elif field["kind"] == "reference":
                made[field["key"]] = self.reference(field["of"], value)
            elif field.get("uncertain") and stated(value):
                self.count += 1
                spread = {"half_width_percent": 3} if self.count % 3 else {"standard_uncertainty": abs(stated(value)) / 50}
                made[field["key"]] = {"value": stated(value), **spread}
        return made

    def reference(self, kind, given):
        given = {"id": given} if isinstance(given, str) else given
        fields = self.bundle["kinds"][kind]["fields"]
        stored = self.bundle["entries"][kind][given["id"]]["fields"] if "id" in given else {}
        numbers = {f["key"]: stored[f["name"]]["value"] / self.bundle["units"][f["unit"]]["factor"]
                   for f in fields if f.get("uncertain") and f["name"] in stored}
        return self.body(fields, {**numbers, **given})


def spread(bundle, case):
    """(how many uncertain numbers, question) of a worked case with every number spread that may be."""
    spreading = Spreading(bundle)
    body = spreading.body(bundle["checks"][case["check"]]["inputs"], case["input"])
    return spreading.count, {"check": case["check"], "body": body}


def is_sampled(rule_set, check, body):
    """Whether the answer rests on samples even so: of a quantity that the rules take as unknown, such as an angle."""
    question = rule_set.question(check)
    return question.plan(question.intake(body)).uniform_count > 0


@pytest.fixture(scope="module")
def sets(released_set):
    """{name: questions}: every exact case of a check, its cases with most uncertain numbers with all of them spread, and the posterior's."""
    made, bundle = {}, released_set.data
    for check in bundle["checks"]:
        cases = [case for case in bundle["cases"] if case["check"] == check]
        if check == "induced-voltage":
            made["posterior " + check] = [{"check": check, "body": case["input"]} for case in cases if case["input"].get("readings")]
            continue
        bodies = [exact(case["input"]) for case in cases]
        made["exact " + check] = [{"check": check, "body": body} for body in bodies if not is_sampled(released_set, check, body)]
        fullest = sorted((spread(bundle, case) for case in cases), key=lambda found: -found[0])[:MOST_QUESTIONS]
        made["uncertain " + check] = [question for count, question in fullest if count > 1]
    for questions in made.values():
        for question in questions:
            released_set.answer(question["check"], question["body"])      # valid, and this engine is warm
    return made


@pytest.fixture(scope="module")
def sets_path(sets, tmp_path_factory):
    path = tmp_path_factory.mktemp("speed") / "sets.json"
    path.write_text(json.dumps(sets))
    return path


class Node:
    """A Node process that runs sets of questions when told to."""

    def __init__(self, *arguments):
        self.process = subprocess.Popen(["node", HERE / "speed_node.js", *arguments], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True)

    def run(self, name, repeat=1):
        """Seconds."""
        self.process.stdin.write(json.dumps({"set": name, "repeat": repeat}) + "\n")
        self.process.stdin.flush()
        return json.loads(self.process.stdout.readline()) / 1000

    def close(self):
        self.process.stdin.close()
        self.process.stdout.close()
        self.process.wait(10)


@pytest.fixture(scope="module")
def node(bundle_path, sets_path):
    process = Node(RUNTIME, bundle_path, sets_path)
    yield process
    process.close()


def python(rule_set, questions, repeat=1):
    """Seconds."""
    start = time.perf_counter()
    for _ in range(repeat):
        for question in questions:
            rule_set.answer(question["check"], question["body"])
    return time.perf_counter() - start


NAMES = ["exact device-trip", "exact loading-error", "exact loop-shift", "uncertain device-trip", "uncertain loading-error", "uncertain loop-shift",
         "posterior induced-voltage"]


@pytest.mark.parametrize("name", NAMES)
def test_against_the_python_engine(benchmark, released_set, sets, node, name):
    questions = sets[name]
    spent = 0
    while spent < WARMING:
        spent += node.run(name)
    repeat = max(1, round(0.15 / python(released_set, questions)))
    rounds = []
    benchmark.pedantic(lambda: rounds.append((node.run(name, repeat), python(released_set, questions, repeat))), rounds=ROUNDS, iterations=1)
    ratio = statistics.median(ours / theirs for ours, theirs in rounds)
    each = [statistics.median(side) / repeat / len(questions) * 1000 for side in zip(*rounds)]
    benchmark.extra_info.update({"Node / Python": ratio, "milliseconds, Node and Python": each})
    print(f"\n{name}: {ratio:.2f} of the Python engine's time; medians {each[0]:.3f} ms in Node, {each[1]:.3f} ms in Python")
    assert ratio <= MOST[name.split()[0]]


def test_an_uncertain_check_on_a_slow_processor(benchmark, released_set, sets, bundle_path, sets_path, run_script):
    found = benchmark.pedantic(lambda: run_script("speed_chromium.js", RUNTIME, bundle_path, sets_path), rounds=1, iterations=1)
    benchmark.extra_info.update(found)
    print()
    for name, questions in sets.items():
        here = min(python(released_set, questions) for _ in range(3)) / len(questions) * 1000
        full, slowed = found["full"][name], found["slowed"][name]
        print(f"{name}: Python {here:.2f} ms; Chromium {full['median']:.2f} ms, at most {full['most']:.2f}; "
              f"slowed 4 times {slowed['median']:.2f} ms, at most {slowed['most']:.2f}")
        if not name.startswith("exact"):
            assert slowed["median"] / here <= MOST_SLOWED * MOST[name.split()[0]]


def test_start(benchmark, released_set, sets, tmp_path, bundle_path, run_script):
    """A device starts, and asks its first question, with an engine that has run nothing yet: so both are measured in new processes; and warm."""
    ring, seal, keys, asked = KeyRing.ephemeral(), tmp_path / "seal.json", tmp_path / "keys.json", {}
    seal.write_bytes(sealing.seal(released_set.bytes, ring))
    keys.write_bytes(ring.key_list().bytes)
    for name in (name for name in sets if name.startswith("uncertain")):
        asked[name] = tmp_path / f"{name}.json"
        asked[name].write_text(json.dumps(sets[name][0]))
    rounds = []

    def one_round():
        run = lambda *what: run_script("start_node.js", RUNTIME, bundle_path, seal, keys, *what)        # noqa: E731
        rounds.append({"first": run("first"), "later": run("later"), **{name: run("ask", path) for name, path in asked.items()}})

    benchmark.pedantic(one_round, rounds=5, iterations=1)
    print()
    for state in ("cold", "warm"):
        check = [statistics.fmean(found[name][state] for name in asked) for found in rounds]
        ratios = {what: statistics.median(found[what][state] / one for found, one in zip(rounds, check)) for what in ("first", "later")}
        taken = {what: statistics.median(found[what][state] for found in rounds) for what in ("first", "later")}
        print(f"{state}: an uncertain check {statistics.median(check):.1f} ms; a first start, all cases proved, {taken['first']:.0f} ms, "
              f"{ratios['first']:.1f} checks; a later one, one case of each check proved, {taken['later']:.0f} ms, {ratios['later']:.1f} checks")
        benchmark.extra_info[state] = {"milliseconds": taken, "start / uncertain check": ratios}
        assert ratios["later"] <= MOST_START
