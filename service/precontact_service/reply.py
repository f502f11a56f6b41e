"""Responses to a GET: bytes with their language, validators and caching."""
import hashlib

import orjson
from flask import Response, request

from .language import chosen
from .problems import ProblemError

JSON = "application/json"
REVALIDATE = "no-cache"                                   # may change with a release: ask again, and mostly hear 304
FOR_EVER = "public, max-age=31536000, immutable"


def resource(data, language=None, caching=REVALIDATE):
    """The response to a GET of JSON data; its ETag is the digest of its bytes."""
    content = orjson.dumps(data)
    return content_response(content, JSON, f'"sha-256:{hashlib.sha256(content).hexdigest()}"', caching, language)


def content_response(content, media_type, etag, caching, language=None, extra=()):
    """The response to a GET of exact bytes, honouring If-Match and If-None-Match (RFC 9110, 13.2.2)."""
    headers = [("ETag", etag), ("Cache-Control", caching), *extra]
    if language:
        headers += [("Content-Language", language), ("Vary", "Accept-Language")]
    bare = etag.strip('"')
    if request.if_match and not request.if_match.contains(bare):
        raise ProblemError("precondition-failed", f"If-Match does not name {etag}, which is what this address holds.", headers=[("ETag", etag)])
    if request.if_none_match and request.if_none_match.contains_weak(bare):
        return Response(status=304, headers=headers)
    return Response(content, 200, headers, content_type=media_type)


def language_of_request():
    """The language that this request prefers."""
    return chosen(request.environ)
