"""Command line for people who edit rules, and for those who publish them."""
import argparse
import json
import sys
from pathlib import Path

from .. import released
from ..engine import RuleSet
from ..problems import InputProblems
from ..retirement import RetirementFault, retirements
from .build import canonical
from .contrast import contrasted
from .release import changed_releases, proved, release
from .sealing_verbs import add_verbs
from .walk import walked

SOURCE = Path(__file__).resolve().parents[2] / "source"


def main(arguments=None):
    """Run one verb; returns the exit code."""
    parser = argparse.ArgumentParser(prog="precontact-rules", description="Check, release, explain, seal and publish Precontact rule sets.")
    parser.add_argument("--source", type=Path, default=SOURCE, help="the folder of rule sources")
    verbs = parser.add_subparsers(dest="verb", required=True)
    proofread = verbs.add_parser("proofread", help="check every source file and list every fault")
    proofread.add_argument("paths", nargs="*", help="print only faults of files whose path begins so")
    proofread.add_argument("--no-cases", action="store_true", help="do not run the worked cases")
    releasing = verbs.add_parser("release", help="build, prove and add the rule set to the released ones")
    releasing.add_argument("--check", action="store_true", help="only compare with what is released")
    releasing.add_argument("--draft", type=Path, help="write the bundle here and release nothing")
    walk = verbs.add_parser("walk", help="one check on one input, the working in words and numbers")
    walk.add_argument("check")
    walk.add_argument("input", help="a JSON file, or - for standard input")
    walk.add_argument("--language", choices=("en", "es"), default="en")
    walk.add_argument("--released", help="a released version or digest instead of the source")
    contrast = verbs.add_parser("contrast", help="what changed between two rule sets, numerically")
    contrast.add_argument("old", help="a released version or digest, or a bundle file")
    contrast.add_argument("new", help="the same, or `source` for the working source")
    acts = {"proofread": _proofread, "release": _release, "walk": _walk, "contrast": _contrast, **add_verbs(verbs)}
    options = parser.parse_args(arguments)
    return acts[options.verb](options)


def _proofread(options):
    _, faults = proved(options.source, not options.no_cases)
    shown = [f for f in faults if not options.paths or any(f.file.startswith(p) for p in options.paths)]
    for fault in sorted(shown):
        print(fault)
    print(f"{len(faults)} fault{'s' * (len(faults) != 1)}" + (f", {len(shown)} of them shown" if len(shown) != len(faults) else ""))
    return 1 if faults else 0


def _release(options):
    bundle, faults = proved(options.source)
    if faults:
        for fault in sorted(faults):
            print(fault)
        return 1
    if options.draft:
        options.draft.write_bytes(canonical(bundle))
        print(f"draft of {bundle['version']} written to {options.draft}")
        return 0
    if options.check:
        return _compare_with_release(bundle)
    digest, error = release(bundle)
    print(error or f"{bundle['version']} released as {digest}, {len(bundle['cases'])} cases proved")
    return 1 if error else 0


def _compare_with_release(bundle):
    changed = changed_releases()
    for version in changed:
        print(f"released {version} was edited; restore it")
    try:
        same = released.load(bundle["version"]).bytes == canonical(bundle)
    except KeyError:
        print(f"{bundle['version']} is not released yet")
        return 1
    print(f"the source {'is' if same else 'differs from'} release {bundle['version']}")
    try:
        retirements(released.FOLDER, [row["version"] for row in released.listing()])
    except RetirementFault as fault:
        print(fault)
        return 1
    return 0 if same and not changed else 1


def _rule_set(name, source):
    if name is None or name == "source":
        bundle, faults = proved(source, run_cases=name == "source")
        if faults:
            raise SystemExit("\n".join(map(str, sorted(faults))))
        return RuleSet(canonical(bundle))
    if Path(name).is_file():
        return RuleSet(Path(name).read_bytes())
    try:
        return released.load(name)
    except KeyError:
        known = ", ".join(row["version"] for row in released.listing())
        raise SystemExit(f"no rule set {name!r}; released: {known}; or give a bundle file") from None


def _walk(options):
    text = sys.stdin.read() if options.input == "-" else Path(options.input).read_text()
    rule_set = _rule_set(options.released, options.source)
    try:
        for line in walked(rule_set, options.check, json.loads(text), options.language):
            print(line)
    except InputProblems as problems:
        for problem in problems.problems:
            print(f"{problem.pointer or '/'}: {problem.detail}")
        return 1
    except KeyError:
        print(f"no check {options.check!r}; there are {', '.join(rule_set.check_names)}")
        return 1
    return 0


def _contrast(options):
    count = 0
    for line in contrasted(_rule_set(options.old, options.source), _rule_set(options.new, options.source)):
        print(line)
        count += 1
    print(f"{count} differences")
    return 0


if __name__ == "__main__":
    sys.exit(main())
