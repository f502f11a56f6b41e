"""Documentation of the catalogues."""
from .operations import ACCEPT_LANGUAGE, ETAG_HEADER, LANGUAGE_HEADER, documented, found, path_parameter, pin_parameter, problems, unchanged
from .schemas import Catalogue, CatalogueList, EntryAlone

_HEADERS = {"ETag": ETAG_HEADER, "Content-Language": LANGUAGE_HEADER}


def _known(editions):
    """A catalogue and an entry that exist."""
    bundle = editions.latest.rule_set.data
    for key, kind in sorted(bundle["kinds"].items(), key=lambda item: item[0] != "instrument"):
        if bundle["entries"].get(key):
            return kind["folder"], sorted(bundle["entries"][key])[0]
    raise LookupError("the rule set has no catalogue entry")


def listing(made, view, editions):
    """GET /v1/catalogues."""
    return documented(made, view, operationId="listCatalogues", summary="What a question may name by id",
                      description="Every catalogue of the rule set.",
                      parameters=[ACCEPT_LANGUAGE, pin_parameter(editions)],
                      responses={**found("Names and titles", CatalogueList, headers=_HEADERS), **unchanged(), **problems(422)})


def one(made, view, editions):
    """GET /v1/catalogues/<catalogue>."""
    return documented(made, view, operationId="getCatalogue", summary="One catalogue with all its entries",
                      description="Each entry in the units of its keys, with the origin of every value.",
                      parameters=[path_parameter("catalogue", "Name of a catalogue", _known(editions)[0]), ACCEPT_LANGUAGE, pin_parameter(editions)],
                      responses={**found("The entries", Catalogue, headers=_HEADERS), **unchanged(), **problems(404, 422)})


def entry(made, view, editions):
    """GET /v1/catalogues/<catalogue>/<id>."""
    catalogue, id_ = _known(editions)
    return documented(made, view, operationId="getEntry", summary="One entry, with the origin of every value",
                      description="Its `data` may be sent in a question, changed or not; so may its id.",
                      parameters=[path_parameter("catalogue", "Name of a catalogue", catalogue), path_parameter("id", "Id of an entry", id_),
                                  ACCEPT_LANGUAGE, pin_parameter(editions)],
                      responses={**found("The entry", EntryAlone, headers=_HEADERS), **unchanged(), **problems(404, 422)})
