"""The outermost layer: what every response carries, whatever made it, and the line that the log keeps of it."""
from time import perf_counter

from . import log
from .trace import traceparent

EDITION = "precontact.edition"        # a view that used another rule set than the latest leaves it here
POLICY = "precontact.field"           # set by a view of the field page, which runs its own scripts

_PROBES = ("/healthz", "/readyz")      # asked every few seconds; only a bad answer is news

CONTENT_POLICY = "default-src 'none'; style-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"
FIELD_POLICY = ("default-src 'none'; script-src 'self'; style-src 'self'; connect-src 'self'; img-src 'self'; manifest-src 'self'; worker-src 'self'; "
                "base-uri 'none'; form-action 'none'; frame-ancestors 'none'")
SECURITY = [
    ("Content-Security-Policy", CONTENT_POLICY),
    ("X-Content-Type-Options", "nosniff"),
    ("Referrer-Policy", "no-referrer"),
    ("Cross-Origin-Resource-Policy", "same-origin"),
]
FIELD_SECURITY = [("Content-Security-Policy", FIELD_POLICY), *SECURITY[1:]]


class Door:
    """WSGI layer around the application. The headers are lists made once; nothing here parses or copies."""

    def __init__(self, application, latest, logged):
        self._application, self._latest, self._logged = application, latest, logged
        self._latest_headers = [latest.header, *SECURITY]

    def __call__(self, environ, start_response):
        started = perf_counter()

        def start(status, headers, exc_info=None):
            edition = environ.get(EDITION)
            if edition is None and POLICY not in environ:
                headers.extend(self._latest_headers)
            else:
                headers.extend([(edition or self._latest).header, *(FIELD_SECURITY if POLICY in environ else SECURITY)])
            if self._logged and not (status.startswith("200") and environ["PATH_INFO"] in _PROBES):
                log.request(environ, status, started, (edition or self._latest).version, traceparent(environ))
            return start_response(status, headers, exc_info)

        return self._application(environ, start)
