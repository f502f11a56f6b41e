"""Starts the service as it is deployed, on a free port, for tests that need real sockets and processes."""
import contextlib
import http.client
import os
import signal
import socket
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]


def free_port():
    """A port that nobody listens on at this moment."""
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return probe.getsockname()[1]


@contextlib.contextmanager
def served(log, application="precontact_service.wsgi:application"):
    """(port, process) of a gunicorn with the deployment's configuration; `log` is a path for its standard error."""
    port = free_port()
    environment = {**os.environ, "PORT": str(port), "PYTHONPATH": os.pathsep.join([str(ROOT / "rules"), str(ROOT / "service"), *sys.path])}
    command = [sys.executable, "-m", "gunicorn", "--config", str(ROOT / "deploy" / "gunicorn.py"), application]
    with open(log, "wb") as errors:
        process = subprocess.Popen(command, env=environment, stderr=errors, cwd=ROOT)
    try:
        wait_until_ready(port, process)
        yield port, process
    finally:
        if process.poll() is None:
            process.send_signal(signal.SIGTERM)
            process.wait(15)


def wait_until_ready(port, process, patience=30):
    """Return when something answers on the port; raise if the process ends first."""
    until = time.monotonic() + patience
    while time.monotonic() < until:
        if process.poll() is not None:
            raise RuntimeError(f"ended with {process.returncode}")
        with contextlib.suppress(OSError), socket.create_connection(("127.0.0.1", port), 1):
            return
        time.sleep(0.05)
    raise TimeoutError(port)


def raw(port, *parts, pause=0.0):
    """(status, headers, body) of what comes back for exactly these bytes, sent part by part."""
    with socket.create_connection(("127.0.0.1", port), 10) as connection:
        for part in parts:
            with contextlib.suppress(BrokenPipeError, ConnectionResetError):
                connection.sendall(part)
            time.sleep(pause)
        response = http.client.HTTPResponse(connection)
        response.begin()
        return response.status, response.headers, response.read()
