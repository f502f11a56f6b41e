"""Problem documents (RFC 9457): the one form of every error response."""
import orjson
from flask import Response, request
from precontact_rules import InputProblems
from werkzeug.exceptions import HTTPException

from . import log
from .problem_types import BY_STATUS, TYPES
from .trace import traceparent

MEDIA_TYPE = "application/problem+json"
_INPUT_DETAIL = "The input cannot be used; `errors` lists every fault."


class ProblemError(Exception):
    """A request that is refused: the code of a problem type, a sentence, the faults, and extra headers."""

    def __init__(self, code, detail, faults=(), headers=()):
        super().__init__(detail)
        self.code, self.detail, self.faults, self.headers = code, detail, faults, headers


def document(code, detail, faults=(), status=None, trace=None):
    """The problem document, a dict."""
    kind = TYPES[code]
    found = {"type": f"/problems/{code}", "title": kind.title, "status": status or kind.status, "detail": detail}
    if faults:
        found["errors"] = [_fault(f) for f in faults]
    if trace:
        found["traceparent"] = trace
    return found


def _fault(fault):
    # A fault in the query string has no place in the body: its pointer is written "?name".
    place = {"parameter": fault.pointer[1:]} if fault.pointer.startswith("?") else {"pointer": fault.pointer}
    return {**place, "code": fault.code, "detail": fault.detail}


def respond(code, detail, faults=(), headers=(), status=None):
    """The response for one problem."""
    body = document(code, detail, faults, status, traceparent(request.environ))
    response = Response(orjson.dumps(body), status=body["status"], content_type=MEDIA_TYPE)
    response.headers.extend(headers)
    response.headers["Content-Language"] = "en"
    response.headers["Cache-Control"] = "no-store"
    return response


def on_refusal(error):
    """Handler of ProblemError."""
    return respond(error.code, error.detail, error.faults, error.headers)


def on_input(error):
    """Handler of InputProblems, which the rule engine raises."""
    return respond("invalid-input", _INPUT_DETAIL, error.problems)


def on_http(error):
    """Handler of what Flask and werkzeug raise themselves: 404, 405, 413 and the like."""
    if error.code is None or error.code < 400:
        return error
    if error.code == 405:
        allowed = ", ".join(sorted(error.valid_methods or ()))
        return respond("method-not-allowed", f"{request.method} is not answered here; {allowed} is.", headers=[("Allow", allowed)])
    if error.code == 404:
        return respond("not-found", f"There is nothing at {request.path[:100]}; / describes every address.")
    code = BY_STATUS.get(error.code, "bad-request" if error.code < 500 else "internal-error")
    detail = error.description if error.code < 500 else TYPES["internal-error"].meaning
    return respond(code, detail, status=error.code)


def on_fault(error):
    """Handler of everything else: logged in full, answered without a word of it."""
    log.failure(error, request.method, request.path, traceparent(request.environ))
    return respond("internal-error", TYPES["internal-error"].meaning)


def register(app):
    """Make every error of `app` a problem document."""
    app.register_error_handler(ProblemError, on_refusal)
    app.register_error_handler(InputProblems, on_input)
    app.register_error_handler(HTTPException, on_http)
    app.register_error_handler(Exception, on_fault)
