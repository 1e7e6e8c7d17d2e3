import http.client
import logging
import re
import signal
import socket
from urllib.parse import urlsplit

import pytest

from service.app import create_app
from service.settings import Settings
from tests.conftest import RunningServer, asker

PATHS = [
    "/",
    "/docs",
    "/problems",
    "/openapi.json",
    "/livez",
    "/readyz",
    "/version",
    "/v1/safety",
    "/nowhere",
]


@pytest.mark.parametrize("path", PATHS)
@pytest.mark.parametrize("method", ["GET", "HEAD", "POST", "OPTIONS"])
def test_every_answer_carries_the_headers(ask, path, method):
    answer = ask(method, path)
    assert answer.headers["link"] == '</v1/safety>; rel="help"'
    assert answer.headers["x-content-type-options"] == "nosniff"
    assert answer.headers["referrer-policy"] == "no-referrer"
    assert answer.headers["x-frame-options"] == "DENY"
    assert re.fullmatch("[0-9a-f]{16}", answer.headers["x-request-id"])
    assert answer.headers["content-security-policy"].startswith("default-src 'none'")
    assert answer.headers["cache-control"] == ("no-cache" if answer.status_code == 200 else "no-store")
    assert ("safety" in answer.text) is (method != "HEAD")


def test_pages_may_run_their_own_scripts_only_and_data_nothing(ask):
    page = ask("GET", "/docs").headers["content-security-policy"]
    assert "script-src 'self';" in page
    assert "'unsafe-inline'" not in page.replace("style-src 'self' 'unsafe-inline'", "")
    assert (
        ask("GET", "/livez").headers["content-security-policy"]
        == "default-src 'none'; frame-ancestors 'none'"
    )
    icon = re.search(r'href="(static/[^"]*favicon.svg)"', ask("GET", "/").text)[1]
    assert ask("GET", f"/{icon}").headers["content-security-policy"].endswith("sandbox")


@pytest.mark.parametrize(
    ("given", "kept"),
    [("abc-1.2_Z", True), ("a" * 64, True), ("a" * 65, False), ("", False), ("a b", False), ("a\xe9", False)],
)
def test_request_id_is_taken_over_or_made(ask, given, kept):
    answer = ask("GET", "/livez", headers={"X-Request-ID": given.encode("latin-1")})
    assert (answer.headers["x-request-id"] == given) is kept
    assert answer.headers["x-request-id"]


@pytest.mark.parametrize(
    "path", ["/", "/docs", "/openapi.json", "/livez", "/version", "/v1/safety?alloy=Sn63Pb37"]
)
def test_same_question_gives_the_same_bytes_and_a_strong_etag(ask, path):
    first, second = ask("GET", path), ask("GET", path)
    assert first.status_code == 200
    assert first.content == second.content
    assert first.headers["etag"] == second.headers["etag"]
    assert re.fullmatch('"[0-9a-f]{32}"', first.headers["etag"])


def test_etags_differ_where_answers_differ(ask):
    tags = {
        ask("GET", path).headers["etag"] for path in ("/", "/docs", "/v1/safety", "/v1/safety?alloy=Sn63Pb37")
    }
    assert len(tags) == 4


@pytest.mark.parametrize("form", ["{tag}", "W/{tag}", '"x", {tag}', '"x",W/{tag} , "y"', "*"])
@pytest.mark.parametrize("method", ["GET", "HEAD"])
def test_what_the_client_has_is_not_sent_again(ask, form, method):
    tag = ask("GET", "/version").headers["etag"]
    answer = ask(method, "/version", headers={"If-None-Match": form.format(tag=tag)})
    assert answer.status_code == 304
    assert answer.content == b""
    assert answer.headers["etag"] == tag
    assert answer.headers["link"] == '</v1/safety>; rel="help"'
    assert "content-type" not in answer.headers


@pytest.mark.parametrize("form", ['"x"', "x", '""', "{tag}x"])
def test_what_the_client_has_not_is_sent(ask, form):
    tag = ask("GET", "/version").headers["etag"]
    assert ask("GET", "/version", headers={"If-None-Match": form.format(tag=tag)}).status_code == 200


def test_errors_have_no_etag_and_are_never_304(ask):
    answer = ask("GET", "/nowhere", headers={"If-None-Match": "*"})
    assert answer.status_code == 404
    assert "etag" not in answer.headers


