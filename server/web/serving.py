"""The server under the application: it lets streams that never end by themselves end first."""

import socket
import sys
from collections.abc import Callable
from typing import Any

import uvicorn
from fastapi import FastAPI

from server.web.site import Site

_DID_NOT_START = 3


class Server(uvicorn.Server):
    """uvicorn's server, which waits at its end for every answer that is still being sent."""

    def __init__(self, config: uvicorn.Config, before_the_wait: Callable[[], None]) -> None:
        super().__init__(config)
        self._before_the_wait = before_the_wait

    async def shutdown(self, sockets: list[socket.socket] | None = None) -> None:
        """End what would never end by itself, then wait for the rest."""
        self._before_the_wait()
        await super().shutdown(sockets)


def run(app: FastAPI, **options: Any) -> None:
    """Serve an application until it is stopped; the options are those of `uvicorn.Config`."""
    site: Site = app.state.site
    server = Server(uvicorn.Config(app, **options), site.live.stop)
    try:
        server.run()
    except KeyboardInterrupt:
        # Stopped by hand: the server has already ended in good order.
        return
    if not server.started:
        sys.exit(_DID_NOT_START)
