"""`ampledger serve`: the pages and the API on an address."""

import os
import socket
from typing import Annotated

import typer

from server.commands.terminal import REFUSED, books, fail, settings
from server.settings import Settings
from server.storage.database import Database

Host = Annotated[str, typer.Option(help="Address to serve on; leave it and put a proxy in front.")]
Port = Annotated[int, typer.Option(min=1, max=65_535, help="Port to serve on.")]


def serve(
    host: Host = "127.0.0.1",
    port: Port = 8000,
    proxy: Annotated[
        str,
        typer.Option(
            metavar="ADDRESS",
            help="Address from which a reverse proxy comes; its X-Forwarded headers are believed.",
        ),
    ] = "",
) -> None:
    """Serve pages and API until stopped; older tables are brought up to date first."""
    chosen = settings()
    with books(chosen) as database:
        serve_books(chosen, database, host, port, proxy)


def serve_books(
    chosen: Settings, database: Database, host: str, port: int, proxy: str = ""
) -> None:
    """Serve books that are there."""
    if not is_free(host, port):
        fail(f"{host}:{port} is taken, or cannot be served on; choose another --port", REFUSED)
    # Loaded here, so that the commands that serve nothing start without all of the web.
    from server.web.app import create_app
    from server.web.serving import run

    run(
        create_app(chosen, database),
        host=host,
        port=port,
        proxy_headers=bool(proxy),
        forwarded_allow_ips=proxy or None,
        log_config=None,
        access_log=False,
        server_header=False,
        ws="none",
        timeout_graceful_shutdown=20,
    )


def is_free(host: str, port: int) -> bool:
    """Whether an address can be served on."""
    try:
        addresses = socket.getaddrinfo(host, port, type=socket.SOCK_STREAM)
    except OSError:
        return False
    family, kind, protocol, _, address = addresses[0]
    with socket.socket(family, kind, protocol) as tried:
        if os.name == "posix":
            # Elsewhere this would let two programs have one port.
            tried.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            tried.bind(address)
        except OSError:
            return False
    return True
