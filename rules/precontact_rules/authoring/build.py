"""From the source folder to a bundle: canonical bytes whose SHA-256 is the rule set's identity."""
import hashlib

import rfc8785

from . import data, fields, units
from .checks import CheckBuilder
from .source import Source

_RULE_SET_KEYS = ("version", "language", "title", "texts")


def build(folder):
    """(bundle without cases, faults, Source) of a source folder. The bundle is usable only where there is no fault."""
    source = Source(folder)
    source.used_cautions = set()
    rule_set = source.rule_set
    source.keys(rule_set, _RULE_SET_KEYS, _RULE_SET_KEYS)
    kinds = {name: _kind(source, mapping) for name, mapping in source.kinds.items()}
    bundle = {
        "language": rule_set.get("language"), "version": str(rule_set.get("version")), "title": source.text(rule_set, "title"),
        "texts": {key: source.text(rule_set.get("texts"), key) for key in rule_set.get("texts", {})},
        "units": units.bundled(),
        "sources": {key: _work(source, key) for key in source.sources},
        "constants": data.constants(source, source.limits, "limits."),
        "tables": {name: data.table(source, mapping) for name, mapping in source.tables.items()},
        "kinds": kinds,
        "entries": {kind: {id_: data.entry(source, kinds[kind]["fields"], mapping) for id_, mapping in entries.items()}
                    for kind, entries in source.entries.items()},
        "cautions": {name: data.caution(source, mapping) for name, mapping in source.cautions.items()},
        "checks": {}, "cases": [],
    }
    used = set()
    for name in source.checks:
        builder = CheckBuilder(source, name, kinds, bundle["constants"])
        bundle["checks"][name] = builder.build()
        used |= builder.scope.used
    for name in source.cautions:
        if name not in source.used_cautions:
            source.fault(f"cautions/{name}.yaml", 1, "no check uses this caution", "use it or drop it")
    for name in source.limits:
        if "limits." + name not in used:
            source.fault("limits.yaml", source.limits.at(name), f"no check uses limits.{name}", "use it or drop it")
    return bundle, source.faults, source


def _kind(source, mapping):
    source.keys(mapping, ("folder", "title", "described", "fields", "formulas"), ("folder", "title", "fields"))
    made = {"folder": mapping.get("folder"), "title": source.text(mapping, "title"), "fields": fields.declared(source, mapping.get("fields", {}), [])}
    if "described" in mapping:
        made["described"] = source.text(mapping, "described")
    return made


def _work(source, key):
    mapping = source.sources[key]
    source.keys(mapping, ("title", "edition", "kind"), ("title", "kind"))
    return {k: str(v) for k, v in mapping.items()}


def canonical(bundle):
    """The bundle's bytes (RFC 8785)."""
    return rfc8785.dumps(bundle)


def digest(content):
    """The identity of bundle bytes."""
    return "sha-256:" + hashlib.sha256(content).hexdigest()
