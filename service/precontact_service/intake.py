"""The body of the current request: declared as JSON, as it is, and no larger than it may be."""
from flask import request
from precontact_rules import Problem

from .problems import ProblemError

LIMIT = 262_144     # bytes of a body; the largest sensible question (16 readings, each with its own instrument) is 40 kB


def read_body():
    """Its bytes. Raises ProblemError."""
    _check_media_type()
    _check_encoding()
    _check_query()
    if (request.content_length or 0) > LIMIT:
        _refuse_length()
    # A body without a stated length is cut at max_content_length without a word, so that is one more than may be.
    request.max_content_length = LIMIT + 1
    raw = request.get_data(cache=False)
    if len(raw) > LIMIT:
        _refuse_length()
    if request.content_length not in (None, len(raw)):
        raise ProblemError("bad-request", f"The body ended after {len(raw)} of {request.content_length} bytes.")
    return raw


def _refuse_length():
    raise ProblemError("body-too-large", f"The body is longer than {LIMIT} bytes.")


def _check_media_type():
    if request.mimetype != "application/json":
        found = f"The body is declared as {request.mimetype[:80]}" if request.mimetype else "The body has no Content-Type"
        raise ProblemError("unsupported-media-type", f"{found}; application/json is read here.", headers=[("Accept", "application/json")])


def _check_encoding():
    coding = request.headers.get("Content-Encoding", "").strip().lower()
    if coding not in ("", "identity"):
        raise ProblemError("unsupported-media-type", f"The body is encoded as {coding[:40]}; it is read only as it is.",
                           headers=[("Accept-Encoding", "identity")])


def _check_query():
    if request.args:
        raise ProblemError("invalid-input", "A question is asked in the body; this address takes no query parameter.",
                           [Problem(f"?{name[:60]}", "unknown-parameter", "not a parameter here; put it in the body") for name in request.args])
