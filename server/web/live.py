"""Tells open pages that something changed: one look at the books a second, shared by all of them.

What is told is a token without meaning; a page that knows another one fetches itself anew, with
whatever its reader may see. Only while somebody listens does a thread look, in a session of its
own that ends at once: a listener holds no connection to the database.
"""

import asyncio
import contextlib
import threading
from collections.abc import AsyncIterator
from dataclasses import dataclass, field
from hashlib import blake2s

import structlog
from sqlalchemy.exc import SQLAlchemyError
from sqlalchemy.orm import Session

from server.storage.database import Database
from server.storage.news import newest

LOOK_EVERY_S = 1.0
BEAT_EVERY_S = 15.0
"""How often a word without meaning is sent, so that nobody in between takes the line for dead."""

LASTS_S = 3600.0
"""After this a stream ends. The browser comes again, and it is found out anew who asks."""

COME_AGAIN_MS = 5000
"""How long a browser waits before it comes again."""

MOST_LISTENERS = 500

log = structlog.get_logger()


def live_token(session: Session) -> str:
    """The token of what is newest as this session sees the books."""
    return blake2s(repr(newest(session)).encode(), digest_size=8).hexdigest()


@dataclass(eq=False)
class _Listener:
    loop: asyncio.AbstractEventLoop = field(default_factory=asyncio.get_running_loop)
    woken: asyncio.Event = field(default_factory=asyncio.Event)

    def wake(self) -> None:
        """Let it look up, from whichever thread; one whose server has gone hears nothing."""
        with contextlib.suppress(RuntimeError):
            self.loop.call_soon_threadsafe(self.woken.set)


class Live:
    """Those who listen, and the thread that looks for them."""

    def __init__(self, database: Database) -> None:
        self._database = database
        self._listeners: set[_Listener] = set()
        self._guard = threading.Lock()
        self._over = threading.Event()
        self._thread: threading.Thread | None = None
        self._token = ""

    @property
    def listeners(self) -> int:
        """How many listen."""
        return len(self._listeners)

    @property
    def is_full(self) -> bool:
        """Whether no more are taken."""
        return self.listeners >= MOST_LISTENERS

    async def events(self) -> AsyncIterator[bytes]:
        """What one listener is sent: the token at once, and again whenever it is another one."""
        listener = _Listener()
        self._join(listener)
        try:
            told = ""
            ends_s = listener.loop.time() + LASTS_S
            yield b"retry: %d\n\n" % COME_AGAIN_MS
            while not self._over.is_set() and listener.loop.time() < ends_s:
                listener.woken.clear()
                if self._token != told:
                    told = self._token
                    yield f"event: changed\ndata: {told}\n\n".encode()
                try:
                    await asyncio.wait_for(listener.woken.wait(), BEAT_EVERY_S)
                except TimeoutError:
                    yield b": still here\n\n"
        finally:
            self._leave(listener)

    def stop(self) -> None:
        """End every stream and the thread; a second time changes nothing."""
        self._over.set()
        self._wake()
        thread = self._thread
        if thread is not None:
            thread.join()

    def _join(self, listener: _Listener) -> None:
        with self._guard:
            self._listeners.add(listener)
            if self._thread is None and not self._over.is_set():
                self._thread = threading.Thread(target=self._look, name="live", daemon=True)
                self._thread.start()

    def _leave(self, listener: _Listener) -> None:
        with self._guard:
            self._listeners.discard(listener)

    def _wake(self) -> None:
        with self._guard:
            for listener in self._listeners:
                listener.wake()

    def _look(self) -> None:
        """Look until it is over or nobody listens any more."""
        while True:
            token = self._found()
            if token != self._token:
                self._token = token
                self._wake()
            self._over.wait(LOOK_EVERY_S)
            with self._guard:
                if self._over.is_set() or not self._listeners:
                    self._thread, self._token = None, ""
                    return

    def _found(self) -> str:
        """The token now; the former one while the books cannot be reached."""
        try:
            with self._database.read() as session:
                return live_token(session)
        except (SQLAlchemyError, OSError) as error:
            log.warning("the books cannot be looked at for open pages", error=str(error))
            return self._token
