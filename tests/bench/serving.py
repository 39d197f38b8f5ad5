"""How fast pages, accounts and rounds are answered, and how that follows the history."""

import importlib
import json
import pkgutil
import re
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from statistics import median
from uuid import uuid4

from server.web import pages
from tests.bench.measure import PERSON, Books, Server, serving
from tests.bench.plant import DAY_S, Plant

ROUND = 60
"""Cells of one round."""

_PLACES = {
    "delivery_id": "SELECT MIN(id) FROM delivery",
    "number": "SELECT MAX(number) FROM cell",
    "section_name": "SELECT MAX(name) FROM section",
}
"""What stands in the place of a name in a page's address."""

_LEFT_OUT = {"/readings-in/sent/{ticket_id}", "/sign-in"}
"""A preview of a file just sent, and the page for whoever is not signed in."""


@dataclass(frozen=True)
class Served:
    """What was measured; times in ms."""

    pages: dict[str, list[float]]
    """The times of each page of the large plant."""
    follows: dict[str, float]
    """Each page's median time with a tenth of the history, over that with all of it."""
    accounts: list[float]
    rounds: list[float]
    resident_mib: float


def books_of(folder: Path, plant: Plant) -> Books:
    """A database with the whole plant in it."""
    books = Books(folder)
    sheets = folder / "sheets"
    plant.write(sheets)
    books.command("init", "--plant", sheets / "plant.toml")
    books.command("import", sheets)
    books.command(
        *("user", "add", PERSON, "--role", "superintendent", "--password-stdin"),
        typed="measured in milliseconds\n",
    )
    return books


def served(large: Books, small: Books, plant: Plant, times: int) -> Served:
    """Measure what servers of the whole history and of a tenth of it answer.

    The two take turns at each page, so that whatever else the machine does meets both alike.
    """
    with serving(large) as server, serving(small) as other:
        pages_ms, follows = {}, {}
        for page in page_addresses(large):
            pairs = _take_turns((server, page), (other, page), times)
            pages_ms[page] = pairs[0]
            follows[page] = median(pairs[1]) / median(pairs[0])
        accounts = [
            server.request("GET", _year(plant, name))[0]
            for _ in range(1 + times // len(plant.names))
            for name in plant.names
        ]
        rounds = [_send_round(server, plant, number) for number in range(times * 3)]
        return Served(pages_ms, follows, accounts, rounds, server.resident_mib)


def _take_turns(
    first: tuple[Server, str], second: tuple[Server, str], times: int
) -> tuple[list[float], list[float]]:
    found: tuple[list[float], list[float]] = ([], [])
    for turn in range(times + 1):
        for kept, (server, path) in zip(found, (first, second), strict=True):
            took_ms, _ = server.request("GET", path)
            if turn:
                kept.append(took_ms)
    return found


def page_addresses(books: Books) -> list[str]:
    """Every page there is, with names and numbers that exist where its address asks for one."""
    routers = (
        getattr(importlib.import_module(module.name), "router", None)
        for module in pkgutil.iter_modules(pages.__path__, f"{pages.__name__}.")
    )
    found = {
        route.path
        for router in routers
        if router is not None
        for route in router.routes
        if "GET" in route.methods and route.path not in _LEFT_OUT
    }
    return sorted(re.sub(r"\{(\w+)(:\w+)?\}", lambda m: _place(books, m[1]), p) for p in found)


def _place(books: Books, name: str) -> str:
    [(value,)] = books.rows(_PLACES[name])
    return str(value)


def _year(plant: Plant, section: str) -> str:
    from_s = max(plant.start_s, plant.end_s - 365 * DAY_S)
    return f"/api/v1/accounts?section={section}&from={_written(from_s)}&to={_written(plant.end_s)}"


def _send_round(server: Server, plant: Plant, number: int) -> float:
    """Send one round of a section and see it acknowledged; answers how long that took, in ms."""
    at = _written(plant.end_s + 60 * (number + 1))
    sent = [
        {
            "id": str(uuid4()),
            "section": plant.names[number % len(plant.names)],
            "cell": cell,
            "at": at,
            "volts": 2.0 + (cell * 7 + number) % 11 / 1000,
        }
        for cell in range(1, min(ROUND, plant.cells) + 1)
    ]
    took_ms, content = server.request("POST", "/api/v1/readings", {"readings": sent})
    kept = {result["status"] for result in json.loads(content)["results"]}
    if not kept <= {"stored", "suspect"}:
        raise RuntimeError(f"a round was not stored: {kept}")
    return took_ms


def _written(moment_s: int) -> str:
    return datetime.fromtimestamp(moment_s, UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
