"""One JSON object per line on standard error: a line per request, and a line with the traceback per failure."""
import logging
import os
import time
import traceback

import orjson

_ERROR_STREAM = 2


def _write(entry):
    # One write per line: lines of several workers never mix.
    os.write(_ERROR_STREAM, orjson.dumps(entry, option=orjson.OPT_APPEND_NEWLINE))


def request(environ, status, started, rule_set, trace):
    """Log one answered request; `started` is its time.perf_counter()."""
    entry = {
        "time": time.time(),
        "event": "request",
        "method": environ["REQUEST_METHOD"],
        "path": environ["PATH_INFO"],
        "status": int(status[:3]),
        "milliseconds": round((time.perf_counter() - started) * 1e3, 3),
        "rule_set": rule_set,
    }
    if trace:
        entry["traceparent"] = trace
    _write(entry)


def failure(error, method, path, trace):
    """Log an exception that no handler expected."""
    _write({"time": time.time(), "event": "failure", "method": method, "path": path, "traceparent": trace,
            "error": repr(error), "traceback": traceback.format_exception(error)})


def event(name, **details):
    """Log something that is not a request."""
    _write({"time": time.time(), "event": name, **details})


class Lines(logging.Formatter):
    """What gunicorn itself has to say, in the same form."""

    def format(self, record):
        """One JSON object, no line end."""
        entry = {"time": record.created, "event": "gunicorn", "level": record.levelname.lower(), "message": record.getMessage()}
        if record.exc_info:
            entry["traceback"] = traceback.format_exception(*record.exc_info)
        return orjson.dumps(entry).decode()
