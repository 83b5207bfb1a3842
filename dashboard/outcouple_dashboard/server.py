"""Runs the page on waitress."""

from __future__ import annotations

import logging
import secrets
import socket
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

from outcouple.errors import UserMistake

__all__ = ["Served", "serve"]

LOCAL = ("127.0.0.1", "localhost", "::1")
THREADS = 8


class Served:
    """A page that listens; ``run`` blocks until interrupted.

    address  what to open in a browser, the token in it where there is one
    """

    def __init__(
        self,
        folder: str | Path,
        *,
        port: int = 0,
        listen: str = "127.0.0.1",
        names: Sequence[str] = (),
        token: str = "",
    ) -> None:
        from waitress import create_server

        from outcouple_dashboard.app import create_app

        local = listen in LOCAL
        if not local and not token:
            token = secrets.token_urlsafe(24)
        hosts = () if local else _hosts(listen, names)
        self.app: Any = create_app(folder, hosts=hosts, token="" if local else token)
        logging.getLogger("waitress.queue").setLevel(logging.ERROR)
        try:
            self.server = create_server(
                self.app.server, host=listen, port=port, threads=THREADS, ident=None, max_request_body_size=4_000_000
            )
        except (OSError, ValueError) as error:
            raise UserMistake(f"cannot listen on {listen}:{port}: {error}") from None
        self.port = int(self.server.effective_port)
        shown = "localhost" if local else (names[0] if names else hosts[0])
        self.address = f"http://{shown}:{self.port}/" + ("" if local else f"?token={token}")

    def run(self) -> None:
        """Answer until interrupted."""
        try:
            self.server.run()
        finally:
            self.close()

    def close(self) -> None:
        """Stop listening and end background work."""
        self.server.close()
        self.app.desk.jobs.close()


def _hosts(listen: str, names: Sequence[str]) -> tuple[str, ...]:
    """Names a browser may call this machine by."""
    if names or listen not in ("0.0.0.0", "::"):
        return (*names, *(() if listen in ("0.0.0.0", "::") else (listen,)))
    return (socket.gethostname(),)


def serve(folder: str | Path, *, announce: Callable[[str], None], **options: Any) -> None:
    """Serve a folder until interrupted; ``announce`` is told the address once it listens."""
    served = Served(folder, **options)
    announce(served.address)
    served.run()
