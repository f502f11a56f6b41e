"""The page's modules that need no browser, tested by Node's own runner; and what a strict content policy and the browser's cache ask of the files."""
import json
import re
import subprocess
from pathlib import Path

import pytest

HERE = Path(__file__).parent
PAGE = HERE.parents[1] / "rules" / "handheld" / "page"
RUNTIME = PAGE.parent
POLICY = ("default-src 'none'; script-src 'self'; style-src 'self'; connect-src 'self'; img-src 'self'; manifest-src 'self'; worker-src 'self'; "
          "base-uri 'none'; form-action 'none'")


@pytest.mark.parametrize("name", sorted(path.name for path in HERE.glob("*.test.mjs")))
def test_node(name):
    done = subprocess.run(["node", "--test", name], cwd=HERE, capture_output=True, text=True)
    assert done.returncode == 0, done.stdout[-4000:]


def test_the_policy_is_in_the_page():
    assert f'<meta http-equiv="Content-Security-Policy" content="{POLICY}">' in (PAGE / "index.html").read_text()


def test_nothing_is_inline_and_every_address_is_relative():
    page = (PAGE / "index.html").read_text()
    assert not re.search(r"<style|\sstyle=|\son\w+=|<script(?![^>]*\ssrc=)", page)
    assert not re.findall(r'(?:src|href)="(?:/|[a-z]+:)', page)


def test_no_file_names_another_address():
    known = {"http://www.w3.org/2000/svg"}
    for path in PAGE.rglob("*"):
        if path.suffix in (".js", ".css", ".html", ".svg", ".webmanifest"):
            assert set(re.findall(r"https?://[^\s\"'<)]+", path.read_text())) <= known, path.name


def test_the_manifest_names_icons_that_are_there():
    manifest = json.loads((PAGE / "manifest.webmanifest").read_text())
    for icon in manifest["icons"]:
        content = (PAGE / icon["src"]).read_bytes()
        if icon["type"] == "image/png":
            width, height = int.from_bytes(content[16:20]), int.from_bytes(content[20:24])
            assert icon["sizes"] == f"{width}x{height}"
    assert (manifest["start_url"], manifest["scope"]) == ("./", "./")


def test_no_check_field_or_unit_of_the_rule_set_is_written_in_the_page():
    bundle = json.loads((HERE.parents[1] / "rules/precontact_rules/released/1.0.0.json").read_text())
    names = set(bundle["checks"]) | set(bundle["kinds"])
    keys = set()

    def walk(fields):
        for field in fields:
            keys.add(field["key"])
            walk(field.get("fields", []))

    for check in bundle["checks"].values():
        walk(check["inputs"])
    written = {word for path in PAGE.glob("*.js") for word in re.findall(r"[\"'/.]([a-z][a-z0-9_-]+)", path.read_text())}
    assert not written & {name for name in names | keys if "-" in name or "_" in name}


def test_every_module_is_short_enough_to_read():
    for path in PAGE.glob("*"):
        if path.suffix in (".js", ".css", ".html"):
            lines = path.read_text().splitlines()
            assert len(lines) <= 400, path.name
            assert [line for line in lines if len(line) > 150 and "Content-Security-Policy" not in line] == [], path.name
