"""The express lane: an ordinary question goes straight to its answer, past the routing and the request objects of the framework.

Measured: the framework's own work on such a request is as long as the computation. The lane takes only what is plainly in order and answers
200 or nothing: whatever is unusual or wrong takes the long way, through the documented route, which says what is the matter.
A layer that protects the service (identity, rate limits) belongs outside this one.
"""
from io import BytesIO

from .intake import LIMIT


class Express:
    """WSGI layer around the application. `questions`: {path: Question}."""

    def __init__(self, application, questions):
        self._application, self._questions = application, questions

    def __call__(self, environ, start_response):
        question = self._questions.get(environ["PATH_INFO"])
        if question is not None and environ["REQUEST_METHOD"] == "POST" and _plain(environ):
            length = int(environ["CONTENT_LENGTH"])
            raw = environ["wsgi.input"].read(length)
            try:
                if len(raw) != length:
                    raise EOFError
                content, headers = question.answer(environ, raw)
            except Exception:  # noqa: BLE001  (the long way answers it, and logs it where it is our fault)
                environ["wsgi.input"] = BytesIO(raw)
            else:
                start_response("200 OK", [*headers, ("Content-Length", str(len(content)))])
                return (content,)
        return self._application(environ, start_response)


def _plain(environ):
    length = environ.get("CONTENT_LENGTH", "")
    return (environ.get("CONTENT_TYPE") == "application/json" and not environ["QUERY_STRING"] and "HTTP_CONTENT_ENCODING" not in environ
            and length.isdecimal() and len(length) < 8 and int(length) <= LIMIT)
