"""From an HTTP request to the JSON object of a question: media type, size, JSON; what the members mean is the rule engine's."""
from flask import request
from precontact_rules import Problem

from .body import read_json
from .problems import ProblemError

LIMIT = 262_144     # bytes of a body; the largest sensible question (16 readings, each with its own instrument) is 40 kB


def read_body():
    """The JSON value of the current request's body. Raises ProblemError; Flask itself refuses a body over LIMIT."""
    environ = request.environ
    if environ.get("CONTENT_TYPE") != "application/json":
        _check_media_type()
    if "HTTP_CONTENT_ENCODING" in environ:
        _check_encoding()
    if environ["QUERY_STRING"]:
        _refuse_query()
    return read_json(request.get_data(cache=False))


def _check_media_type():
    if request.mimetype != "application/json":
        found = f"The body is declared as {request.mimetype[:80]}" if request.mimetype else "The body has no Content-Type"
        raise ProblemError("unsupported-media-type", f"{found}; application/json is read here.", headers=[("Accept", "application/json")])


def _check_encoding():
    coding = request.headers["Content-Encoding"].strip().lower()
    if coding not in ("", "identity"):
        raise ProblemError("unsupported-media-type", f"The body is encoded as {coding[:40]}; it is read only as it is.",
                           headers=[("Accept-Encoding", "identity")])


def _refuse_query():
    names = list(request.args)
    raise ProblemError("invalid-input", "A question is asked in the body; this address takes no query parameter.",
                       [Problem(f"?{name[:60]}", "unknown-parameter", "not a parameter here; put it in the body") for name in names])
