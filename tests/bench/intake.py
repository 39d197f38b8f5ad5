"""How fast a large sheet is taken in, against the bare driver writing the same rows."""

import sqlite3
import time
from pathlib import Path
from statistics import median

from tests.bench.measure import Books
from tests.bench.plant import Plant

ROWS_A_TRANSACTION = 50_000
CACHE_KIB = 65_536


def import_against_bare(folder: Path, plant: Plant, runs: int) -> tuple[float, float, float]:
    """(ratio of the rates, seconds of an import, seconds of the bare driver), medians of the runs.

    Each run takes the sheet into a new database and then writes its rows once more with
    `executemany` into an empty table of the same making, sorted by cell and time.
    """
    sheets = folder / "sheets"
    plant.write(sheets)
    ratios, imports_s, bares_s = [], [], []
    for number in range(runs):
        books = Books(folder / f"run-{number}")
        books.folder.mkdir()
        books.command("init", "--plant", sheets / "plant.toml")
        books.command("import", sheets / "current.csv")
        imports_s.append(books.command("import", sheets / "volts.csv"))
        bares_s.append(bare_s(books, folder / "bare.db"))
        ratios.append(bares_s[-1] / imports_s[-1])
        books.path.unlink()
    return median(ratios), median(imports_s), median(bares_s)


def bare_s(books: Books, path: Path) -> float:
    """Seconds that `executemany` takes for the readings of these books, cell by cell."""
    rows = books.rows(
        "SELECT cell_id, at_ms, revision, microvolts, suspect, delivery_id FROM reading"
        " ORDER BY cell_id, at_ms"
    )
    [(table,)] = books.rows("SELECT sql FROM sqlite_master WHERE name = 'reading'")
    path.unlink(missing_ok=True)
    connection = sqlite3.connect(path, isolation_level=None)
    try:
        for pragma in ("journal_mode=WAL", "synchronous=FULL", f"cache_size=-{CACHE_KIB}"):
            connection.execute(f"PRAGMA {pragma}")
        connection.execute(str(table))
        started = time.perf_counter()
        for first in range(0, len(rows), ROWS_A_TRANSACTION):
            connection.execute("BEGIN IMMEDIATE")
            connection.executemany(
                "INSERT INTO reading VALUES (?, ?, ?, ?, ?, ?)",
                rows[first : first + ROWS_A_TRANSACTION],
            )
            connection.execute("COMMIT")
        return time.perf_counter() - started
    finally:
        connection.close()
        path.unlink()
