"""A bare Flask route that returns the bytes of a file: what a check over HTTP is measured against."""
import os
from pathlib import Path

from flask import Flask, Response

application = Flask(__name__)
CONTENT = Path(os.environ["PRECONTACT_BARE_CONTENT"]).read_bytes()


@application.post("/v1/checks/loading-error")
def bare():
    """The same bytes, whatever is asked."""
    return Response(CONTENT, mimetype="application/json")
