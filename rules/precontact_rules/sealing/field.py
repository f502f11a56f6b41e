"""The files of the field page as any web server can serve them: the page, the runtime, and the sealed rule sets.

    index.html ...            the page
    runtime/*.js              the runtime that it shares with other embedders
    rule-set/latest.json      which rule set is the latest
    rule-set/<version>.json   its exact bytes, and <version>.seal.json beside them
    rule-set/keys.json        the keys that may vouch, and keys.seal.json
"""
import os
from pathlib import Path

from .. import released
from ..canonical import canonical_bytes
from ..retirement import retirements
from .keys import KeyList, Refused
from .seals import KEYS, seal

# Installed, the folder lies inside the package; in the source tree beside it.
HANDHELD = next((folder for folder in (Path(__file__).parents[1] / "handheld", Path(__file__).parents[2] / "handheld") if folder.is_dir()), None)
SUFFIXES = (".html", ".js", ".css", ".json", ".webmanifest", ".svg", ".png", ".ico", ".txt")
RULE_SET_FOLDER = "rule-set/"


class PackFault(ValueError):
    """Why the files cannot be written into a folder."""


def page_files(folder=HANDHELD):
    """{relative address: path} of the page and of the runtime; hidden files and those of other kinds are left out."""
    if folder is None:
        return {}
    page, found = folder / "page", {}
    for path in sorted(page.rglob("*")):
        parts = path.relative_to(page).parts
        if path.is_file() and path.suffix in SUFFIXES and not any(part.startswith(".") or part == "node_modules" for part in parts):
            found["/".join(parts)] = path
    found.update({f"runtime/{path.name}": path for path in sorted(folder.glob("*.js"))})
    return found


def latest_document(rule_set, retirement):
    """What latest.json says."""
    return {"version": rule_set.version, "digest": rule_set.digest, "bytes": len(rule_set.bytes), "bundle": f"{rule_set.version}.json",
            "seal": f"{rule_set.version}.seal.json", **retirement}


def rule_set_files(ring, folder=released.FOLDER):
    """{relative address: bytes} of every released rule set, with the seals of this ring; latest.json comes last."""
    versions, files, keys = [row["version"] for row in released.listing(folder)], {}, ring.key_list()
    for version in versions:
        content = (folder / f"{version}.json").read_bytes()
        files[f"{RULE_SET_FOLDER}{version}.json"] = content
        files[f"{RULE_SET_FOLDER}{version}.seal.json"] = seal(content, ring)
    files[f"{RULE_SET_FOLDER}keys.json"] = keys.bytes
    files[f"{RULE_SET_FOLDER}keys.seal.json"] = seal(keys.bytes, ring, KEYS)
    latest = latest_document(released.latest(folder), retirements(folder, versions)[versions[-1]])
    files[f"{RULE_SET_FOLDER}latest.json"] = canonical_bytes(latest)
    return files


def write(files, folder, keys=f"{RULE_SET_FOLDER}keys.json"):
    """Write {relative address: bytes} under `folder` in this order, each file replaced whole; how many. Raises PackFault.

    `keys` is the address of the key list among them.
    """
    _check_serial(folder / keys, files[keys])
    for name, content in files.items():
        path = folder / name
        try:
            path.parent.mkdir(parents=True, exist_ok=True)
            beside = path.with_name(f".{path.name}.new")
            beside.write_bytes(content)
            os.replace(beside, path)
        except OSError as error:
            raise PackFault(f"{path} cannot be written: {error.strerror}") from None
    return len(files)


def _check_serial(path, content):
    """Devices that read the folder take a newer key list only if its serial rises."""
    if not path.is_file():
        return
    try:
        there, new = KeyList.read(path.read_bytes()), KeyList.read(content)
    except Refused as refused:
        raise PackFault(f"{path} is not a key list ({refused.detail}); choose another folder") from None
    if new.serial < there.serial or (new.serial == there.serial and new.bytes != there.bytes):
        raise PackFault(f"{path} has serial {there.serial} and these keys have {new.serial}; a changed list needs a serial that rises, "
                        "or no device would take it. `precontact-rules cut` and `disown` raise it")
