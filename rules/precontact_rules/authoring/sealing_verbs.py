"""Verbs for those who publish rule sets: keys, seals, and the files of the field page."""
import os
from pathlib import Path

from .. import sealing
from ..retirement import RetirementFault
from ..sealing import KeyFault, KeyList, KeyRing, Refused, field, key_file
from ..sealing.keys import VARIABLE


def add_verbs(verbs):
    """Add the verbs to argparse's `verbs`; {name: function of the options that returns the exit code}."""
    cut = verbs.add_parser("cut", help="add a key to a key file, beside those that are there, or make a new file")
    cut.add_argument("file", type=Path)
    cut.add_argument("--new", action="store_true", help="make the file")
    disown = verbs.add_parser("disown", help="revoke a key for ever and drop its private part from the file")
    disown.add_argument("file", type=Path)
    disown.add_argument("kid")
    disown.add_argument("--because", required=True, help="what everybody may read about the reason")
    seal = verbs.add_parser("seal", help="write every released rule set, its seal and the sealed key list into a folder")
    pack = verbs.add_parser("pack", help="the same with the field page and its runtime: all that a plain web server needs")
    for verb in (seal, pack):
        verb.add_argument("folder", type=Path)
        verb.add_argument("--keys", type=Path, default=os.environ.get(VARIABLE) or None, help=f"the key file; otherwise the one that {VARIABLE} names")
    pack.add_argument("--development", action="store_true", help="seal with a key made now and kept nowhere, to try the page")
    vet = verbs.add_parser("vet", help="does a seal vouch for a bundle or a key list?")
    vet.add_argument("bytes", type=Path, help="the bundle, or the newer key list")
    vet.add_argument("seal", type=Path)
    vet.add_argument("keys", type=Path, help="the key list that is trusted")
    return {name: _told(act) for name, act in (("cut", _cut), ("disown", _disown), ("seal", _seal), ("pack", _pack), ("vet", _vet))}


def _told(act):
    """`act`, with everything that it may refuse said in one line."""
    def told(options):
        try:
            print(act(options))
            return 0
        except (KeyFault, Refused, RetirementFault, field.PackFault) as fault:
            print(fault)
        except OSError as error:
            print(f"{error.filename}: {error.strerror}")
        return 1

    return told


def _cut(options):
    kid = (key_file.make if options.new else key_file.add)(options.file)
    ring = KeyRing.read(options.file)
    return f"key {kid} added; {options.file} has serial {ring.serial} and {_count(len(ring.keys), 'valid key')}"


def _disown(options):
    key_file.revoke(options.file, options.kid, options.because)
    ring = KeyRing.read(options.file)
    return f"key {options.kid} revoked; {options.file} has serial {ring.serial} and {_count(len(ring.keys), 'valid key')}"


def _count(number, word):
    return f"{number} {word}{'s' * (number != 1)}"


def _ring(options):
    if getattr(options, "development", False):
        return KeyRing.ephemeral()
    if options.keys is None:
        raise KeyFault(f"no key file: give --keys FILE or set {VARIABLE}; `precontact-rules cut --new FILE` makes one")
    return KeyRing.read(Path(options.keys))


def _seal(options):
    ring = _ring(options)
    return _written({name.removeprefix(field.RULE_SET_FOLDER): content for name, content in field.rule_set_files(ring).items()}, "", options, ring)


def _pack(options):
    page = field.page_files()
    if "index.html" not in page:
        raise field.PackFault("the field page is not here; it is in rules/handheld/page of the repository, and in the installed package")
    ring = _ring(options)
    return _written({**{name: path.read_bytes() for name, path in page.items()}, **field.rule_set_files(ring)}, field.RULE_SET_FOLDER, options, ring)


def _written(files, rule_sets, options, ring):
    count = field.write(files, options.folder, f"{rule_sets}keys.json")
    loudly = "\nDEVELOPMENT KEY: it is kept nowhere; nobody must rely on what it seals." if ring.development else ""
    return f"{_count(count, 'file')} written into {options.folder}, sealed with {_count(len(ring.keys), 'key')} of serial {ring.serial}{loudly}"


def _vet(options):
    content, seal, keys = options.bytes.read_bytes(), options.seal.read_bytes(), KeyList.read(options.keys.read_bytes())
    try:
        return f"{options.bytes} is a rule set that the key {sealing.check(content, seal, keys)} vouches for"
    except Refused as refused:
        if refused.code != "wrong-type":
            raise
    newer = sealing.succeeding(content, seal, keys)
    return f"{options.bytes} is a key list of serial {newer.serial} that a trusted key vouches for; it may take the place of serial {keys.serial}"
