"""Bytes as they are sent: plain, or compressed once at the start, each form with validators of its own.

RFC 9110 makes a content coding part of the representation: the compressed form has another strong ETag and, by RFC 9530, another Repr-Digest, both of the
bytes that travel. Who wants to know that the plain bytes are those of a rule set compares their SHA-256 with its digest after decoding.
"""
import base64
import gzip
import hashlib

JSON = "application/json"
_WORTH_IT = 0.9         # a compressed form must be this much shorter
_SMALL = 1_000          # bytes that travel in one packet anyway


class Form:
    """One form of the bytes."""

    def __init__(self, content, coding=None):
        sha256 = hashlib.sha256(content)
        self.content, self.coding = content, coding
        self.tag = f"sha-256:{sha256.hexdigest()}"
        self.etag = f'"{self.tag}"'
        self.repr_digest = f"sha-256=:{base64.b64encode(sha256.digest()).decode()}:"


class Representation:
    """What one address holds."""

    def __init__(self, content, media_type):
        self.media_type, self.plain, self.compressed = media_type, Form(content), None
        if len(content) > _SMALL:
            compressed = gzip.compress(content, 9, mtime=0)         # no time: the same bytes from every process
            if len(compressed) < len(content) * _WORTH_IT:
                self.compressed = Form(compressed, "gzip")

    def chosen(self, accepted, held):
        """The form for a request that accepts these encodings and names the ETags `held` in its conditions (werkzeug's objects).

        The choice is the server's. A form that the client says it holds comes first, so that its question is answered by yes or no, and not
        by the same thing in another dress.
        """
        if self.compressed is None:
            return self.plain
        compressed_wanted = accepted.quality("gzip")
        if compressed_wanted <= 0:
            return self.plain
        for form in (self.compressed, self.plain):
            if held.is_weak(form.tag) or held.is_strong(form.tag):
                return form
        return self.compressed if compressed_wanted >= accepted.quality("identity") else self.plain
