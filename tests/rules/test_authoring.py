"""The authoring tools: every kind of fault is found, placed and explained; a release never changes."""
import json
import shutil
from pathlib import Path

import pytest
import rfc8785
import yaml
from precontact_rules import RuleSet, UnknownLanguage
from precontact_rules.authoring import units
from precontact_rules.authoring.__main__ import main
from precontact_rules.authoring.build import canonical
from precontact_rules.authoring.contrast import contrasted
from precontact_rules.authoring.expression import ExpressionFault, parse
from precontact_rules.authoring.release import changed_releases, proved, release

HERE = Path(__file__).parent
DEMO = HERE / "example"
BROKEN = yaml.safe_load((HERE / "broken.yaml").read_text())


def test_the_demonstration_has_no_fault():
    bundle, faults = proved(DEMO)
    assert not faults
    assert [case["id"] for case in bundle["cases"]] == ["digital", "remembered"]


@pytest.mark.parametrize("name", BROKEN)
def test_a_fault_is_found_placed_and_explained(name, tmp_path):
    fault = BROKEN[name]
    shutil.copytree(DEMO, tmp_path / "source")
    path = tmp_path / "source" / fault["file"]
    text = path.read_text()
    assert fault["old"] in text, "the demonstration changed; this test no longer breaks it"
    path.write_text(text.replace(fault["old"], fault["new"], 1))
    _, faults = proved(tmp_path / "source")
    matching = [f for f in faults if fault["says"] in str(f)]
    assert matching, [str(f) for f in faults]
    assert matching[0].line >= 1 and matching[0].expected


@pytest.mark.parametrize("text, tree", [
    ("a + b * c", ["add", ["name", "a"], ["mul", ["name", "b"], ["name", "c"]]]),
    ("-(a ** 2)", ["neg", ["pow", ["name", "a"], 2]]),
    ("(-a) ** -1", ["pow", ["neg", ["name", "a"]], -1]),
    ('x in ("a", "b")', ["in", ["name", "x"], ["a", "b"]]),
    ("a if not b else absent", ["if", ["not", ["name", "b"]], ["name", "a"], ["absent"]]),
    ("lookup(t.y, x.z)", ["lookup", "t.y", ["name", "x.z"]]),
    ("sum_over(node, 2)", ["sum_over", "node", 2]),
])
def test_expressions_become_trees(text, tree):
    assert parse(text) == tree


@pytest.mark.parametrize("text", ["a < b < c", "-a ** 2", "a ** b", "a ** 0.5", "2.5 * a", "f(x)", "a[0]", "lambda: 1", "a @ b", "'x'.y", "a if b", "sum_over(node)", "__import__('os')"])
def test_what_is_not_the_language_is_refused(text):
    with pytest.raises(ExpressionFault) as fault:
        parse(text)
    assert fault.value.found and fault.value.expected


@pytest.mark.parametrize("value, unit, target, si", [
    (10, "megaohm", "ohm", 1e7), (100, "picofarad", "farad", 1e-10), (1.5, "percent", "ratio", 0.015), (21, "picofarad / foot", "farad_per_metre", 21e-12 / 0.3048),
    (30, "milliampere", "ampere", 0.03), (1, "degree", "radian", 0.017453292519943295), (250, "foot", "metre", 76.2),
])
def test_units_convert_to_the_nearest_float(value, unit, target, si):
    assert units.to_si(value, unit, target) == pytest.approx(si, rel=1e-15)


def test_a_unit_of_another_dimension_is_refused():
    with pytest.raises(ValueError, match="not a unit of ohm"):
        units.to_si(1, "volt", "ohm")


def test_bundle_bytes_are_canonical_and_repeatable():
    bundle, _ = proved(DEMO)
    again, _ = proved(DEMO)
    assert canonical(bundle) == canonical(again) == rfc8785.dumps(json.loads(canonical(bundle)))


def test_a_release_is_never_changed(tmp_path):
    bundle, _ = proved(DEMO)
    digest, error = release(bundle, tmp_path)
    assert error is None and RuleSet((tmp_path / "0.0.1.json").read_bytes()).digest == digest
    assert release(bundle, tmp_path) == (digest, None)
    _, error = release({**bundle, "title": {"en": "other", "es": "otro"}}, tmp_path)
    assert "raise the version" in error
    (tmp_path / "0.0.1.json").write_bytes(canonical(bundle) + b" ")
    assert changed_releases(tmp_path) == ["0.0.1"]
    assert "edited" in release({**bundle, "version": "0.0.2"}, tmp_path)[1]


def test_another_language_version_is_refused():
    bundle, _ = proved(DEMO)
    with pytest.raises(UnknownLanguage, match="language 2"):
        RuleSet(canonical({**bundle, "language": 2}))


def test_contrast_names_what_moved(tmp_path):
    shutil.copytree(DEMO, tmp_path / "source")
    path = tmp_path / "source/instruments/digital.yaml"
    path.write_text(path.read_text().replace("value: 10,", "value: 5,"))
    old, new = (RuleSet(canonical(proved(folder, True)[0])) for folder in (DEMO, tmp_path / "source"))
    lines = list(contrasted(old, new))
    assert any("instrument.digital.fields.input_resistance.value: 10000000 -> 5000000 (-50 %)" in line for line in lines), lines
    assert any(line.startswith("case digital: loaded_volt 11.9988") for line in lines)
    assert list(contrasted(old, old)) == []


def test_command_line(tmp_path, capsys):
    assert main(["--source", str(DEMO), "proofread"]) == 0
    assert "0 faults" in capsys.readouterr().out
    question = tmp_path / "question.json"
    question.write_text('{"circuit": "plain", "source": {"voltage_volt": 12, "resistance_ohm": 1000}, "instrument": "digital"}')
    assert main(["--source", str(DEMO), "walk", "demo", str(question), "--language", "es"]) == 0
    assert "Lee 12 V." in capsys.readouterr().out.replace("\u00a0", " ")
    question.write_text('{"circuit": "plain"}')
    assert main(["--source", str(DEMO), "walk", "demo", str(question)]) == 1
    assert "/source" in capsys.readouterr().out
    assert main(["--source", str(DEMO), "release", "--draft", str(tmp_path / "draft.json")]) == 0
    assert main(["--source", str(DEMO), "contrast", str(tmp_path / "draft.json"), "source"]) == 0
    assert "0 differences" in capsys.readouterr().out
