"""The field page, its runtime and the sealed rule sets: the files that a phone keeps to answer without a network.

The same files as a static export, with the headers that a plain web server may not know. Read once: what is served is what was there at the start.
"""
from flask import Blueprint, Response, request
from precontact_rules.canonical import canonical_bytes
from precontact_rules.sealing import field

from ..door import EDITION, POLICY
from ..problems import ProblemError
from ..reply import FOR_EVER, JSON, REVALIDATE, represented
from ..representation import Representation

_MEDIA_TYPES = {
    ".html": "text/html; charset=utf-8", ".js": "text/javascript; charset=utf-8", ".css": "text/css; charset=utf-8", ".json": JSON,
    ".webmanifest": "application/manifest+json", ".svg": "image/svg+xml", ".png": "image/png", ".ico": "image/x-icon", ".txt": "text/plain; charset=utf-8",
}


def blueprint(editions, seals):
    """Routes under /field/."""
    made = Blueprint("field", __name__, url_prefix="/field")
    files = {name: Representation(path.read_bytes(), _MEDIA_TYPES[path.suffix]) for name, path in field.page_files().items()}

    @made.get("")
    def without_slash():
        return Response(status=308, headers={"Location": "/field/"})

    @made.get("/", defaults={"name": "index.html"})
    @made.get("/<path:name>")
    def file(name):
        request.environ[POLICY] = True
        if name not in files:
            raise ProblemError("not-found", f"The field page has no file {name[:80]!r}; it starts at /field/.")
        return represented(files[name], REVALIDATE)

    @made.get("/rule-set/latest.json")
    def latest():
        edition = editions.latest
        return represented(Representation(canonical_bytes(field.latest_document(edition.rule_set, edition.retirement)), JSON), REVALIDATE)

    @made.get("/rule-set/keys.json")
    def keys():
        return represented(seals.keys, REVALIDATE)

    @made.get("/rule-set/keys.seal.json")
    def keys_seal():
        return represented(seals.keys_seal, REVALIDATE)

    @made.get("/rule-set/<string:version>.json")
    def bundle(version):
        edition = _found(editions, version)
        return represented(edition.bundle, FOR_EVER, edition.retirement_headers)

    @made.get("/rule-set/<string:version>.seal.json")
    def seal(version):
        return represented(seals.of(_found(editions, version)), REVALIDATE)

    return made


def _found(editions, version):
    if version not in editions.retirements:         # a digest is no name here: the files are those of a static export
        raise ProblemError("not-found", f"No released rule set has the version {version[:80]!r}; {editions.available}.")
    edition = request.environ[EDITION] = editions.find(version)
    return edition
