"""The released rule sets, their exact bytes, and the seals of these."""
from flask import request
from flask_smorest import Blueprint

from ..door import EDITION
from ..openapi import rule_sets as documented
from ..parameters import query
from ..problems import ProblemError
from ..reply import FOR_EVER, REVALIDATE, represented, resource
from ..seals import SEALS


def blueprint(editions, seals):
    """Routes of the rule sets."""
    made = Blueprint("rule sets", __name__, url_prefix="/v1/rule-sets", description="Released rule sets: immutable, each named by version or digest")
    made.add_url_rule("", "list", documented.listing(made, _listing(editions), editions))
    made.add_url_rule("/<string:name>", "one", documented.one(made, _one(editions), editions))
    made.add_url_rule("/<string:name>/bundle", "bundle", documented.bundle(made, _bundle(editions), editions))
    made.add_url_rule("/<string:name>/seal", "seal", documented.seal(made, _seal(editions, seals), editions))
    return made


def _listing(editions):
    def list_rule_sets():
        query()
        return resource({"latest": editions.latest.version, "rule_sets": [
            {**row, "href": f"/v1/rule-sets/{row['version']}", **editions.retirements[row["version"]]} for row in editions.listing]})

    return list_rule_sets


def _one(editions):
    def rule_set(name):
        query()
        edition = _found(editions, name)
        bundle, address = edition.rule_set.data, f"/v1/rule-sets/{edition.version}"
        return resource({
            **edition.identity, "language": bundle["language"], "title": bundle["title"], "checks": edition.rule_set.check_names,
            "catalogues": sorted(kind["folder"] for kind in bundle["kinds"].values()), "cases": len(bundle["cases"]),
            "bundle": {"href": f"{address}/bundle", "bytes": len(edition.rule_set.bytes)},
            "seal": {"href": f"{address}/seal", "keys": "/v1/keys"}, **edition.retirement,
        }, extra=edition.retirement_headers)

    return rule_set


def _bundle(editions):
    def bundle(name):
        query()
        edition = _found(editions, name)
        return represented(edition.bundle, FOR_EVER, edition.retirement_headers)

    return bundle


def _seal(editions, seals):
    def seal(name):
        query()
        edition = _found(editions, name)
        return represented(request.environ.get(SEALS, seals).of(edition), REVALIDATE)

    return seal


def _found(editions, name):
    try:
        edition = request.environ[EDITION] = editions.find(name)
    except KeyError:
        raise ProblemError("not-found", f"No released rule set is named {name[:80]!r}; {editions.available}.") from None
    return edition
