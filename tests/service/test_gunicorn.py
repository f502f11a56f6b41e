"""The service under the gunicorn of the deployment: configuration, refusals before the application, load, and a clean end."""
import json
import runpy
import signal
import threading
import urllib.request

import pytest
from serving import ROOT, raw, served

BODY = json.dumps({"circuit": "thevenin", "source": {"voltage_volt": 12, "resistance_ohm": 1000}, "instrument": "multimeter-dc-volts"}).encode()


@pytest.fixture(scope="module")
def port(tmp_path_factory):
    """A running service."""
    with served(tmp_path_factory.mktemp("log") / "errors") as (port, _):
        yield port


def post(length, extra=b""):
    """Head of a POST to the loading-error check."""
    return b"POST /v1/checks/loading-error HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: %d\r\n%s\r\n" % (length, extra)


def test_configuration(monkeypatch):
    monkeypatch.setenv("PORT", "1234")
    monkeypatch.setenv("WEB_CONCURRENCY", "3")
    found = runpy.run_path(str(ROOT / "deploy" / "gunicorn.py"))
    assert found["bind"] == "127.0.0.1:1234" and found["workers"] == 3
    assert found["preload_app"] and found["control_socket_disable"]
    assert found["worker_class"] == "precontact_service.worker.Worker"


def test_the_same_bytes_from_every_worker(port):
    def ask(_):
        request = urllib.request.Request(f"http://127.0.0.1:{port}/v1/checks/loading-error", BODY, {"Content-Type": "application/json"})
        with urllib.request.urlopen(request, timeout=10) as response:
            return response.read()

    assert len({ask(n) for n in range(20)}) == 1


@pytest.mark.parametrize("name, message, status", [
    ("no HTTP", b"\x16\x03\x01\x02\x00\r\n\r\n", 400),
    ("bad method", b"G@T / HTTP/1.1\r\n\r\n", 400),
    ("bad version", b"GET / HTTP/9.9\r\n\r\n", 400),
    ("bad header", b"GET / HTTP/1.1\r\nbad header: 1\r\n\r\n", 400),
    ("long address", b"GET /" + b"a" * 9000 + b" HTTP/1.1\r\n\r\n", 414),
    ("long header", b"GET / HTTP/1.1\r\nX: " + b"a" * 9000 + b"\r\n\r\n", 431),
    ("unknown coding", b"POST /v1/checks/loading-error HTTP/1.1\r\nHost: x\r\nTransfer-Encoding: strange\r\n\r\n", 501),
    ("two lengths", b"POST /v1/checks/loading-error HTTP/1.1\r\nHost: x\r\nContent-Length: 1\r\nContent-Length: 2\r\n\r\n{}", 400)])
def test_what_is_not_http_is_a_problem_too(port, name, message, status):
    found, headers, body = raw(port, message)
    assert found == status
    assert headers["Content-Type"] == "application/problem+json"
    problem = json.loads(body)
    assert problem["status"] == status and problem["type"] == "/problems/bad-request" and problem["detail"]
    assert headers["X-Content-Type-Options"] == "nosniff"


@pytest.mark.parametrize("size", [262_145, 5_000_000])
def test_oversize_body_is_answered_while_it_is_sent(port, size):
    status, headers, body = raw(port, post(size), b" " * size)
    assert status == 413 and headers["Content-Type"] == "application/problem+json"
    assert "262144" in json.loads(body)["detail"]


def test_oversize_without_a_length(port):
    head = b"POST /v1/checks/loading-error HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nTransfer-Encoding: chunked\r\n\r\n"
    chunk = b"10000\r\n" + b" " * 0x10000 + b"\r\n"
    status, _, body = raw(port, head, *[chunk] * 5, b"0\r\n\r\n")
    assert status == 413 and json.loads(body)["type"] == "/problems/body-too-large"


def test_chunked_body_is_read(port):
    head = b"POST /v1/checks/loading-error HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nTransfer-Encoding: chunked\r\n\r\n"
    status, _, chunked = raw(port, head, b"%x\r\n%s\r\n0\r\n\r\n" % (len(BODY), BODY))
    _, _, plain = raw(port, post(len(BODY)) + BODY)
    assert status == 200 and chunked == plain


def test_a_body_that_ends_early(port):
    import socket
    with socket.create_connection(("127.0.0.1", port), 10) as connection:
        connection.sendall(post(1000) + BODY)
        connection.shutdown(socket.SHUT_WR)
        answer = connection.recv(100_000)
    assert answer.split(b" ")[1] == b"400" and b"application/problem+json" in answer


def test_many_at_once(port):
    answers = []

    def ask():
        for _ in range(25):
            answers.append(raw(port, post(len(BODY)) + BODY)[::2])

    threads = [threading.Thread(target=ask) for _ in range(8)]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert len(answers) == 200 and len(set(answers)) == 1 and answers[0][0] == 200


@pytest.mark.parametrize("how", [signal.SIGTERM, signal.SIGINT])
def test_it_ends_cleanly_and_logs_one_json_line_per_request(tmp_path, how):
    with served(tmp_path / "errors") as (port, process):
        trace = b"00-0af7651916cd43dd8448eb211c80319c-b7ad6b7169203331-01"
        raw(port, post(len(BODY), b"traceparent: " + trace + b"\r\n") + BODY)
        raw(port, b"GET /nowhere HTTP/1.1\r\nHost: x\r\n\r\n")
        raw(port, b"GET /healthz HTTP/1.1\r\nHost: x\r\n\r\n")
        process.send_signal(how)
        assert process.wait(15) == 0
    lines = [json.loads(line) for line in (tmp_path / "errors").read_text().splitlines()]
    lines = [line for line in lines if line["event"] == "request"]
    assert [(line["method"], line["path"], line["status"]) for line in lines] == [("POST", "/v1/checks/loading-error", 200), ("GET", "/nowhere", 404)]
    assert lines[0]["traceparent"] == trace.decode() and lines[0]["milliseconds"] > 0 and lines[0]["rule_set"]
