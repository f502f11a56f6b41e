"""The field page on a plain static server: python serve.py FOLDER writes the files there, serves them on a free port, and prints the address."""
import sys
from functools import partial
from http.server import SimpleHTTPRequestHandler, ThreadingHTTPServer
from pathlib import Path

from precontact_rules.sealing import field
from precontact_rules.sealing.keys import KeyRing


class _Quiet(SimpleHTTPRequestHandler):
    extensions_map = {**SimpleHTTPRequestHandler.extensions_map, ".js": "text/javascript", ".webmanifest": "application/manifest+json"}

    def log_message(self, *_):
        """Nothing: the tests look at the browser's side."""


def written(folder, ring):
    """Write the page, the runtime and the sealed rule sets under folder/field."""
    files = {name: path.read_bytes() for name, path in field.page_files().items()}
    field.write({**files, **field.rule_set_files(ring)}, folder / "field")


if __name__ == "__main__":
    root = Path(sys.argv[1])
    written(root, KeyRing.ephemeral())
    server = ThreadingHTTPServer(("127.0.0.1", int(sys.argv[2]) if len(sys.argv) > 2 else 0), partial(_Quiet, directory=root))
    print(f"http://127.0.0.1:{server.server_address[1]}/field/", flush=True)
    server.serve_forever()
