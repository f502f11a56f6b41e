"""Trust, proof and updates on the device: Node's own tests, a real browser's storage, seals of the Python side, and the types."""
import json
import re
import subprocess

import pytest

from precontact_rules.sealing import KeyList, KeyRing, check, field, seal

from .conftest import HERE, RUNTIME

AGREE = {"agree": 366, "of": 366, "wrong": []}
FEW = {"agree": 3, "of": 3, "wrong": []}


@pytest.mark.parametrize("name", ["trust", "proof", "keeper", "rotation", "power"])
def test_in_node(name):
    path = HERE / f"{name}.test.js"
    done = subprocess.run(["node", "--test", "--test-reporter=tap", path], capture_output=True, text=True, timeout=600)
    assert done.returncode == 0, done.stdout[done.stdout.find("not ok"):][:6000]
    passed = int(re.search(r"^# pass (\d+)$", done.stdout, re.MULTILINE)[1])
    assert passed >= len(re.findall(r"^test\(", path.read_text(), re.MULTILINE)) > 0
    assert re.search(r"^# (skipped|todo) 0$", done.stdout, re.MULTILINE)


def test_in_a_browser(run_script):
    """IndexedDB, WebCrypto, fetch and a real quota."""
    old, new = ({"version": version, "proof": FEW, "code": None} for version in ("1.0.0", "1.1.0"))
    found = run_script("keeper_chromium.js", RUNTIME)
    assert found["nothing"] == {"code": "nothing-installed"}
    assert (found["installed"], found["started"], found["current"]) == ({**old, "state": "installed"}, old, {**old, "state": "current"})
    for name, code in (("changed", "wrong-digest"), ("cutOff", "truncated"), ("full", "storage-full")):
        assert found[name] == [{**old, "state": "refused", "code": code}, old], name
    assert found["updated"] == [{**new, "state": "updated"}, new]
    assert found["damaged"] == [{**old, "code": "wrong-digest"}, {**new, "state": "updated"}, new]
    assert found["gone"] == [{**old, "code": "damaged"}, {**new, "state": "updated"}]
    assert found["names"] == ["bundle", "bundle", "proof", "proof", "state-a", "state-b"]
    assert found["many"] == ["current", "current"]


def test_the_committed_vector_is_what_the_service_makes_today():
    vector = json.loads((HERE / "seal-vector.json").read_text())
    keys, payload = KeyList.read(json.dumps(vector["keys"])), vector["payload"].encode()
    assert json.loads(seal(payload, KeyRing.example())) == vector["seal"]
    assert check(payload, json.dumps(vector["seal"]), keys) == vector["keys"]["keys"][0]["kid"]


def test_files_of_the_publisher_on_a_device(tmp_path, run_script):
    """What `pack` writes is installed; its keys are rotated and revoked by the publisher's own code."""
    first, second = (KeyRing.ephemeral() for _ in range(2))
    one, other = (ring.keys[kid].as_dict(private=True) for ring in (first, second) for kid in ring.keys)
    stolen = next(iter(first.keys))
    rings = [
        KeyRing({"serial": 1, "keys": [one], "revoked": []}),
        KeyRing({"serial": 2, "keys": [one, other], "revoked": []}),
        KeyRing({"serial": 3, "keys": [other], "revoked": [{"kid": stolen, "because": "a laptop was stolen"}]}),
        KeyRing({"serial": 4, "keys": [one], "revoked": []}),
    ]
    folders = [tmp_path / f"field-{number}" for number in range(len(rings))]
    for ring, folder in zip(rings, folders, strict=True):
        field.write(field.rule_set_files(ring), folder)
    said = run_script("keeper_node.js", tmp_path / "device", *(folder / "rule-set" for folder in folders))
    assert [row.get("state") for row in said] == ["installed", "current", "current", "refused", None]
    assert [row["serial"] for row in said] == [1, 2, 3, 3, 3]
    assert said[3]["code"] == "revoked-key" and "a laptop was stolen" in said[3]["detail"]
    assert all(row["version"] == "1.0.0" and row["proof"] == AGREE and row["development"] is False for row in said)


def compiled(*arguments):
    return subprocess.run([HERE / "tools" / "node_modules" / ".bin" / "tsc", *arguments], capture_output=True, text=True, timeout=300, cwd=HERE)


def test_types_are_what_a_strict_author_needs():
    done = compiled("-p", "types")
    assert done.returncode == 0, done.stdout


def test_the_types_would_notice(tmp_path):
    """Without the marks, each marked line is an error."""
    text = (HERE / "types" / "consumer.ts").read_text()
    settings = json.loads((HERE / "types" / "tsconfig.json").read_text())
    (tmp_path / "consumer.ts").write_text(text.replace("// @ts-expect-error", "//").replace("../../../rules/handheld", str(RUNTIME.parent)))
    (tmp_path / "tsconfig.json").write_text(json.dumps({**settings, "files": ["consumer.ts"]}))
    done = compiled("-p", tmp_path)
    assert done.stdout.count("error TS") == text.count("// @ts-expect-error") == 6, done.stdout


def test_every_export_has_its_type():
    for name in ("index", "file-store"):
        code = f"console.log(JSON.stringify(Object.keys(await import({json.dumps((RUNTIME.parent / name).as_uri())} + '.js'))))"
        done = subprocess.run(["node", "--input-type=module", "--eval", code], capture_output=True, text=True, check=True)
        declared = re.findall(r"^export (?:class|function|const) (\w+)", (RUNTIME.parent / f"{name}.d.ts").read_text(), re.MULTILINE)
        assert sorted(declared) == sorted(json.loads(done.stdout)), name
