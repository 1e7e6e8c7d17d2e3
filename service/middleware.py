"""The one middleware, around everything: request id, size limit, headers, ETags, HEAD, faults, access log."""

import hashlib
import logging
import os
import re
import time
from collections.abc import Mapping, MutableMapping
from types import MappingProxyType
from typing import Any

import anyio
from starlette.requests import ClientDisconnect
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from service.help_link import help_address
from service.problems import Refusal, problem_response

log = logging.getLogger("meltband")
access_log = logging.getLogger("meltband.access")

_REQUEST_ID = re.compile(rb"[A-Za-z0-9._-]{1,64}")
_QUIET_PATHS = frozenset({"/livez", "/readyz"})
# Most clients read no answer before they have sent everything, and a connection closed on them meanwhile
# looks like a failure of the network. So the rest of a body that is too large is thrown away first.
MOST_DISCARDED_BYTES = 64 * 1024 * 1024
LONGEST_DISCARDING_S = 10.0

_ALWAYS = [
    (b"x-content-type-options", b"nosniff"),
    (b"referrer-policy", b"no-referrer"),
    (b"x-frame-options", b"DENY"),
]
_POLICY_PAGE = (
    b"default-src 'none'; script-src 'self'; style-src 'self' 'unsafe-inline'; img-src 'self' data: blob:; "
    b"connect-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"
)
# A figure's own style sheet is wanted when it is opened by itself; nothing else in it may load or run.
_POLICY_FIGURE = b"default-src 'none'; style-src 'unsafe-inline'; sandbox"
_POLICY_DATA = b"default-src 'none'; frame-ancestors 'none'"
_KEPT_ON_304 = frozenset({b"cache-control", b"content-location", b"etag", b"link", b"vary"})
NOTHING_LARGER: Mapping[str, int] = MappingProxyType({})


class Edge:
    """Pure ASGI middleware; it stands outside all handlers, so that nothing leaves without its headers."""

    def __init__(
        self,
        app: ASGIApp,
        max_body_bytes: int,
        root_path: str = "",
        larger: Mapping[str, int] = NOTHING_LARGER,
    ) -> None:
        """`larger` names paths that take larger bodies, with their bytes."""
        self.app = app
        self.max_body_bytes = max_body_bytes
        self.root_path = root_path
        self.larger = larger

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Serve one request."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        started_s = time.perf_counter()
        asked = _Asked(scope)
        scope = dict(scope)  # the server goes by its own copy of what was asked
        scope["meltband.request_id"] = asked.request_id
        if self.root_path:  # set here, it holds whether the proxy keeps the prefix or strips it
            scope["root_path"] = self.root_path
        if asked.head:
            scope["method"] = "GET"  # answered as GET is, and sent without the body
        answer = _Answer(scope, send, asked)
        most = self.larger.get(scope["path"].removeprefix(self.root_path), self.max_body_bytes)
        try:
            if asked.content_length is None:
                receive = _counted(receive, most)
            elif asked.content_length > most:
                await _discard(receive, 0 if asked.waits else asked.content_length)
                raise _too_large(most)
            await self.app(scope, receive, answer.send)
        except Refusal as refusal:
            response = problem_response(scope, refusal.code, refusal.detail, headers=refusal.headers)
            await response(scope, receive, answer.send)
        except ClientDisconnect:
            log.info("request %s: the client went away while sending", asked.request_id)
        except Exception:
            log.exception("fault while answering request %s", asked.request_id)
            if answer.status:
                raise  # part of an answer is out; cutting the connection is the only honest end
            detail = "A fault of this service, not of your request. Report the request_id to whoever runs it."
            await problem_response(scope, "internal-error", detail)(scope, receive, answer.send)
        finally:
            if access_log.isEnabledFor(logging.INFO):
                _write_access_line(scope, asked, answer, time.perf_counter() - started_s)


class _Asked:
    """The request headers this middleware needs, read in one pass."""

    __slots__ = ("content_length", "head", "if_none_match", "request_id", "waits")

    def __init__(self, scope: Scope) -> None:
        self.head: bool = scope["method"] == "HEAD"
        self.content_length: int | None = None
        self.if_none_match = b""
        self.waits = False
        given = b""
        for name, value in scope["headers"]:
            if name == b"x-request-id":
                given = value
            elif name == b"if-none-match":
                self.if_none_match += (b"," if self.if_none_match else b"") + value
            elif name == b"content-length" and value.isdigit():
                self.content_length = int(value)
            elif name == b"expect":
                self.waits = True  # sends its body only if told to go on, so there is nothing to discard
        self.request_id = given.decode() if _REQUEST_ID.fullmatch(given) else os.urandom(8).hex()


