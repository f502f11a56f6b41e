"""gunicorn's sync worker, whose own refusals are problem documents too: what is not HTTP never reaches the application."""
from http import HTTPStatus

import orjson
from gunicorn import util
from gunicorn.http import errors
from gunicorn.workers.sync import SyncWorker

from .door import SECURITY
from .problems import MEDIA_TYPE, document

_STATUSES = ((errors.LimitRequestLine, 414), (errors.LimitRequestHeaders, 431), (errors.ExpectationFailed, 417), (errors.UnsupportedTransferCoding, 501))


class Worker(SyncWorker):
    """One request at a time, closed after each: the buffering proxy in front keeps connections."""

    def handle_error(self, req, client, addr, exc):
        """Answer what could not be read as HTTP, or an application that failed outside its own handlers."""
        ours = (errors.InvalidResponseHeader, errors.InvalidResponseHeaderName)
        if not isinstance(exc, errors.ParseException) or isinstance(exc, ours):
            self.log.error("Error handling request", exc_info=exc)
            code, status, detail = "internal-error", 500, "The service failed before it could answer."
        else:
            status = next((status for kind, status in _STATUSES if isinstance(exc, kind)), 400)
            code, detail = "bad-request", f"{type(exc).__name__}: {str(exc)[:200]}"
        try:
            util.write_nonblock(client, _message(status, orjson.dumps(document(code, detail, status=status))))
        except OSError:
            self.log.debug("The client was gone before the problem could be sent.")


def _message(status, body):
    headers = [("Content-Type", MEDIA_TYPE), ("Content-Length", str(len(body))), ("Connection", "close"), *SECURITY]
    lines = [f"HTTP/1.1 {status} {HTTPStatus(status).phrase}", *(f"{name}: {value}" for name, value in headers)]
    return "\r\n".join(lines).encode("latin-1") + b"\r\n\r\n" + body
