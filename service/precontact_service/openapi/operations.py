"""Building blocks of an operation's documentation: parameters, headers, and the problems it can end in."""
from ..problems import MEDIA_TYPE
from .schemas import Problem

PROBLEM_NAMES = {400: "MalformedBody", 404: "NotFound", 412: "PreconditionFailed", 413: "BodyTooLarge", 414: "AddressTooLong", 415: "UnsupportedMediaType",
                 422: "InvalidInput", 431: "HeadersTooLarge", 500: "InternalError", 503: "NotReady"}
PROBLEM_WORDS = {400: "The body is not JSON with one meaning", 404: "Nothing at this address", 412: "Another version than `If-Match` names",
                 413: "The body is too large", 414: "The address is too long", 415: "The body is not declared as JSON", 422: "The input cannot be used; every fault is listed", 431: "The headers are too large",
                 500: "A fault of the service", 503: "A known question is answered wrongly"}

RULE_SET_HEADER = {"description": "Version and digest of the rule set behind the response (RFC 9651)", "schema": {"type": "string"}}
ETAG_HEADER = {"description": "Strong validator: the digest of the bytes", "schema": {"type": "string"}}
RETIREMENT_HEADERS = {
    "Deprecation": {"description": "From when on another rule set is advised (RFC 9745); absent where none is", "schema": {"type": "string", "examples": ["@1796083200"]}},
    "Sunset": {"description": "From when on the rule set is not for new checks (RFC 8594); what it answered can be computed again for ever",
               "schema": {"type": "string", "examples": ["Tue, 01 Jun 2027 00:00:00 GMT"]}},
}
LANGUAGE_HEADER = {"description": "Language of the words: en or es", "schema": {"type": "string"}}

# What these hold is a preference: anything else than they describe is answered too.
ACCEPT_LANGUAGE = {"name": "Accept-Language", "in": "header", "required": False, "description": "English (en) or Spanish (es); English otherwise",
                   "schema": {"type": "string", "examples": ["es"]}}
IF_NONE_MATCH = {"name": "If-None-Match", "in": "header", "required": False, "description": "Answer 304 if the resource still has this ETag",
                 "schema": {"type": "string"}}


def released_names(editions):
    """Versions and digests that a request may name."""
    return [name for row in editions.listing for name in (row["version"], row["digest"])]


def pin_parameter(editions):
    """The `rule_set` query parameter."""
    return {"name": "rule_set", "in": "query", "required": False, "description": "Version or digest of the rule set to read; the latest otherwise",
            "schema": {"type": "string", "enum": released_names(editions)}}


def path_parameter(name, description, known):
    """A path parameter with the values that exist now."""
    return {"name": name, "in": "path", "required": True, "description": description, "schema": {"type": "string", "minLength": 1, "maxLength": 100}, "example": known}


def problems(*statuses):
    """Responses by status, each a reference to a component."""
    return {str(status): PROBLEM_NAMES[status] for status in sorted({*statuses, 414, 431, 500})}


def found(description, schema, media_type="application/json", headers=()):
    """The 200 response of a GET."""
    named = {"Precontact-Rule-Set": RULE_SET_HEADER, **dict(headers)}
    return {"200": {"description": description, "headers": named, "content": {media_type: {"schema": schema}}}}


def unchanged():
    """The 304 response."""
    return {"304": {"description": "The resource still has the ETag of `If-None-Match`", "headers": {"ETag": ETAG_HEADER}}}


def documented(blueprint, view, **operation):
    """Attach an operation's documentation to its view without wrapping it: a documented call costs nothing."""
    view._apidoc = blueprint.doc(**operation)(view)._apidoc
    return view


def problem_responses():
    """Components: one response per problem status."""
    return {PROBLEM_NAMES[status]: {"description": words, "headers": {"Precontact-Rule-Set": RULE_SET_HEADER},
                                    "content": {MEDIA_TYPE: {"schema": Problem}}} for status, words in PROBLEM_WORDS.items()}