class _Answer:
    """Passes the answer on with its headers; holds the body of a GET back until its ETag is known."""

    __slots__ = ("asked", "body", "held", "next", "scope", "size", "status")

    def __init__(self, scope: Scope, send: Send, asked: _Asked) -> None:
        self.scope = scope
        self.next = send
        self.asked = asked
        self.status = 0
        self.size = 0
        self.held: MutableMapping[str, Any] | None = None
        self.body: list[bytes] = []

    async def send(self, message: Message) -> None:
        if message["type"] == "http.response.start":
            _add_headers(self.scope, self.asked, message)
            if self.scope["method"] == "GET":
                self.held = message
                self.body.clear()
                return
            self.status = message["status"]
            await self.next(message)
        elif message["type"] == "http.response.body" and self.held is not None:
            self.body.append(message.get("body", b""))
            if not message.get("more_body", False):
                await self._send_held(self.held, b"".join(self.body))
        else:
            self.size += len(message.get("body", b""))
            await self.next(message)

    async def _send_held(self, start: MutableMapping[str, Any], body: bytes) -> None:
        headers: list[tuple[bytes, bytes]] = start["headers"]
        if start["status"] == 200:
            etag = b'"%s"' % hashlib.sha256(body).hexdigest()[:32].encode()
            headers.append((b"etag", etag))
            if _matches(self.asked.if_none_match, etag):
                start["status"], body = 304, b""
                kept = _KEPT_ON_304 | {b"x-request-id"} | {name for name, _ in _ALWAYS}
                start["headers"] = [(name, value) for name, value in headers if name in kept]
        if self.asked.head:
            body = b""
        self.status, self.size = start["status"], len(body)
        await self.next(start)
        await self.next({"type": "http.response.body", "body": body})


def _add_headers(scope: Scope, asked: _Asked, start: Message) -> None:
    headers: list[tuple[bytes, bytes]] = list(start.get("headers", ()))
    kind, cached = b"", False
    for name, value in headers:
        if name == b"content-type":
            kind = value
        elif name == b"cache-control":
            cached = True
    headers.append((b"x-request-id", asked.request_id.encode()))
    address = scope.get("root_path", "") + help_address(
        scope["path"], scope["query_string"] if scope["method"] == "GET" else b"", start["status"] == 200
    )
    headers.append((b"link", b'<%s>; rel="help"' % address.encode()))
    if not cached:
        # stored answers are checked again before use; errors and answers to POST are not stored
        storable = start["status"] == 200 and scope["method"] == "GET"
        headers.append((b"cache-control", b"no-cache" if storable else b"no-store"))
    headers.extend(_ALWAYS)
    page, figure = kind.startswith(b"text/html"), kind.startswith(b"image/")
    policy = _POLICY_PAGE if page else _POLICY_FIGURE if figure else _POLICY_DATA
    headers.append((b"content-security-policy", policy))
    start["headers"] = headers


def _matches(if_none_match: bytes, etag: bytes) -> bool:
    """Compare weakly, as RFC 9110 asks for If-None-Match."""
    if not if_none_match:
        return False
    tags = [tag.strip().removeprefix(b"W/") for tag in if_none_match.split(b",")]
    return b"*" in tags or etag in tags


def _counted(receive: Receive, limit: int) -> Receive:
    """Count a body that came without a length and stop where it grows larger than `limit` bytes."""
    total = 0

    async def counting() -> Message:
        nonlocal total
        message = await receive()
        total += len(message.get("body", b""))
        if total > limit:
            if message.get("more_body", False):
                await _discard(receive)
            raise _too_large(limit)
        return message

    return counting


async def _discard(receive: Receive, length: int | None = None) -> None:
    """Read and forget the body, of `length` bytes if that is known, unless it is too much even for that."""
    if length == 0 or (length is not None and length > MOST_DISCARDED_BYTES):
        return
    total = 0
    with anyio.move_on_after(LONGEST_DISCARDING_S):
        while total <= MOST_DISCARDED_BYTES:
            message = await receive()
            total += len(message.get("body", b""))
            if message["type"] != "http.request" or not message.get("more_body", False):
                return


def _too_large(limit: int) -> Refusal:
    """The refusal; the connection is closed because what is still coming goes unread."""
    detail = f"The body is larger than {limit} bytes. Ask in smaller parts."
    return Refusal("body-too-large", detail, headers={"Connection": "close"})


def _write_access_line(scope: Scope, asked: _Asked, answer: _Answer, took_s: float) -> None:
    """Log one line a request; the raw path cannot hold a line break, and the query is left out."""
    path = (scope.get("raw_path") or scope["path"].encode("unicode_escape")).decode("ascii", "replace")
    if path in _QUIET_PATHS and answer.status == 200:
        return
    method = "HEAD" if asked.head else scope["method"]
    access_log.info(
        "%s %s %d %d B %.1f ms id=%s",
        method,
        path,
        answer.status,
        answer.size,
        took_s * 1000,
        asked.request_id,
    )
