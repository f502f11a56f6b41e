"""Responses to a GET: bytes with their language, validators and caching."""
import hashlib

import orjson
from flask import Response, request

from .language import chosen
from .problems import ProblemError
from .representation import JSON

REVALIDATE = "no-cache"                                   # may change with a release: ask again, and mostly hear 304
FOR_EVER = "public, max-age=31536000, immutable"


def resource(data, language=None, caching=REVALIDATE, extra=()):
    """The response to a GET of JSON data; its ETag is the digest of its bytes."""
    return content_response(orjson.dumps(data), JSON, caching, language, extra)


def content_response(content, media_type, caching=REVALIDATE, language=None, extra=()):
    """The response to a GET of exact bytes; their ETag is their digest."""
    headers = [("Cache-Control", caching), *extra]
    if language:
        headers += [("Content-Language", language), ("Vary", "Accept-Language")]
    return _conditional(content, media_type, f'"sha-256:{hashlib.sha256(content).hexdigest()}"', headers)


def represented(representation, caching, extra=()):
    """The response to a GET of a Representation, in the form that the request prefers."""
    held = request.if_none_match or request.if_match
    form = representation.chosen(request.accept_encodings, held)
    headers = [("Cache-Control", caching), ("Repr-Digest", form.repr_digest), *extra]
    if representation.compressed is not None:
        headers.append(("Vary", "Accept-Encoding"))
    if form.coding:
        headers.append(("Content-Encoding", form.coding))
    return _conditional(form.content, representation.media_type, form.etag, headers)


def _conditional(content, media_type, etag, headers):
    """Honour If-Match and If-None-Match (RFC 9110, 13.2.2)."""
    headers = [("ETag", etag), *headers]
    bare = etag.strip('"')
    if request.if_match and not request.if_match.contains(bare):
        raise ProblemError("precondition-failed", f"If-Match does not name {etag}, which is what this address holds.", headers=[("ETag", etag)])
    if request.if_none_match and request.if_none_match.contains_weak(bare):
        return Response(status=304, headers=[(name, value) for name, value in headers if name != "Content-Encoding"])
    return Response(content, 200, headers, content_type=media_type)


def language_of_request():
    """The language that this request prefers."""
    return chosen(request.environ)
