"""Documentation of the rule sets."""
from .operations import ETAG_HEADER, IF_NONE_MATCH, RETIREMENT_HEADERS, documented, found, path_parameter, problems, unchanged
from .schemas import RuleSet, RuleSetList, Seal

_ETAG = {"ETag": ETAG_HEADER}
_DIGEST = {"Repr-Digest": {"description": "SHA-256 of the bytes as they travel (RFC 9530): with `Content-Encoding: gzip`, of the compressed ones",
                           "schema": {"type": "string"}}}


def _name(editions):
    return path_parameter("name", "Version or digest of a released rule set", editions.latest.version)


def listing(made, view, editions):
    """GET /v1/rule-sets."""
    return documented(made, view, operationId="listRuleSets", summary="Every released rule set",
                      description="In the order of release. None is ever changed or withdrawn. One with a date in `deprecated` should no longer be used for new "
                                  "checks, from `sunset` on it must not; what it answered can be computed again for ever.",
                      responses={**found("Versions and digests", RuleSetList, headers=_ETAG), **unchanged(), **problems(422)})


def one(made, view, editions):
    """GET /v1/rule-sets/<name>."""
    return documented(made, view, operationId="getRuleSet", summary="One rule set", 
                      description="Where its bytes and their seal are, and whether it is still for new checks. `If-Match` is honoured.",
                      parameters=[_name(editions), IF_NONE_MATCH],
                      responses={**found("What it holds", RuleSet, headers={**_ETAG, **RETIREMENT_HEADERS}), **unchanged(), **problems(404, 412, 422)})


def bundle(made, view, editions):
    """GET /v1/rule-sets/<name>/bundle."""
    return documented(made, view, operationId="getBundle", summary="The exact bytes of a rule set",
                      description="Canonical JSON (RFC 8785). Its SHA-256 is the rule set's digest, and so are its `ETag` and `Repr-Digest`; the form "
                                  "with `Content-Encoding: gzip`, a ninth as long, has its own of both. "
                                  "The cases inside let any runtime prove itself. `If-Match` is honoured.",
                      parameters=[_name(editions), IF_NONE_MATCH],
                      responses={**found("The bundle", {"type": "object", "description": "Described in the rule language's own page"},
                                         headers={**_ETAG, **_DIGEST, **RETIREMENT_HEADERS}),
                                 **unchanged(), **problems(404, 412, 422)})


def seal(made, view, editions):
    """GET /v1/rule-sets/<name>/seal."""
    return documented(made, view, operationId="getSeal", summary="The seal of a rule set",
                      description="A JWS (RFC 7515) in general JSON form, detached, over the exact bytes of the bundle (RFC 7797: `b64` false), algorithm "
                                  "Ed25519 (RFC 9864), type `precontact-rule-set`, with one signature for each valid key of `/v1/keys`. It is good "
                                  "if one of them is by a key that you trust and that is not revoked.",
                      parameters=[_name(editions), IF_NONE_MATCH],
                      responses={**found("The seal", Seal, "application/jose+json", headers=_ETAG), **unchanged(), **problems(404, 412, 422)})
