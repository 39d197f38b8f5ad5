"""The watch's own record: how often it was right, and what its probabilities were worth."""

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.finds import FoundThere, finds_between
from server.storage.flag_acts import ActDone, FlagKey, acts_on_flags
from server.storage.flag_spans import FlagSpan, flag_spans
from server.storage.plant import House
from server.watch.life import CLAIMS, DAY_MS, Span, Verdict, judged

LATELY_MS = 90 * DAY_MS
"""What is called lately."""

OFTEN = 3
"""Flags of one cell, lately, from which on it is one that comes back again and again."""

_BINS = (0.5, 0.7, 0.9, 0.99, 1.0)
_SURE = 0.95
_TIERS = ("act", "look")
_FROM_THE_START_MS = 0


@dataclass(frozen=True)
class Rightness:
    """How many were right, of those that were looked at, with a 95 % interval (Wilson's)."""

    share: float
    low: float
    high: float


@dataclass(frozen=True)
class Counted:
    """Flags of one kind and tier, and what was found where they stood."""

    kind: str
    tier: str
    raised: int
    hits: int
    false_calls: int
    something_else: int

    @property
    def not_looked_at(self) -> int:
        """Flags of which no find says anything."""
        return self.raised - self.hits - self.false_calls - self.something_else

    @property
    def right(self) -> Rightness | None:
        """The share of hits among hits and false calls; None while there is neither."""
        return rightness(self.hits, self.hits + self.false_calls)


@dataclass(frozen=True)
class Bin:
    """Flags whose stated probability lay in [low, high), and how many of them were right."""

    low: float
    high: float
    flags: int
    hits: int
    stated: float | None
    """The mean of what was stated."""

    @property
    def right(self) -> Rightness | None:
        """The share that was right."""
        return rightness(self.hits, self.flags)


@dataclass(frozen=True)
class Record:
    """The watch's record up to a moment."""

    at_ms: int
    lately: tuple[Counted, ...]
    overall: tuple[Counted, ...]
    calibration: tuple[Bin, ...] | None
    """None where no flag states a probability."""


@dataclass(frozen=True)
class ComesBack:
    """A cell that was flagged again and again."""

    section: str
    cell: int
    flags: int
    kinds: tuple[tuple[str, int], ...]
    """Each kind with how often, the most frequent first."""
    last_ms: int


def rightness(hits: int, looked_at: int) -> Rightness | None:
    """The share of hits with its interval; None where nobody looked."""
    if not looked_at:
        return None
    # Imported here: it takes longer than everything else of a command's start.
    from scipy.stats import binomtest

    interval = binomtest(hits, looked_at).proportion_ci(_SURE, method="wilson")
    return Rightness(hits / looked_at, float(interval.low), float(interval.high))


def watch_record(session: Session, at_ms: int) -> Record:
    """The record over every flag that was raised up to a moment."""
    flags = flag_spans(session, _FROM_THE_START_MS, at_ms + 1)
    finds = finds_between(session, _FROM_THE_START_MS, at_ms + 1)
    acts = acts_on_flags(session, _FROM_THE_START_MS, at_ms + 1)
    told = [(flag, _verdict(flag, finds, acts)) for flag in flags]
    lately = [pair for pair in told if pair[0].raised_ms >= at_ms - LATELY_MS]
    return Record(at_ms, _counted(lately), _counted(told), _calibration(told))


def coming_back(session: Session, house: House, at_ms: int) -> list[ComesBack]:
    """Cells with three flags and more lately, the most often flagged first."""
    kinds: dict[tuple[int, int], Counter[str]] = {}
    last: dict[tuple[int, int], int] = {}
    for flag in flag_spans(session, at_ms - LATELY_MS, at_ms + 1):
        if flag.kind in CLAIMS and flag.raised_ms >= at_ms - LATELY_MS:
            cell = (flag.section_id, flag.cell_id)
            kinds.setdefault(cell, Counter())[flag.kind] += 1
            last[cell] = flag.raised_ms
    found = []
    for (section_id, cell_id), counts in kinds.items():
        if counts.total() >= OFTEN:
            section = house.section_of_id(section_id)
            number = section.number_of(cell_id)
            newest = last[(section_id, cell_id)]
            often = tuple(sorted(counts.items(), key=lambda pair: (-pair[1], pair[0])))
            found.append(ComesBack(section.name, number, counts.total(), often, newest))
    return sorted(found, key=lambda cell: (-cell.flags, cell.section, cell.cell))


def _verdict(
    flag: FlagSpan,
    finds: Mapping[int, Sequence[FoundThere]],
    acts: Mapping[FlagKey, Sequence[ActDone]],
) -> Verdict | None:
    of_cell = finds.get(flag.cell_id)
    if not of_cell:
        return None
    there = {find.key for find in of_cell}
    of_flag = acts.get((flag.cell_id, flag.kind, flag.raised_ms), ())
    linked = frozenset(act.find for act in of_flag if act.find is not None and act.find in there)
    found = judged(Span(flag.kind, flag.raised_ms, flag.ended_ms), of_cell, linked)
    return found[0] if found else None


def _counted(told: Iterable[tuple[FlagSpan, Verdict | None]]) -> tuple[Counted, ...]:
    """One line for each kind and tier that occurs: kinds of claims first, then the others."""
    raised: Counter[tuple[str, str]] = Counter()
    verdicts: Counter[tuple[str, str, Verdict | None]] = Counter()
    for flag, verdict in told:
        raised[flag.kind, flag.tier] += 1
        verdicts[flag.kind, flag.tier, verdict] += 1
    order = [*CLAIMS, *sorted({kind for kind, _ in raised} - set(CLAIMS))]
    return tuple(
        Counted(
            kind,
            tier,
            raised[kind, tier],
            verdicts[kind, tier, "hit"],
            verdicts[kind, tier, "false call"],
            verdicts[kind, tier, "something else"],
        )
        for kind in order
        for tier in _TIERS
        if raised[kind, tier]
    )


def _calibration(told: Sequence[tuple[FlagSpan, Verdict | None]]) -> tuple[Bin, ...] | None:
    if all(flag.probability is None for flag, _ in told):
        return None
    looked_at = [
        (flag.probability, verdict == "hit")
        for flag, verdict in told
        if flag.probability is not None and verdict in ("hit", "false call")
    ]
    bins = []
    for low, high in zip(_BINS, _BINS[1:], strict=False):
        # The last one takes in what was stated as certain.
        inside = [
            (stated, right)
            for stated, right in looked_at
            if low <= stated < high or (high == 1.0 and stated >= 1.0)
        ]
        mean = sum(stated for stated, _ in inside) / len(inside) if inside else None
        bins.append(Bin(low, high, len(inside), sum(right for _, right in inside), mean))
    return tuple(bins)
