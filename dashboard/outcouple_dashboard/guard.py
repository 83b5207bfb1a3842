"""What keeps strangers out: who may call, what may be sent, what a page may load."""

from __future__ import annotations

import hmac
from collections.abc import Sequence
from typing import Any
from urllib.parse import urlsplit

from dash import Dash
from flask import Flask, Response, abort, make_response, redirect, request

__all__ = ["LARGEST", "LOOPBACK", "protect"]

LOOPBACK = ("localhost", "127.0.0.1")
LARGEST = 4_000_000
"""Bytes a request may hold."""
COOKIE = "outcouple-token"


def protect(app: Dash, *, hosts: Sequence[str] = (), token: str = "") -> None:
    """Trusted hosts, foreign pages refused, size limit, content policy, and the token where there is one."""
    server: Flask = app.server
    server.config["TRUSTED_HOSTS"] = [*LOOPBACK, *hosts]
    server.config["MAX_CONTENT_LENGTH"] = LARGEST
    policy = _policy(app)
    server.before_request(_refuse_foreign)
    if token:
        server.before_request(lambda: _ask_token(token))

    def finish(response: Response) -> Response:
        response.headers["Content-Security-Policy"] = policy
        response.headers["X-Content-Type-Options"] = "nosniff"
        response.headers["Referrer-Policy"] = "no-referrer"
        response.headers["Cross-Origin-Opener-Policy"] = "same-origin"
        response.headers["Cross-Origin-Resource-Policy"] = "same-origin"
        return response

    server.after_request(finish)


def _policy(app: Dash) -> str:
    """Scripts from here alone, the few inline ones by their hash; nothing from or to anywhere else."""
    scripts = " ".join(["'self'", *app.csp_hashes()])
    return "; ".join(
        [
            "default-src 'self'",
            f"script-src {scripts}",
            "style-src 'self' 'unsafe-inline'",
            "img-src 'self' data: blob:",
            "font-src 'self' data:",
            "connect-src 'self'",
            "worker-src 'self' blob:",
            "object-src 'none'",
            "base-uri 'none'",
            "form-action 'none'",
            "frame-ancestors 'none'",
        ]
    )


def _refuse_foreign() -> None:
    """A page of somebody else may link here, and do nothing more."""
    origin = request.headers.get("Origin")
    if origin is not None and urlsplit(origin).netloc != request.host:
        abort(403, "requests of other pages are refused")
    site = request.headers.get("Sec-Fetch-Site", "none")
    link = request.method == "GET" and request.headers.get("Sec-Fetch-Mode") == "navigate"
    if site not in ("same-origin", "none") and not link:
        abort(403, "requests of other pages are refused")


def _ask_token(token: str) -> Any:
    """The token comes once in the address and stays as a cookie."""
    given = request.args.get("token")
    if given is not None and hmac.compare_digest(given.encode(), token.encode()):
        answer = make_response(redirect(request.path))
        answer.set_cookie(COOKIE, token, httponly=True, samesite="Strict")
        return answer
    if not hmac.compare_digest(request.cookies.get(COOKIE, "").encode(), token.encode()):
        abort(403, "a token is needed; open the address that the command printed")
    return None
