"""Documentation of the key list."""
from .operations import ETAG_HEADER, IF_NONE_MATCH, documented, found, problems, unchanged
from .schemas import KeyList, Seal

_ETAG = {"ETag": ETAG_HEADER}


def listing(made, view):
    """GET /v1/keys."""
    return documented(made, view, operationId="listKeys", summary="The keys that may vouch for a rule set",
                      description="Canonical JSON (RFC 8785), sealed by every valid key. `serial` only rises; take a newer list if a key that you trust has sealed it. "
                                  "What is revoked stays so. `development` true means a key that is gone with the server: rely on nothing that it seals. "
                                  "The key in the example is that of RFC 8037, which everybody knows.",
                      parameters=[IF_NONE_MATCH], responses={**found("The list", KeyList, headers=_ETAG), **unchanged(), **problems(412, 422)})


def seal(made, view):
    """GET /v1/keys/seal."""
    return documented(made, view, operationId="getKeysSeal", summary="The seal of the key list",
                      description="A detached JWS over the exact bytes of `/v1/keys`, of type `precontact-keys`.",
                      parameters=[IF_NONE_MATCH],
                      responses={**found("The seal", Seal, "application/jose+json", headers=_ETAG), **unchanged(), **problems(412, 422)})