@pytest.mark.parametrize("path", PATHS)
def test_head_is_get_without_the_body(ask, path):
    get, head = ask("GET", path), ask("HEAD", path)
    assert head.status_code == get.status_code
    assert head.content == b""
    assert head.headers["content-length"] == str(len(get.content))
    assert head.headers.get("etag") == get.headers.get("etag")


def test_access_line_holds_no_query_and_no_line_break(ask, caplog):
    caplog.set_level(logging.INFO, "meltband.access")
    ask("GET", "/v1/safety?alloy=Sn63Pb37", headers={"X-Request-ID": "id-1"})
    ask("GET", "/forged%0Aline")
    ask("GET", "/livez")
    lines = [record.getMessage() for record in caplog.records if record.name == "meltband.access"]
    assert len(lines) == 2
    assert re.fullmatch(r"GET /v1/safety 200 \d+ B [0-9.]+ ms id=id-1", lines[0])
    assert lines[1].startswith("GET /forged%0Aline 404 ")


def test_a_prefix_from_a_proxy_is_honoured():
    ask = asker(create_app(Settings(root_path="/melt")))
    for path in ("/melt/nowhere", "/nowhere"):  # a proxy may keep or strip the prefix
        answer = ask("GET", path)
        assert answer.headers["link"] == '</melt/v1/safety>; rel="help"'
        assert answer.json()["type"] == "/melt/problems/not-found"
    assert ask("GET", "/melt/livez").status_code == 200
    assert ask("GET", "/openapi.json").json()["servers"] == [{"url": "/melt"}]
    assert 'src="static/' in ask("GET", "/docs").text


def test_docs_can_be_left_out():
    ask = asker(create_app(Settings(docs=False)))
    assert [ask("GET", path).status_code for path in ("/docs", "/openapi.json", "/livez")] == [404, 404, 200]
    assert 'href="docs"' not in ask("GET", "/").text


def test_files_of_the_pages_come_packed_and_may_be_kept_for_ever(ask):
    for address in re.findall(r'(?:href|src)="(static/[^"]+)"', ask("GET", "/docs").text):
        packed = ask("GET", f"/{address}", headers={"Accept-Encoding": "gzip"})
        plain = ask("GET", f"/{address}", headers={"Accept-Encoding": "identity"})
        assert packed.headers["content-encoding"] == "gzip"
        assert packed.content == plain.content
        assert "immutable" in packed.headers["cache-control"]
        assert packed.headers["vary"] == "Accept-Encoding"
        assert packed.headers["etag"] != plain.headers["etag"]


def test_real_server_talks_as_the_application_does(server):
    host = urlsplit(server)
    connection = http.client.HTTPConnection(host.hostname, host.port, timeout=10)
    connection.request("HEAD", "/readyz")
    answer = connection.getresponse()
    assert (answer.status, answer.read()) == (200, b"")
    assert answer.getheader("server") is None
    connection.request("POST", "/v1/safety", body=b"x" * 100)
    answer = connection.getresponse()
    assert answer.status == 405
    assert b'"safety"' in answer.read()
    connection.close()


def test_even_what_is_no_http_is_answered_with_a_problem(server):
    host = urlsplit(server)
    with socket.create_connection((host.hostname, host.port), timeout=10) as connection:
        connection.sendall(b"this is no request\r\n\r\n")
        answer = b"".join(iter(lambda: connection.recv(65536), b""))
    head, _, body = answer.partition(b"\r\n\r\n")
    assert head.startswith(b"HTTP/1.1 400 Bad Request")
    assert b"application/problem+json" in head
    assert b'rel="help"' in head
    assert b'"code":"bad-request"' in body
    assert b'"safety"' in body


def test_sigterm_ends_the_server_in_order():
    run = RunningServer("--root-path", "/melt")
    with run as address:
        host = urlsplit(address)
        connection = http.client.HTTPConnection(host.hostname, host.port, timeout=10)
        connection.request("GET", "/melt/readyz")
        assert connection.getresponse().status == 200
        connection.close()
    assert run.exit_code == -signal.SIGTERM  # the server hands the signal on once it is done
    assert any("Application shutdown complete" in line for line in run.lines)
    assert not any("Traceback" in line for line in run.lines)
