"""The outermost wrapper: who may ask, how much, and the headers of every reply, errors included.

It stands outside the framework's own middleware because headers added inside are missing on replies
to a failed request.
"""

from __future__ import annotations

from urllib.parse import urlsplit

from starlette.datastructures import Headers, MutableHeaders
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from app.server.problems import refusal

_HEADERS = {
    "Content-Security-Policy": (
        "default-src 'self'; object-src 'none'; base-uri 'none'; form-action 'self'; frame-ancestors 'none'"
    ),
    "X-Content-Type-Options": "nosniff",
    "X-Frame-Options": "DENY",
    "Referrer-Policy": "same-origin",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Cross-Origin-Resource-Policy": "same-origin",
    "Permissions-Policy": "camera=(), geolocation=(), microphone=()",
}
_LOOPBACK = {"127.0.0.1", "localhost", "::1"}
_SAFE = {"GET", "HEAD", "OPTIONS"}


def _host_of(host: str) -> str | None:
    """The name in a Host header, or None if it is not one name with an optional port."""
    try:
        parts = urlsplit(f"//{host}")
        _ = parts.port
    except ValueError:
        return None
    plain = parts.hostname is not None and parts.username is None and not parts.path and not parts.query and not parts.fragment
    return parts.hostname if plain else None


def _same_origin(scope: Scope, headers: Headers) -> bool:
    """Whether a request that changes something comes from our own page or from no page."""
    site = headers.get("sec-fetch-site")
    if site is not None and site not in ("same-origin", "none"):
        return False
    origin = headers.get("origin")
    return origin is None or origin == f"{scope['scheme']}://{headers.get('host', '')}"


class Guard:
    """Wraps the application."""

    def __init__(self, app: ASGIApp, body_limit: int, upload_limit: int) -> None:
        self.app = app
        self.body_limit = body_limit
        self.upload_limit = upload_limit

    def _limit(self, scope: Scope) -> int:
        return self.upload_limit if scope["path"].endswith("/paper") else self.body_limit

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Refuse what is not ours, cap the body, and add the headers to whatever is sent."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return

        async def send_with_headers(message: Message) -> None:
            if message["type"] == "http.response.start":
                headers = MutableHeaders(scope=message)
                for name, value in _HEADERS.items():
                    headers.setdefault(name, value)
                headers.add_vary_header("HX-Request")
            await send(message)

        refused = self._refusal(scope)
        if refused is not None:
            status, slug = refused
            await refusal(Request(scope), status, slug)(scope, receive, send_with_headers)
            return
        await self.app(scope, self._capped(receive, self._limit(scope)), send_with_headers)

    def _refusal(self, scope: Scope) -> tuple[int, str] | None:
        headers = Headers(scope=scope)
        hosts = headers.getlist("host")
        if len(hosts) != 1 or _host_of(hosts[0]) not in _LOOPBACK:
            return 400, "unknown_host"
        if scope["method"] not in _SAFE and not _same_origin(scope, headers):
            return 403, "other_origin"
        length = headers.get("content-length", "0")
        if not (length.isascii() and length.isdigit()) or len(length) > 18 or int(length) > self._limit(scope):
            return 413, "body_too_large"
        return None

    def _capped(self, receive: Receive, limit: int) -> Receive:
        taken = 0

        async def capped() -> Message:
            nonlocal taken
            message = await receive()
            taken += len(message.get("body", b""))
            if taken > limit:
                raise HTTPException(413)
            return message

        return capped
