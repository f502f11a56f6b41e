"""The verbs of those who publish: what they print, what they write, and what they refuse."""
import json
import re

import pytest
from precontact_rules import released, sealing
from precontact_rules.authoring.__main__ import main
from precontact_rules.sealing import KeyList, KeyRing, field

VERSION = released.latest().version


@pytest.fixture
def run(capsys, monkeypatch):
    """Run a verb; (exit code, what it printed)."""
    monkeypatch.delenv("PRECONTACT_KEYS", raising=False)

    def run(*arguments):
        code = main([str(argument) for argument in arguments])
        return code, capsys.readouterr().out

    return run


def test_the_steps_of_a_rotation_and_of_a_revocation_as_they_are_described(run, tmp_path):
    keys, first, second, third = tmp_path / "keys.json", tmp_path / "first", tmp_path / "second", tmp_path / "third"
    code, said = run("cut", "--new", keys)
    old = re.match(r"key ([\w-]{43}) added; .* serial 1 and 1 valid key\n", said)[1]
    assert code == 0 and run("seal", first, "--keys", keys)[0] == 0
    code, said = run("cut", keys)
    assert code == 0 and "serial 2 and 2 valid keys" in said
    assert run("seal", second, "--keys", keys)[0] == 0
    code, said = run("disown", keys, old, "--because", "replaced")
    assert code == 0 and "serial 3 and 1 valid key\n" in said
    assert run("seal", third, "--keys", keys)[0] == 0

    def vet(what, of, trusted):
        return run("vet", of / f"{what}.json", of / f"{what}.seal.json", trusted / "keys.json")

    assert vet(VERSION, first, first)[0] == vet(VERSION, second, first)[0] == vet(VERSION, second, third)[0] == 0
    assert "may take the place of serial 1" in vet("keys", second, first)[1] and vet("keys", third, second)[0] == 0
    code, said = vet(VERSION, first, third)
    assert code == 1 and said.startswith("revoked-key") and "replaced" in said
    assert vet(VERSION, third, first)[1].startswith("unknown-key")          # who missed the list in between must be given the keys anew
    assert vet("keys", first, second)[1].startswith("not-newer")
    assert (first / f"{VERSION}.json").read_bytes() == released.latest().bytes


def test_a_changed_bundle_is_refused(run, tmp_path):
    run("cut", "--new", tmp_path / "keys.json")
    run("seal", tmp_path / "out", "--keys", tmp_path / "keys.json")
    bundle = tmp_path / "out" / f"{VERSION}.json"
    bundle.write_bytes(bundle.read_bytes().replace(b"10000", b"10001", 1))
    code, said = run("vet", bundle, bundle.with_name(f"{VERSION}.seal.json"), tmp_path / "out" / "keys.json")
    assert code == 1 and said.startswith("bytes-changed")


def test_the_key_file_of_the_environment(run, tmp_path, monkeypatch):
    run("cut", "--new", tmp_path / "keys.json")
    code, said = run("seal", tmp_path / "out")
    assert code == 1 and "give --keys FILE or set PRECONTACT_KEYS" in said and not (tmp_path / "out").exists()
    monkeypatch.setenv("PRECONTACT_KEYS", str(tmp_path / "keys.json"))
    assert run("seal", tmp_path / "out")[0] == 0


def test_a_serial_that_does_not_rise_is_refused(run, tmp_path):
    keys, out = tmp_path / "keys.json", tmp_path / "out"
    run("cut", "--new", keys)
    before = keys.read_bytes()
    run("cut", keys)
    assert run("seal", out, "--keys", keys)[0] == run("seal", out, "--keys", keys)[0] == 0
    there = (out / "keys.json").read_bytes()
    keys.write_bytes(before)
    code, said = run("seal", out, "--keys", keys)
    assert code == 1 and "has serial 2 and these keys have 1" in said and (out / "keys.json").read_bytes() == there
    run("cut", keys)                                      # serial 2 again, with another key
    code, said = run("seal", out, "--keys", keys)
    assert code == 1 and "a serial that rises" in said
    (out / "keys.json").write_text("{}")
    assert "is not a key list" in run("seal", out, "--keys", keys)[1]


