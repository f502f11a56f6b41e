"""Retirement of a released rule set: data, checked when it is read."""
import json

import pytest
from precontact_rules.retirement import NONE, RetirementFault, retirements

GOOD = {"deprecated": "2027-01-31", "sunset": "2027-06-01", "because": {"en": "1.1.0 is stricter", "es": "1.1.0 es más estricta"}}


def write(folder, rows):
    (folder / "retirement.json").write_text(rows if isinstance(rows, str) else json.dumps(rows))
    return folder


def test_none_is_the_rule(tmp_path):
    assert retirements(tmp_path, ["1.0.0"]) == {"1.0.0": NONE}
    assert retirements(write(tmp_path, {}), ["1.0.0"]) == {"1.0.0": NONE}


def test_one_of_two(tmp_path):
    assert retirements(write(tmp_path, {"1.0.0": GOOD}), ["1.0.0", "1.1.0"]) == {"1.0.0": GOOD, "1.1.0": NONE}
    without = {name: GOOD[name] for name in ("deprecated", "because")}
    assert retirements(write(tmp_path, {"1.0.0": without}), ["1.0.0"])["1.0.0"]["sunset"] is None


@pytest.mark.parametrize("rows, words", [
    ("{", "not JSON"), ([], "not an object by version"), ({"9.9.9": GOOD}, "never released; released: 1.0.0"), ({"1.0.0": {}}, "not an object of deprecated"),
    ({"1.0.0": {**GOOD, "more": 1}}, "not an object of deprecated"), ({"1.0.0": {**GOOD, "deprecated": None}}, "deprecated is null"),
    ({"1.0.0": {**GOOD, "deprecated": "31.1.2027"}}, "a date like"), ({"1.0.0": {**GOOD, "sunset": "2027-02-30"}}, "a date like"),
    ({"1.0.0": {**GOOD, "sunset": 20270601}}, "a date like"), ({"1.0.0": {**GOOD, "sunset": "20270601"}}, "a date like"),
    ({"1.0.0": {**GOOD, "sunset": "2027-01-30"}}, "is before deprecated"), ({"1.0.0": {**GOOD, "because": {"en": "only"}}}, "each of en, es")])
def test_what_cannot_be(tmp_path, rows, words):
    with pytest.raises(RetirementFault, match=words):
        retirements(write(tmp_path, rows), ["1.0.0"])
