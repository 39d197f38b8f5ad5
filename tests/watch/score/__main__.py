"""Judges the watch on made-up plants and prints what was wanted beside what was found.

make watch-score                        all of it, some minutes
python -m tests.watch.score --write     the same, and put into DEVELOPERS.md with the date
python -m tests.watch.score --each      one line for every section, too
python -m tests.watch.score --seeds 7 8 other plants
"""

import argparse
import sys
from collections.abc import Mapping, Sequence
from datetime import UTC, datetime

from rich.console import Console
from rich.table import Table

from server import clock
from tests.source import ROOT
from tests.watch.plants.making import make
from tests.watch.plants.scenarios import SCENARIOS
from tests.watch.score.amounts import coverage, current_error, section_error
from tests.watch.score.board import Board, as_markdown, board
from tests.watch.score.detectors import OURS, TOLD, every_case
from tests.watch.score.seen import drifts_seen, false_per_thousand, flagged_share, steps_seen
from tests.watch.score.watched import Case, Cases

BEGIN, END = "<!-- watch-score: begin -->", "<!-- watch-score: end -->"
SEEDS = (1, 2)
TITLE = "The watch, judged (what the told detector reaches)"

console = Console()

ByProcess = Mapping[str, Mapping[str, Cases]]


def cases_of(seeds: Sequence[int], wanted: str = "") -> dict[str, dict[str, list[Case]]]:
    """Every detector on every scenario whose name holds the wanted words, by process."""
    found = {}
    for process in dict.fromkeys(s.trade.process for s in SCENARIOS):
        scenarios = [s for s in SCENARIOS if s.trade.process == process and wanted in s.name]
        if scenarios:
            console.print(f"{process}: {len(scenarios)} scenarios, {len(seeds)} seeds ...")
            found[process] = every_case([make(s, seed) for s in scenarios for seed in seeds])
    return found


def shown(of: Board) -> Table:
    """The scoreboard for the terminal."""
    table = Table(
        "measure",
        "wanted",
        *of.processes,
        title="The watch, judged (what the told detector reaches)",
    )
    for line in of.lines:
        found = [
            f"{f.text if f.is_met else f'[red]{f.text}[/red]'}{f' ({told})' if told else ''}"
            for f, told in zip(line.found, line.told, strict=True)
        ]
        table.add_row(line.measure, line.wanted, *found)
    table.add_section()
    for name, shares, false in of.shares:
        found = (f"{s:.3f} ({f:.1f})" for s, f in zip(shares, false, strict=True))
        table.add_row(f"flagged by: {name}", "share (false)", *found)
    return table


def each(cases: ByProcess) -> Table:
    """One line for every section."""
    table = Table(
        "section", "share/told", "told", "false/1000", "short/high/low", "steps", "drifts",
        "current", "covers", "Ah", title="Each section",
    )  # fmt: skip
    for of in cases.values():
        for told, ours in zip(of[TOLD], of[OURS], strict=True):
            one = [ours]
            has_shorts = bool(ours.plant.total_short_ah)
            best = flagged_share([told]) if has_shorts else 0.0
            first, second, steps = steps_seen(one)
            drifts, of_drifts = drifts_seen(one)
            kinds = (false_per_thousand(one, (k,)) for k in ("short", "drift high", "drift low"))
            table.add_row(
                ours.plant.name,
                f"{flagged_share(one) / best:.3f}" if best else "",
                f"{best:.3f}" if best else "",
                f"{false_per_thousand(one):.2f}",
                " / ".join(f"{kind:.1f}" for kind in kinds),
                f"{first:.2f} {second:.3f} of {steps}" if steps else "",
                f"{drifts:.2f} of {of_drifts}" if of_drifts else "",
                f"{current_error(one):.1%}" if has_shorts else "",
                f"{coverage(one):.1%}" if has_shorts else "",
                f"{section_error(ours):+.0%}" if has_shorts else "",
            )
    return table


def put_between(text: str, table: str) -> str:
    """A text with the table between its two markers, in place of what stood there."""
    before, rest = text.split(BEGIN)
    after = rest.split(END)[1]
    return f"{before}{BEGIN}\n{table}\n{END}{after}"


def main() -> int:
    """Judge and print; answers 1 where something wanted is missed."""
    parser = argparse.ArgumentParser(prog="python -m tests.watch.score")
    parser.add_argument("--write", action="store_true", help="put the table into DEVELOPERS.md")
    parser.add_argument("--each", action="store_true", help="one line for every section, too")
    parser.add_argument("--seeds", type=int, nargs="+", default=SEEDS)
    parser.add_argument("--of", default="", help="only scenarios whose name holds this")
    asked = parser.parse_args()
    cases = cases_of(asked.seeds, asked.of)
    if asked.each:
        console.print(each(cases))
    scores = board(cases)
    console.print(shown(scores))
    if asked.write:
        plants = [case.plant for of in cases.values() for case in of[OURS]]
        day = datetime.fromtimestamp(clock.now_ms() / 1000, UTC)
        table = as_markdown(
            scores,
            f"{day.day} {day:%B %Y}",
            len(plants),
            sum(int(plant.is_read.sum()) for plant in plants),
        )
        page = ROOT / "DEVELOPERS.md"
        page.write_text(put_between(page.read_text(encoding="utf-8"), table), encoding="utf-8")
    return 0 if all(f.is_met for line in scores.lines for f in line.found) else 1


if __name__ == "__main__":
    sys.exit(main())
