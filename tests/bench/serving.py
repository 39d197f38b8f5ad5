"""How fast pages, accounts and rounds are answered, and how that follows the history."""

import json
import re
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path
from uuid import uuid4

from server.settings import Settings
from server.web.app import create_app
from tests.bench.measure import PERSON, Books, Server, quantile, serving
from tests.bench.plant import DAY_S, Plant

ROUND = 60
"""Cells of one round."""

_IDS = {
    "cell_id": "SELECT MAX(id) FROM cell",
    "delivery_id": "SELECT MAX(id) FROM delivery",
    "lot_id": "SELECT MAX(id) FROM lot",
    "section_id": "SELECT MAX(id) FROM section",
}
"""What stands in the place of a number in a page's address."""


@dataclass(frozen=True)
class Served:
    """What was measured on one plant; times in ms."""

    pages: dict[str, float]
    """The 95th percentile of each page."""
    medians: dict[str, float]
    accounts_p95: float
    round_p99: float
    resident_mib: float


def books_of(folder: Path, plant: Plant) -> Books:
    """A database with the whole plant in it."""
    books = Books(folder)
    sheets = folder / "sheets"
    plant.write(sheets)
    books.command("init", "--plant", sheets / "plant.toml")
    books.command("import", sheets)
    books.command("user", "add", PERSON, "--role", "superintendent")
    return books


def served(books: Books, plant: Plant, times: int) -> Served:
    """Measure everything that a server of these books answers."""
    addresses = page_addresses(books)
    with serving(books) as server:
        pages = {page: _times(server, page, times) for page in addresses}
        accounts = [
            time_ms
            for name in plant.names
            for time_ms in _times(server, _year(plant, name), max(1, times // len(plant.names)))
        ]
        rounds = [_send_round(server, plant, number) for number in range(times * 3)]
        return Served(
            pages={page: quantile(found, 0.95) for page, found in pages.items()},
            medians={page: quantile(found, 0.5) for page, found in pages.items()},
            accounts_p95=quantile(accounts, 0.95),
            round_p99=quantile(rounds, 0.99),
            resident_mib=server.resident_mib,
        )


def page_addresses(books: Books) -> list[str]:
    """Every page there is, with numbers that exist where its address asks for one."""
    app = create_app(Settings(database_url=f"sqlite:///{books.path}"))
    found = {
        route.path
        for route in app.routes
        if "GET" in (getattr(route, "methods", None) or ())
        and not route.path.startswith(("/api/", "/static"))
    }
    return sorted(re.sub(r"\{(\w+)(:\w+)?\}", lambda m: _number(books, m[1]), p) for p in found)


def _number(books: Books, name: str) -> str:
    [(number,)] = books.rows(_IDS[name])
    return str(number)


def _times(server: Server, path: str, times: int) -> list[float]:
    server.request("GET", path)
    return [server.request("GET", path)[0] for _ in range(times)]


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
