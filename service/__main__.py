"""`python -m service`: starts the web service with its own access line and no server header."""

import argparse
import logging.config
import os
import sys
from collections.abc import Sequence
from http import HTTPStatus

import uvicorn
from uvicorn.protocols.http.httptools_impl import HttpToolsProtocol

from service.app import create_app
from service.problems import KINDS, problem_response
from service.settings import Settings, SettingsError, settings_from

LONGEST_ADDRESS = 65_535  # bytes; the parser takes no more
LOGGING = {
    "version": 1,
    "disable_existing_loggers": False,
    "formatters": {"line": {"format": "%(asctime)s %(levelname)s %(name)s: %(message)s"}},
    "handlers": {
        "out": {"class": "logging.StreamHandler", "formatter": "line", "stream": "ext://sys.stdout"}
    },
    "root": {"level": "INFO", "handlers": ["out"]},
}


class Protocol(HttpToolsProtocol):
    """Answers what is no HTTP as every other error is answered: as problem details with the cautions."""

    def send_400_response(self, msg: str) -> None:
        """Answer bytes that could not be parsed, and close."""
        cycle = self.cycle
        if cycle is None or cycle.response_complete or not cycle.response_started:
            self.transport.write(refusal_of(getattr(self, "url", b"")))
        self.transport.close()  # in the middle of an answer, cutting it off is the only honest end


def refusal_of(address: bytes) -> bytes:
    """The whole answer to a request that could not be parsed, of which this much of an address came in."""
    code, detail = _complaint(address)
    request_id = os.urandom(8).hex()
    response = problem_response({"meltband.request_id": request_id}, code, detail)
    status = HTTPStatus(KINDS[code].status)
    headers = [
        *response.raw_headers,
        (b"x-request-id", request_id.encode()),
        (b"link", b'</v1/safety>; rel="help"'),
        (b"cache-control", b"no-store"),
        (b"connection", b"close"),
    ]
    lines = b"".join(b"%s: %s\r\n" % header for header in headers)
    return b"HTTP/1.1 %d %s\r\n%s\r\n%s" % (status, status.phrase.encode(), lines, bytes(response.body))


def _complaint(address: bytes) -> tuple[str, str]:
    if len(address) > LONGEST_ADDRESS:
        return "address-too-long", f"The address is longer than {LONGEST_ADDRESS} bytes. Ask by POST."
    if not address.isascii():
        return (
            "bad-request",
            "The address holds bytes that are not escaped: write µ as %C2%B5, a space as %20.",
        )
    return (
        "bad-request",
        "What came in cannot be read as HTTP/1.1: mind the method, spaces in the address (write %20), "
        "header lines and lengths, and that this port speaks http, not https.",
    )


def main(arguments: Sequence[str] | None = None) -> int:
    """Read the settings, start, and serve until told to stop; return the exit code."""
    try:
        settings = read_settings(arguments)
    except SettingsError as error:
        sys.stderr.write(f"meltband: {error}\n")
        return 2
    serve(settings)
    return 0


def read_settings(arguments: Sequence[str] | None) -> Settings:
    """Combine the environment with the command line; the command line wins."""
    parser = argparse.ArgumentParser(prog="python -m service", description="Serve Meltband over HTTP.")
    parser.add_argument("--host", help="address to listen on (default 127.0.0.1)")
    parser.add_argument("--port", type=int, help="port to listen on (default 8000; 0 takes any free one)")
    parser.add_argument("--root-path", help="path prefix a proxy serves this under, such as /meltband")
    parser.add_argument(
        "--allow-remote",
        action="store_const",
        const=True,
        help="listen on an address other machines can reach; there is no log-in",
    )
    given = parser.parse_args(arguments)
    settings = settings_from(
        os.environ,
        host=given.host,
        port=given.port,
        root_path=given.root_path,
        allow_remote=given.allow_remote,
    )
    settings.check_address()
    return settings


def serve(settings: Settings) -> None:
    """Run the server; SIGTERM and SIGINT let running answers finish first."""
    logging.config.dictConfig(LOGGING)
    logging.getLogger("meltband.access").disabled = not settings.access_log
    uvicorn.run(
        create_app(settings),
        host=settings.host,
        port=settings.port,
        http=Protocol,
        ws="none",
        log_config=None,
        access_log=False,
        server_header=False,
        forwarded_allow_ips=settings.trusted_proxies,
        timeout_keep_alive=settings.keep_alive_s,
        timeout_graceful_shutdown=settings.graceful_timeout_s,
    )


if __name__ == "__main__":
    sys.exit(main())
