"""Releasing: prove, write, and never again change."""
import json

from ..engine import RuleSet
from ..released import FOLDER
from . import cases
from .build import build, canonical, digest


def proved(folder, run_cases=True):
    """(bundle with its cases, faults) of a source folder. The cases are run only where nothing else is wrong."""
    bundle, faults, source = build(folder)
    if run_cases and not faults:
        bundle["cases"] = cases.prove(source, RuleSet(canonical(bundle)))
    return bundle, faults


def changed_releases(folder=FOLDER):
    """Versions under `released` whose bytes no longer have the digest of the index."""
    index = folder / "index.json"
    rows = json.loads(index.read_bytes()) if index.exists() else []
    return [row["version"] for row in rows if digest((folder / f"{row['version']}.json").read_bytes()) != row["digest"]]


def release(bundle, folder=FOLDER):
    """Write a proved bundle under `folder`; the digest, or an error in words."""
    content, version = canonical(bundle), bundle["version"]
    changed = changed_releases(folder)
    if changed:
        return None, f"released rule sets were edited: {', '.join(changed)}; restore them, they never change"
    folder.mkdir(exist_ok=True)
    index = folder / "index.json"
    rows = json.loads(index.read_bytes()) if index.exists() else []
    for row in rows:
        if row["version"] == version:
            same = row["digest"] == digest(content)
            return (row["digest"], None) if same else (None, f"{version} is released with other content; raise the version in rule-set.yaml")
    (folder / f"{version}.json").write_bytes(content)
    rows.append({"version": version, "digest": digest(content)})
    index.write_text(json.dumps(rows, indent=1) + "\n")
    return rows[-1]["digest"], None
