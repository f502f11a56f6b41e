"""The catalogues of a rule set: instruments, devices, cables, conductors, and whatever else it lists."""
from functools import lru_cache

from flask_smorest import Blueprint

from ..entries import shown
from ..openapi import catalogues as documented
from ..parameters import edition_of_request
from ..problems import ProblemError
from ..reply import language_of_request, resource


def blueprint(editions):
    """Routes of the catalogues."""
    made = Blueprint("catalogues", __name__, url_prefix="/v1/catalogues", description="What a question may name by id")
    made.add_url_rule("", "list", documented.listing(made, _listing(editions), editions))
    made.add_url_rule("/<string:catalogue>", "one", documented.one(made, _one(editions), editions))
    made.add_url_rule("/<string:catalogue>/<string:id>", "entry", documented.entry(made, _entry(editions), editions))
    return made


def _listing(editions):
    def list_catalogues():
        edition, language = edition_of_request(editions), language_of_request()
        bundle = edition.rule_set.data
        kinds = sorted(bundle["kinds"].items(), key=lambda item: item[1]["folder"])
        return resource({"rule_set": edition.identity, "catalogues": [
            {"name": kind["folder"], "title": kind["title"][language], "entries": len(bundle["entries"].get(key, {})),
             "href": f"/v1/catalogues/{kind['folder']}"} for key, kind in kinds]}, language)

    return list_catalogues


def _one(editions):
    def catalogue(catalogue):
        edition, language = edition_of_request(editions), language_of_request()
        kind = _kind(edition, catalogue)
        return resource(_whole(edition, kind, language), language)

    return catalogue


def _entry(editions):
    def catalogue_entry(catalogue, id):
        edition, language = edition_of_request(editions), language_of_request()
        kind = _kind(edition, catalogue)
        entries = edition.rule_set.data["entries"].get(kind, {})
        if id not in entries:
            raise ProblemError("not-found", f"{catalogue} has no entry {id[:80]!r}; /v1/catalogues/{catalogue} lists them.")
        return resource({"rule_set": edition.identity, **shown(edition.rule_set.data, kind, id, language)}, language)

    return catalogue_entry


@lru_cache(maxsize=64)
def _whole(edition, kind, language):
    bundle = edition.rule_set.data
    return {"rule_set": edition.identity, "name": bundle["kinds"][kind]["folder"], "title": bundle["kinds"][kind]["title"][language],
            "entries": [shown(bundle, kind, id_, language) for id_ in sorted(bundle["entries"].get(kind, {}))]}


def _kind(edition, name):
    kinds = edition.rule_set.data["kinds"]
    for key, kind in kinds.items():
        if kind["folder"] == name:
            return key
    known = ", ".join(sorted(kind["folder"] for kind in kinds.values()))
    raise ProblemError("not-found", f"There is no catalogue {name[:80]!r}; there are {known}.")