def test_faults_are_one_line(run, tmp_path):
    (tmp_path / "bad.json").write_text("{")
    for arguments, words in ((("cut", tmp_path / "none.json"), "cut --new"), (("cut", tmp_path / "bad.json"), "not JSON"),
                             (("seal", tmp_path / "out", "--keys", tmp_path / "none.json"), "there is no key file"),
                             (("vet", tmp_path / "none", tmp_path / "none", tmp_path / "none"), "No such file"),
                             (("seal", tmp_path / "bad.json", "--keys", tmp_path / "good.json"), "cannot be written")):
        if "good.json" in str(arguments[-1]):
            run("cut", "--new", tmp_path / "good.json")
        code, said = run(*arguments)
        assert code == 1 and words in said and said.count("\n") == 1, said


PAGE = {"index.html": "<!doctype html>", "sub/page.js": "export {}", "worker.js": "", "note.map": "not served", ".hidden/x.js": "", "node_modules/y.js": ""}


@pytest.fixture
def handheld(tmp_path):
    """A made-up field page with its runtime."""
    folder = tmp_path / "handheld"
    for name, text in {**{f"page/{name}": text for name, text in PAGE.items()}, "index.js": "export {}", "package.json": "{}"}.items():
        (folder / name).parent.mkdir(parents=True, exist_ok=True)
        (folder / name).write_text(text)
    return folder


def test_the_page_is_what_the_folder_holds_and_nothing_hidden(handheld):
    assert sorted(field.page_files(handheld)) == ["index.html", "runtime/index.js", "sub/page.js", "worker.js"]
    assert field.page_files(None) == {}


def test_a_static_export_is_whole_and_verifies(run, tmp_path, handheld, monkeypatch):
    page = field.page_files(handheld)
    monkeypatch.setattr(field, "page_files", lambda: page)
    run("cut", "--new", tmp_path / "keys.json")
    out = tmp_path / "out"
    code, said = run("pack", out, "--keys", tmp_path / "keys.json")
    rule_set = [f"rule-set/{name}" for name in (f"{VERSION}.json", f"{VERSION}.seal.json", "keys.json", "keys.seal.json", "latest.json")]
    assert code == 0 and "DEVELOPMENT" not in said
    assert sorted(path.relative_to(out).as_posix() for path in out.rglob("*") if path.is_file()) == sorted([*page, *rule_set])
    latest = json.loads((out / "rule-set" / "latest.json").read_bytes())
    bundle = (out / "rule-set" / latest["bundle"]).read_bytes()
    keys = KeyList.read((out / "rule-set" / "keys.json").read_bytes())
    opened = sealing.opened(bundle, (out / "rule-set" / latest["seal"]).read_bytes(), keys)
    assert (opened.version, opened.digest, len(bundle)) == (latest["version"], latest["digest"], latest["bytes"])
    assert latest.keys() == {"version", "digest", "bytes", "bundle", "seal", "deprecated", "sunset", "because"}
    sealing.check(keys.bytes, (out / "rule-set" / "keys.seal.json").read_bytes(), keys, sealing.KEYS)
    assert list(keys.keys) == list(KeyRing.read(tmp_path / "keys.json").keys)


def test_a_trial_export_says_loudly_what_its_key_is(run, tmp_path, handheld, monkeypatch):
    page = field.page_files(handheld)
    monkeypatch.setattr(field, "page_files", lambda: page)
    code, said = run("pack", tmp_path / "out", "--development")
    assert code == 0 and "DEVELOPMENT KEY" in said
    assert KeyList.read((tmp_path / "out" / "rule-set" / "keys.json").read_bytes()).development
    monkeypatch.setattr(field, "page_files", dict)
    assert "the field page is not here" in run("pack", tmp_path / "other", "--development")[1]
