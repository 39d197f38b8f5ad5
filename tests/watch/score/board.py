"""The scoreboard: what is wanted of the watch beside what was found, process by process."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass

from tests.watch.score.amounts import coverage, current_error, sections_within, work_list
from tests.watch.score.charts import FALSE_SHARE
from tests.watch.score.detectors import OURS, PLAIN, TOLD
from tests.watch.score.seen import (
    act_per_shift,
    chatter,
    drifts_seen,
    false_per_thousand,
    flagged_share,
    flags_after_events,
    run_length,
    steps_seen,
)
from tests.watch.score.watched import Cases, usual

DESIGNED_RUN = 1.0 / FALSE_SHARE
MOST_FALSE = 1000.0 * FALSE_SHARE


@dataclass(frozen=True)
class Found:
    """One figure of one process."""

    text: str
    is_met: bool


@dataclass(frozen=True)
class Line:
    """One measure: what is wanted, and what was found in each process."""

    measure: str
    wanted: str
    found: tuple[Found, ...]
    told: tuple[str, ...]
    """What the told detector reaches; empty where it is no yardstick."""


@dataclass(frozen=True)
class Board:
    """All of it; `shares` are the detectors' shares of the ampere-hours, by process."""

    processes: tuple[str, ...]
    lines: tuple[Line, ...]
    shares: tuple[tuple[str, tuple[float, ...], tuple[float, ...]], ...]
    """Detector, share of short ampere-hours flagged, false flags of shorts per 1,000 readings."""


@dataclass(frozen=True)
class _Measure:
    measure: str
    wanted: str
    of: Callable[[Cases, Cases], Found]
    """Of the watch, with the told detector beside it."""
    is_for_told: bool = False


def board(found: Mapping[str, Mapping[str, Cases]]) -> Board:
    """The scoreboard of cases by process and detector."""
    lines = tuple(
        Line(
            one.measure,
            one.wanted,
            tuple(one.of(of[OURS], of[TOLD]) for of in found.values()),
            tuple(
                one.of(of[TOLD], of[TOLD]).text if one.is_for_told else "" for of in found.values()
            ),
        )
        for one in MEASURES
    )
    shares = tuple(
        (
            name,
            tuple(flagged_share(usual(of[name])) for of in found.values()),
            tuple(false_per_thousand(usual(of[name]), ("short",)) for of in found.values()),
        )
        for name in (TOLD, OURS, *PLAIN)
    )
    return Board(tuple(found), lines, shares)


def _share(ours: Cases, told: Cases) -> Found:
    best = flagged_share(usual(told))
    share = flagged_share(usual(ours)) / best if best else float("nan")
    return Found(f"{share:.3f}", share >= 0.90)


def _false(ours: Cases, _: Cases) -> Found:
    false = false_per_thousand(usual(ours))
    return Found(f"{false:.2f}", false <= MOST_FALSE)


def _first(ours: Cases, _: Cases) -> Found:
    first, _second, steps = steps_seen(ours)
    return Found(f"{first:.3f} of {steps}", first >= 0.90)


def _second(ours: Cases, _: Cases) -> Found:
    second = steps_seen(ours)[1]
    return Found(f"{second:.4f}", second >= 0.999)


def _drifts(ours: Cases, _: Cases) -> Found:
    seen, drifts = drifts_seen(ours)
    return Found(f"{seen:.2f} of {drifts}", seen >= 0.95)


def _current(ours: Cases, _: Cases) -> Found:
    error = current_error(usual(ours))
    return Found(f"{error:.1%}", error < 0.20)


def _covers(ours: Cases, _: Cases) -> Found:
    covers = coverage(usual(ours))
    return Found(f"{covers:.1%}", 0.93 <= covers <= 0.97)


def _sections(ours: Cases, _: Cases) -> Found:
    within, middle = sections_within(usual(ours))
    return Found(f"{within:.0%}, median error {middle:.0%}", within >= 1.0)


def _act(ours: Cases, _: Cases) -> Found:
    act = act_per_shift(ours)
    return Found(f"{act:.3f}", act <= 0.05)


def _quiet(ours: Cases, _: Cases) -> Found:
    readings = run_length(ours)
    return Found(f"{readings:.0f}", abs(readings / DESIGNED_RUN - 1.0) <= 0.1)


def _events(ours: Cases, _: Cases) -> Found:
    most, mean, events = flags_after_events(usual(ours))
    return Found(f"{most}, mean {mean:.2f} of {events}", most <= 3)


def _chatter(ours: Cases, _: Cases) -> Found:
    again = chatter(ours)
    return Found(f"{again}", again == 0)


def _precision(ours: Cases, _: Cases) -> Found:
    precision = work_list(usual(ours))[0]
    return Found(f"{precision:.3f}", precision >= 0.90)


def _ndcg(ours: Cases, _: Cases) -> Found:
    ndcg = work_list(usual(ours))[1]
    return Found(f"{ndcg:.3f}", ndcg >= 0.95)


MEASURES = (
    _Measure(
        "short ampere-hours flagged, over those that the told detector flags",
        "at least 0.90",
        _share,
    ),
    _Measure("false flags per 1,000 readings", f"at most {MOST_FALSE:g}", _false),
    _Measure("steps of six sigma and more, at the first reading", "at least 0.90", _first, True),
    _Measure("the same, by the second", "at least 0.999", _second, True),
    _Measure("drifts of one sigma a week, within 12 days", "at least 0.95", _drifts),
    _Measure("short current at flagged readings, median error", "under 20 %", _current, True),
    _Measure("its 95 % interval holds the true one", "93 to 97 %", _covers, True),
    _Measure("sections whose short ampere-hours are within 20 %", "all", _sections, True),
    _Measure("flags to act per shift of 1,500 quiet cells", "at most 0.05", _act, True),
    _Measure(
        "readings of quiet plants for each flag",
        f"{0.9 * DESIGNED_RUN:.0f} to {1.1 * DESIGNED_RUN:.0f}",
        _quiet,
    ),
    _Measure("flags after a trip, a step or a new meter, most", "at most 3", _events, True),
    _Measure("flags that chatter", "0", _chatter),
    _Measure("work list: precision at 10", "at least 0.90", _precision, True),
    _Measure("work list: NDCG at 20", "at least 0.95", _ndcg, True),
)


def as_markdown(of: Board, day: str, plants: int, readings: int) -> str:
    """The scoreboard as it stands in DEVELOPERS.md."""
    heads = " | ".join(of.processes)
    lines = [
        f"Found on {day}, on {plants} made-up sections and {readings:,} readings. A figure that",
        "misses what is wanted is in bold; in brackets stands what the told detector reaches.",
        "",
        f"| measure | wanted | {heads} |",
        "|---|---|" + "---|" * len(of.processes),
    ]
    for line in of.lines:
        found = " | ".join(
            f"{f.text if f.is_met else f'**{f.text}**'}{f' ({told})' if told else ''}"
            for f, told in zip(line.found, line.told, strict=True)
        )
        lines.append(f"| {line.measure} | {line.wanted} | {found} |")
    lines += [
        "",
        "Share of all short ampere-hours that passed while the cell was flagged as short; in",
        "brackets false flags of shorts per 1,000 readings:",
        "",
        f"| detector | {heads} |",
        "|---|" + "---|" * len(of.processes),
    ]
    for name, shares, false in of.shares:
        found = " | ".join(f"{s:.3f} ({f:.1f})" for s, f in zip(shares, false, strict=True))
        lines.append(f"| {name} | {found} |")
    return "\n".join(lines)
