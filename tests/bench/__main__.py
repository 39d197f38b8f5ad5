"""Runs every measurement and prints what was wanted beside what was found.

    make bench                          all of it, about a quarter of an hour
    python -m tests.bench --small       the same on a plant of a few cells, to see that it runs
    python -m tests.bench --arrays      the arithmetic on arrays alone, in seconds

Ratios are of one run on one machine and can be compared between machines; times cannot.
"""

import argparse
import sys
import tempfile
from dataclasses import dataclass
from pathlib import Path

from rich.console import Console
from rich.table import Table

from server import clock
from tests.bench.arrays import charts_against_a_pass
from tests.bench.intake import import_against_bare
from tests.bench.measure import quantile
from tests.bench.plant import DAY_S, Plant
from tests.bench.serving import books_of, served

console = Console()


@dataclass(frozen=True)
class Result:
    """One line of the table: what was found, and what it must reach or must not pass."""

    what: str
    found: float
    wanted: float
    unit: str = ""
    at_least: bool = False

    @property
    def is_met(self) -> bool:
        """Whether it is as good as wanted."""
        return self.found >= self.wanted if self.at_least else self.found <= self.wanted


@dataclass(frozen=True)
class Sizes:
    """How much is measured."""

    imported: Plant
    large: Plant
    small: Plant
    runs: int
    times: int
    array_runs: int


def sizes(is_small: bool) -> Sizes:
    """The sizes that are asked for; the plants end last midnight."""
    end_s = clock.now_ms() // 1000 // DAY_S * DAY_S
    if is_small:
        return Sizes(
            Plant(2, 20, 10, end_s), Plant(2, 20, 100, end_s), Plant(2, 20, 10, end_s), 1, 5, 3
        )
    return Sizes(
        imported=Plant(10, 100, 367, end_s),
        large=Plant(10, 150, 1826, end_s),
        small=Plant(10, 150, 183, end_s),
        runs=5,
        times=100,
        array_runs=31,
    )


def array_results(runs: int) -> list[Result]:
    """Measure what works on arrays in memory."""
    console.print(f"Working out the charts of a house over five years, {runs} times ...")
    ratio, charts_s, pass_s = charts_against_a_pass(runs)
    console.print(f"  {charts_s * 1000:.0f} ms, one pass of NumPy {pass_s * 1000:.1f} ms")
    gaps, _, _ = charts_against_a_pass(runs, missing=0.005)
    console.print(f"  with one reading in 200 missing {gaps:.1f} passes")
    return [Result("residual, CUSUM and EWMA against one pass of NumPy", ratio, 5.0)]


def results(of: Sizes, folder: Path) -> list[Result]:
    """Measure everything."""
    arrays = array_results(of.array_runs)
    console.print(f"Importing {of.imported.readings:,} readings, {of.runs} times ...")
    ratio, import_s, bare_s = import_against_bare(folder, of.imported, of.runs)
    console.print(f"  {import_s:.1f} s, the bare driver {bare_s:.1f} s")
    console.print(f"Filling a plant with {of.large.readings:,} readings, and one with a tenth ...")
    large_books = books_of(folder / "large", of.large)
    small_books = books_of(folder / "small", of.small)
    console.print("Asking for every page, accounts and rounds ...")
    found = served(large_books, small_books, of.large, of.times)
    p95 = {page: quantile(times, 0.95) for page, times in found.pages.items()}
    for page, times in found.pages.items():
        words = f"{quantile(times, 0.5):6.1f} {p95[page]:6.1f}   {found.follows[page]:.2f}"
        console.print(f"  {page:36} {words}", highlight=False)
    console.print("  (median and 95th percentile, ms; share of the median with a tenth)")
    slowest = max(p95, key=p95.__getitem__)
    worst = min(found.follows, key=found.follows.__getitem__)
    return [
        *arrays,
        Result("import against the bare driver, rate", ratio, 0.30, at_least=True),
        Result("one round of 60, acknowledged, p99", quantile(found.rounds, 0.99), 50, "ms"),
        Result("accounts over a year, p95", quantile(found.accounts, 0.95), 50, "ms"),
        Result(f"slowest page, p95: {slowest}", p95[slowest], 100, "ms"),
        Result(f"with a tenth of the history: {worst}", found.follows[worst], 0.67, at_least=True),
        Result("resident memory of the server", found.resident_mib, 300, "MiB"),
    ]


def main() -> int:
    """Measure and print; answers 1 where a limit is missed on the full plant."""
    parser = argparse.ArgumentParser(prog="python -m tests.bench")
    parser.add_argument("--small", action="store_true", help="a few cells, to see that it runs")
    parser.add_argument("--arrays", action="store_true", help="the arithmetic on arrays alone")
    asked = parser.parse_args()
    is_small = asked.small
    if asked.arrays:
        found = array_results(sizes(is_small).array_runs)
    else:
        with tempfile.TemporaryDirectory(prefix="ampledger-bench-") as folder:
            found = results(sizes(is_small), Path(folder))
    table = Table("what", "found", "wanted", "", title="Ampledger, measured")
    for result in found:
        bound = "at least" if result.at_least else "at most"
        table.add_row(
            result.what,
            f"{result.found:.2f} {result.unit}".strip(),
            f"{bound} {result.wanted:g} {result.unit}".strip(),
            "met" if result.is_met else "missed",
        )
    console.print(table)
    return 0 if is_small or all(result.is_met for result in found) else 1


if __name__ == "__main__":
    sys.exit(main())
