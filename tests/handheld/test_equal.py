"""The handheld runtime says what the Python engine says: to generated questions and every worked case, in Node and in a browser, to the last bit."""
import json
import shutil

import pytest

from precontact_rules import RuleSet
from precontact_rules.authoring.build import build, canonical

from .conftest import HERE, RUNTIME
from .python_side import again, differences, line_of
from .questions import cases, questions

COUNTS = {"device-trip": 6500, "induced-voltage": 2300, "loading-error": 6400, "loop-shift": 5200}
LEAST = 20_000
EXAMPLE = HERE.parent / "rules" / "example"
PROBLEMS = {"bad-characters", "missing", "not-applicable", "not-finite", "not-uncertain", "out-of-range", "too-few-items", "too-long", "too-many-items",
            "too-many-uncertain", "two-spreads", "unknown-choice", "unknown-field", "unknown-id", "wrong-type"}
SCRIPTS = ("compare_node.js", "compare_chromium.js")


class Written:
    """A file of questions with the digests of Python's answers, and what those answers held."""

    def __init__(self, rule_set, folder, asked):
        self.rule_set, self.path, self.bundle = rule_set, folder / "questions.jsonl", folder / "bundle.json"
        self.bundle.write_bytes(rule_set.bytes)
        self.count, self.codes, self.problems, self.values = 0, {}, set(), {}
        with open(self.path, "w") as file:
            for question in asked:
                line, answer = line_of(rule_set, question)
                file.write(line)
                self.count += 1
                self._look_at(question.check, json.loads(answer))

    def _look_at(self, check, answer):
        if isinstance(answer, list):
            self.problems.update(problem["code"] for problem in answer)
            return
        self.codes.setdefault(check, set()).update(finding["code"] for finding in answer["findings"])
        self.values.setdefault(check, set()).update(step["name"] for step in answer["working"] if step.get("value") is not None)


def assert_equal(written, report):
    """Fails with the first differing question, and for it every path with both values."""
    assert "failed" not in report, report
    assert report["count"] == written.count
    if report["differing"]:
        first = "\n".join(explained(written.rule_set, report["differences"][:3]))
        raise AssertionError(f"{report['differing']} of {report['count']} differ; the first:\n{first}")
    assert report.get("violations", []) == []


def explained(rule_set, found):
    """Each difference in words: the question, then path, Python's value, the runtime's value."""
    for difference in found:
        question, ours = again(rule_set, difference["line"])
        yield json.dumps({key: question[key] for key in ("check", "language", "body")}, ensure_ascii=False)
        if difference["said"].startswith("threw "):
            yield "  the runtime " + difference["said"]
            continue
        for path, a, b in list(differences(ours, json.loads(difference["said"])))[:20]:
            yield f"  {path or '/'}: Python {a}; JavaScript {b}"


@pytest.fixture(scope="module")
def generated(released_set, tmp_path_factory):
    return Written(released_set, tmp_path_factory.mktemp("generated"), questions(released_set.data, COUNTS))


@pytest.fixture(scope="module")
def worked(released_set, tmp_path_factory):
    return Written(released_set, tmp_path_factory.mktemp("worked"), cases(released_set.data))


@pytest.fixture(scope="module")
def language(tmp_path_factory):
    """The example of the rule language, and a check that uses all that the language has."""
    source = tmp_path_factory.mktemp("language") / "source"
    for folder in (EXAMPLE, HERE / "language"):
        shutil.copytree(folder, source, dirs_exist_ok=True)
    bundle, faults, _ = build(source)
    assert not faults, "\n".join(map(str, sorted(faults)))
    rule_set = RuleSet(canonical(bundle))
    return Written(rule_set, source.parent, questions(bundle, {"demo": 300, "whole": 250}))


@pytest.mark.parametrize("script", SCRIPTS)
def test_generated_questions(generated, run_script, script):
    assert generated.count >= LEAST
    assert_equal(generated, run_script(script, RUNTIME, generated.bundle, generated.path))


@pytest.mark.parametrize("script", SCRIPTS)
def test_every_worked_case_in_both_languages(worked, run_script, script):
    assert worked.count == 2 * len(worked.rule_set.data["cases"])
    assert_equal(worked, run_script(script, RUNTIME, worked.bundle, worked.path))


@pytest.mark.parametrize("script", SCRIPTS)
def test_the_whole_language(language, run_script, script):
    assert_equal(language, run_script(script, RUNTIME, language.bundle, language.path))


def test_the_questions_reach_the_rules(generated, worked):
    declared = {check: {finding["code"] for finding in body["findings"]} for check, body in generated.rule_set.data["checks"].items()}
    by_cases = {check: codes - worked.codes[check] for check, codes in declared.items()}
    reached = {check: codes - worked.codes[check] - generated.codes[check] for check, codes in declared.items()}
    print(f"\nfindings no question reaches: {reached}; no worked case: {by_cases}")
    assert not any(reached.values()), reached
    assert generated.problems == PROBLEMS


@pytest.mark.parametrize("script", SCRIPTS)
def test_a_difference_of_one_bit_is_found(worked, run_script, tmp_path, script):
    """The comparison itself: an answer altered in one last place must be reported, and nothing else."""
    lines = worked.path.read_text().splitlines(keepends=True)[:8]
    other = json.loads(lines[3])
    other["sha256"] = other["sha256"][:-1] + ("0" if other["sha256"][-1] != "0" else "1")
    lines[3] = json.dumps(other) + "\n"
    path = tmp_path / "altered.jsonl"
    path.write_text("".join(lines))
    report = run_script(script, RUNTIME, worked.bundle, path)
    assert (report["count"], report["differing"]) == (8, 1)
    assert json.loads(report["differences"][0]["line"])["body"] == other["body"]


def test_the_policy_of_the_browser_refuses_text_as_code(run_script):
    found = run_script("policy_chromium.js", RUNTIME)
    assert found["eval"] == found["Function"] == "EvalError" and found["timer"]


def test_a_difference_is_explained_by_path_and_bits():
    found = list(differences({"a": [1, {"b": 0.1}], "c": 1.0}, {"a": [1, {"b": 0.10000000000000002}], "c": 1}))
    assert found == [("/a/1/b", "0.1 = 0x1.999999999999ap-4", "0.10000000000000002 = 0x1.999999999999bp-4")]
    assert list(differences({"b": None}, {"b": False, "c": "x"})) == [("/b", "null", "false"), ("/c", '"(nothing)"', '"x"')]
