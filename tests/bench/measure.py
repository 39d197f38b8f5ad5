"""What every measurement needs: commands of the program, a server of it, times of requests."""

import http.client
import json
import math
import os
import socket
import sqlite3
import subprocess
import sys
import time
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

import psutil

from server import clock
from server.web import csrf
from server.web.sign_in import SESSION_COOKIE, cookie_text, signed_in

KEY = "a key that signs the cookies of measurements alone"
PERSON = "bench"

_KEPT_ALIVE_S = 3
"""A server closes a connection that was idle for five seconds."""


@dataclass
class Books:
    """A database in a folder of its own, worked on by the program's commands."""

    folder: Path

    @property
    def path(self) -> Path:
        """The SQLite file."""
        return self.folder / "ampledger.db"

    @property
    def environment(self) -> dict[str, str]:
        """What the program is told of its surroundings."""
        return os.environ | {
            "AMPLEDGER_DATABASE_URL": f"sqlite:///{self.path}",
            "AMPLEDGER_SECRET_KEY": KEY,
            "AMPLEDGER_LOG_LEVEL": "warning",
            "AMPLEDGER_PASSWORD_MEMORY_KIB": "64",
        }

    def command(self, *arguments: str | Path, typed: str = "") -> float:
        """Run a command of the program, with what is typed; answers how long it took, in s."""
        started = time.perf_counter()
        done = subprocess.run(
            [sys.executable, "-m", "server", *map(str, arguments)],
            env=self.environment,
            cwd=Path(__file__).resolve().parents[2],
            input=typed,
            capture_output=True,
            text=True,
            check=False,
        )
        took_s = time.perf_counter() - started
        if done.returncode != 0:
            raise RuntimeError(f"{' '.join(map(str, arguments))}\n{done.stdout}{done.stderr}")
        return took_s

    def rows(self, sql: str) -> list[tuple[object, ...]]:
        """Rows straight from the file."""
        with sqlite3.connect(self.path) as connection:
            return connection.execute(sql).fetchall()


class Server:
    """A running server of some books, and one kept-alive connection of a superintendent to it."""

    def __init__(self, books: Books) -> None:
        with socket.socket() as free:
            free.bind(("127.0.0.1", 0))
            self._port = free.getsockname()[1]
        self._process = subprocess.Popen(
            [sys.executable, "-m", "server", "serve", "--port", str(self._port)],
            env=books.environment,
            cwd=Path(__file__).resolve().parents[2],
            stdout=subprocess.DEVNULL,
        )
        [(person_id, epoch)] = books.rows(
            f"SELECT id, session_epoch FROM person WHERE name = '{PERSON}'"
        )
        who = signed_in(int(str(person_id)), int(str(epoch)), clock.now_ms())
        self._headers = {
            "Cookie": f"{SESSION_COOKIE}={cookie_text(who, KEY)}",
            csrf.HEADER: csrf.form_token(who.nonce, KEY),
            "Content-Type": "application/json",
        }
        self._connection = http.client.HTTPConnection("127.0.0.1", self._port, timeout=60)
        self._last_s = 0.0
        self._wait()

    def _wait(self) -> None:
        until = time.monotonic() + 60
        while True:
            try:
                self.request("GET", "/api/v1/health")
            except OSError:
                self._connection.close()
                if time.monotonic() > until or self._process.poll() is not None:
                    raise
                time.sleep(0.1)
            else:
                return

    def request(self, method: str, path: str, body: object = None) -> tuple[float, bytes]:
        """Send one request; answers how long it took, in ms, and the answer's body."""
        sent = None if body is None else json.dumps(body)
        if time.monotonic() - self._last_s > _KEPT_ALIVE_S:
            self._connection.close()
        started = time.perf_counter()
        self._connection.request(method, path, sent, self._headers)
        answer = self._connection.getresponse()
        content = answer.read()
        took_ms = (time.perf_counter() - started) * 1000
        self._last_s = time.monotonic()
        if answer.status != 200:
            raise RuntimeError(f"{method} {path}: {answer.status} {content[:300]!r}")
        return took_ms, content

    @property
    def resident_mib(self) -> float:
        """Memory that the server holds, MiB."""
        return psutil.Process(self._process.pid).memory_info().rss / 2**20

    def stop(self) -> None:
        """End the server."""
        self._connection.close()
        self._process.terminate()
        self._process.wait(30)


@contextmanager
def serving(books: Books) -> Iterator[Server]:
    """A server of these books until the block ends."""
    server = Server(books)
    try:
        yield server
    finally:
        server.stop()


def quantile(values: Sequence[float], share: float) -> float:
    """The smallest of the values that at least this share of them does not exceed."""
    return sorted(values)[max(0, math.ceil(share * len(values)) - 1)]
