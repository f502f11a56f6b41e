"""Documentation of the rule sets."""
from .operations import ETAG_HEADER, IF_NONE_MATCH, documented, found, path_parameter, problems, unchanged
from .schemas import RuleSet, RuleSetList

_ETAG = {"ETag": ETAG_HEADER}
_DIGEST = {"Repr-Digest": {"description": "SHA-256 of the bytes (RFC 9530)", "schema": {"type": "string"}}}


def _name(editions):
    return path_parameter("name", "Version or digest of a released rule set", editions.latest.version)


def listing(made, view, editions):
    """GET /v1/rule-sets."""
    return documented(made, view, operationId="listRuleSets", summary="Every released rule set",
                      description="In the order of release. None is ever changed or withdrawn.",
                      responses={**found("Versions and digests", RuleSetList, headers=_ETAG), **unchanged(), **problems(422)})


def one(made, view, editions):
    """GET /v1/rule-sets/<name>."""
    return documented(made, view, operationId="getRuleSet", summary="One rule set", description="Never changes: keep it as long as you like. `If-Match` is honoured.",
                      parameters=[_name(editions), IF_NONE_MATCH],
                      responses={**found("What it holds", RuleSet, headers=_ETAG), **unchanged(), **problems(404, 412, 422)})


def bundle(made, view, editions):
    """GET /v1/rule-sets/<name>/bundle."""
    return documented(made, view, operationId="getBundle", summary="The exact bytes of a rule set",
                      description="Canonical JSON (RFC 8785). Its SHA-256 is the rule set's digest, its `ETag` and its `Repr-Digest`. "
                                  "The cases inside let any runtime prove itself. `If-Match` is honoured.",
                      parameters=[_name(editions), IF_NONE_MATCH],
                      responses={**found("The bundle", {"type": "object", "description": "Described in the rule language's own page"}, headers={**_ETAG, **_DIGEST}),
                                 **unchanged(), **problems(404, 412, 422)})
