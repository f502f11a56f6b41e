"""W3C trace context: the caller's trace is echoed in problems and named in the log."""
import re

_FORM = re.compile(r"(?!ff)[0-9a-f]{2}-(?!0{32})[0-9a-f]{32}-(?!0{16})[0-9a-f]{16}-[0-9a-f]{2}", re.ASCII)


def traceparent(environ):
    """The request's valid traceparent, or None."""
    given = environ.get("HTTP_TRACEPARENT")
    return given if given is not None and _FORM.fullmatch(given) else None
