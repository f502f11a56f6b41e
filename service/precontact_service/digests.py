"""The digest of a question, by a quicker encoder than the engine has where that writes the very same text."""
import hashlib
import re

import orjson
from precontact_rules import canonical

# What orjson may lay out otherwise than RFC 8785: 1.0, exponents, whole numbers beyond 2^53.  Every alternative begins with a digit: that is quick to look for.
_DOUBTFUL = re.compile(rb"\d(?:\.0(?!\d)|[eE]|\d{15})")


def digest(body):
    """What canonical.digest gives for this JSON data."""
    text = orjson.dumps(body, option=orjson.OPT_SORT_KEYS)
    if text.isascii() and b"\\" not in text and not _DOUBTFUL.search(text):
        return "sha-256:" + hashlib.sha256(text).hexdigest()
    return canonical.digest(body)
