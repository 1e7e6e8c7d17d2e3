"""What a real client sees from a real server where the application has no say, or answers early."""

import socket
from urllib.parse import urlsplit

import httpx
import pytest

from service.problems import KINDS
from tests.conftest import RunningServer


def exchange(server, *pieces):
    """Send bytes, and return head and body of the answer."""
    host = urlsplit(server)
    with socket.create_connection((host.hostname, host.port), timeout=20) as connection:
        for piece in pieces:
            connection.sendall(piece)
        answer = b"".join(iter(lambda: connection.recv(65536), b""))
    head, _, body = answer.partition(b"\r\n\r\n")
    return head.decode(), httpx.Response(200, content=body).json()


@pytest.mark.parametrize(
    ("request_line", "code", "words"),
    [
        (b"GET /v1/safety?alloy=" + b"a" * 70_000 + b" HTTP/1.1", "address-too-long", "Ask by POST"),
        ("GET /v1/melting?alloy=Sn63Pb37µ HTTP/1.1".encode(), "bad-request", "%"),
        (b"GET /v1/melting?alloy=Sn 63 HTTP/1.1", "bad-request", "write %20"),
        (b"BREW /v1/melting HTTP/1.1", "bad-request", "method"),
        (b"\x16\x03\x01\x02\x00\x01\x00\x01\xfc\x03\x03", "bad-request", "not https"),
        (b"POST /v1/window HTTP/1.1\r\nContent-Length: 5x", "bad-request", "lengths"),
    ],
)
def test_what_cannot_be_parsed_is_answered_as_every_error_is(server, request_line, code, words):
    head, problem = exchange(server, request_line + b"\r\nHost: x\r\n\r\n")
    assert head.startswith(f"HTTP/1.1 {KINDS[code].status} ")
    assert "content-type: application/problem+json" in head
    assert f"x-request-id: {problem['request_id']}" in head
    assert len(problem["request_id"]) == 16
    assert 'link: </v1/safety>; rel="help"' in head
    assert "connection: close" in head
    assert (problem["status"], problem["code"]) == (KINDS[code].status, code)
    assert words in problem["detail"]
    assert "lead" in [note["topic"] for note in problem["safety"]["notes"]]


def test_any_method_gets_a_problem_that_names_the_possible_ones(server):
    for method in ("PROPFIND", "TRACE", "DELETE", "OPTIONS"):
        answer = httpx.request(method, f"{server}/v1/melting?alloy=Sn63Pb37")
        assert (answer.status_code, answer.json()["code"]) == (405, "method-not-allowed")
        assert answer.headers["allow"] == "GET, HEAD, POST"
        assert "lead" in [note["topic"] for note in answer.json()["safety"]["notes"]]


@pytest.mark.parametrize("chunked", [False, True])
@pytest.mark.parametrize("megabytes", [17, 50])
def test_a_client_that_sends_everything_first_reads_why_it_was_too_much(server, chunked, megabytes):
    piece = b" " * 1_000_000
    content = (piece for _ in range(megabytes)) if chunked else piece * megabytes
    answer = httpx.post(
        f"{server}/v1/window", content=content, headers={"Content-Type": "application/json"}, timeout=30
    )
    assert (answer.status_code, answer.json()["code"]) == (413, "body-too-large")
    assert answer.headers["connection"] == "close"
    assert answer.json()["safety"]["notes"]


def test_a_client_that_asks_first_is_told_before_it_sends(server):
    lines = b"Host: x\r\nExpect: 100-continue\r\nContent-Length: 20000000\r\n\r\n"
    head, problem = exchange(server, b"POST /v1/window HTTP/1.1\r\n" + lines)
    assert head.startswith("HTTP/1.1 413 ")
    assert problem["code"] == "body-too-large"


def test_more_than_is_worth_discarding_is_refused_at_once(server):
    lines = b"Host: x\r\nContent-Length: 200000000\r\n\r\n"
    head, problem = exchange(server, b"POST /v1/window HTTP/1.1\r\n" + lines)
    assert head.startswith("HTTP/1.1 413 ")
    assert problem["code"] == "body-too-large"


def test_a_client_that_goes_away_while_sending_is_no_fault():
    run = RunningServer()
    with run as address:
        host = urlsplit(address)
        with socket.create_connection((host.hostname, host.port), timeout=10) as connection:
            lines = b"Host: x\r\nContent-Type: application/json\r\nContent-Length: 500\r\n\r\n"
            connection.sendall(b"POST /v1/window HTTP/1.1\r\n" + lines + b'{"alloy":')
        assert httpx.get(f"{address}/livez").status_code == 200
    assert any("went away" in line for line in run.lines)
    assert not any("Traceback" in line or " 500 " in line for line in run.lines)
