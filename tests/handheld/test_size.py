"""What the handheld runtime weighs, and what it may not hold: it must run where nothing turns text into code."""
import re
import subprocess

import pytest

from .conftest import HERE, RUNTIME

MOST_BYTES = 40_000
# Ways from text to code, and loading at run time: each is refused by a strict content security policy or by an engine of a phone.
FORBIDDEN = re.compile(r"\beval\b|\bFunction\s*\(|\bnew\s+Function\b|\bimport\s*\(|\bimportScripts\b|\bset(?:Timeout|Interval)\s*\(\s*[\"'`]|"
                       r"\bWebAssembly\b|\bdocument\s*\.\s*write\b|\.\s*constructor\s*\(|\brequire\s*\(\s*[\"'`]|\.innerHTML\b")
COMMENT = re.compile(r"/\*.*?\*/|(?<![:\"'`\\])//[^\n]*", re.DOTALL)
PACKAGE_FREE = re.compile(r"^(?:import|export)\b[^;]*?\bfrom\s+[\"']([^\"']+)[\"']", re.MULTILINE)


def modules():
    return sorted(path for path in RUNTIME.parent.glob("*.js"))


def bundled(*options):
    """index.js and all it imports in one file, as esbuild makes it."""
    esbuild = HERE / "tools" / "node_modules" / ".bin" / "esbuild"
    command = [esbuild, RUNTIME, "--bundle", "--format=esm", "--target=es2022", "--log-level=warning", *options]
    done = subprocess.run(command, capture_output=True, text=True)
    assert done.returncode == 0 and not done.stderr, done.stderr
    return done.stdout


@pytest.mark.xfail(strict=True, reason="71 kB: not there yet")
def test_minified_it_stays_small():
    whole = bundled("--minify")
    size = len(whole.encode())
    print(f"\nthe runtime: {size} bytes minified in one file")
    assert size < MOST_BYTES


def test_nothing_turns_text_into_code():
    for path in modules():
        code = COMMENT.sub("", path.read_text())
        found = FORBIDDEN.search(code)
        assert not found, f"{path.name}: {found[0]}"
    assert not FORBIDDEN.search(bundled("--minify"))


def test_the_search_finds_what_it_looks_for():
    for code in ("eval('1')", "new Function('a')", "(0, eval)(x)", "await import(name)", "setTimeout('f()')", "x.constructor('')", "Function (x)"):
        assert FORBIDDEN.search(code), code
    assert not FORBIDDEN.search("import { exp } from './exact-math.js'; setTimeout(f, 1); isFunction(f); class A { constructor(x) {} }")


def test_it_imports_only_its_own_modules():
    for path in modules():
        outside = [name for name in PACKAGE_FREE.findall(path.read_text()) if not name.startswith("./")]
        assert not outside or path.name == "file-store.js", f"{path.name} imports {outside}"
