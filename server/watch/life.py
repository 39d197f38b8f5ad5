"""The life of a flag: raised, seen, shelved, worked on, ended, and what was found there.

Its state follows from the flag itself, from what people did about it and from what was found at
the cell. A find speaks for the flags of its cell that were open then, or had ended no more than
two days before. It closes those it is a verdict on; should the cell's readings still say the same
a day later, the flag comes back by itself. So does one that was shelved, when its time is over.
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Literal

from server.storage.finds import FoundThere
from server.storage.flag_acts import ActDone

DAY_MS = 86_400_000

AFTERWARDS_MS = 2 * DAY_MS
"""For so long after a flag has ended a find at its cell still speaks for it."""

RESTS_MS = DAY_MS
"""For so long after a find a flag stays closed, whatever the readings say."""

LONGEST_SHELF_MS = 7 * DAY_MS
"""Nothing is shelved for longer."""

EFFECT_MS = 2 * DAY_MS
"""A find or a pull counts as what ended a flag that ended no later than this after it."""

State = Literal["raised", "seen", "shelved", "working", "ended"]
STATES: tuple[State, ...] = ("raised", "seen", "working", "shelved", "ended")

Verdict = Literal["hit", "false call", "something else"]
EndedBy = Literal["evidence", "pull", "find", "person"]

_SAYS: dict[str, frozenset[str]] = {
    "short": frozenset({"short", "insulator"}),
    "drift low": frozenset({"short", "insulator"}),
    "drift high": frozenset({"contact", "anode"}),
}
"""What must be found for each kind to have been right.

An insulator out of its place lets the plates touch, and a short that creeps begins as a drift.
"""

CLAIMS = tuple(_SAYS)
"""Kinds that claim something of the cell which a look at it can confirm."""


@dataclass(frozen=True, slots=True)
class Span:
    """What of a flag its life follows from."""

    kind: str
    raised_ms: int
    ended_ms: int | None


@dataclass(frozen=True, slots=True)
class FlagLife:
    """How a flag stands at a moment."""

    state: State
    since_ms: int
    """Since when it is in this state."""
    seen_by: str | None = None
    """Who was the first to do something about it."""
    shelved_until_ms: int | None = None
    reason: str = ""
    """Why it is shelved, or was closed."""
    assigned_to: str | None = None
    """Who works on it, or did."""
    ended_by: EndedBy | None = None
    verdict: Verdict | None = None
    find: FoundThere | None = None
    """What the verdict rests on."""
    came_back_ms: int | None = None
    """When it came back from the shelf, or after a find."""


def verdict_of(kind: str, found: str) -> Verdict | None:
    """What a find says of a flag of this kind; None where it says nothing of it."""
    if kind not in _SAYS:
        return None
    if found == "nothing":
        return "false call"
    return "hit" if found in _SAYS[kind] else "something else"


def find_speaks(span: Span, find: FoundThere) -> bool:
    """Whether a find at the flag's cell came while it was open, or shortly after."""
    last_ms = None if span.ended_ms is None else span.ended_ms + AFTERWARDS_MS
    return find.at_ms >= span.raised_ms and (last_ms is None or find.at_ms <= last_ms)


def judged(
    span: Span, finds: Sequence[FoundThere], linked: frozenset[tuple[int, int, int]] = frozenset()
) -> tuple[Verdict, FoundThere] | None:
    """What the finds at its cell say of a flag; None while nobody has looked.

    A find is `linked` when somebody recorded it as the answer to this very flag. Of several finds
    a hit goes before anything else, and a false call before something else that was found.
    """
    order: tuple[Verdict, ...] = ("hit", "false call", "something else")
    told = [
        (verdict, find)
        for find in finds
        if (find_speaks(span, find) or find.key in linked)
        and (verdict := verdict_of(span.kind, find.found)) is not None
    ]
    return min(told, key=lambda pair: (order.index(pair[0]), pair[1].at_ms), default=None)


def life_of(
    span: Span,
    acts: Sequence[ActDone],
    finds: Sequence[FoundThere],
    at_ms: int,
    pulls: Sequence[int] = (),
    last_read_ms: int | None = None,
) -> FlagLife:
    """How a flag stands at a moment.

    `acts` are those on this flag, `finds` and `pulls` those of its cell, all by time;
    `last_read_ms` is the cell's newest believed reading.
    """
    acts = [act for act in acts if act.at_ms <= at_ms]
    finds = [find for find in finds if find.at_ms <= at_ms]
    there = {find.key for find in finds}
    # An act whose find was withdrawn closes nothing.
    acts = [act for act in acts if act.find is None or act.find in there]
    linked = frozenset(act.find for act in acts if act.find is not None)
    verdict, find = judged(span, finds, linked) or (None, None)
    assigned = [act.assigned_to for act in acts if act.assigned_to]
    life = FlagLife(
        "raised",
        span.raised_ms,
        seen_by=acts[0].who if acts else None,
        assigned_to=assigned[-1] if assigned else None,
        verdict=verdict,
        find=find,
    )
    if span.ended_ms is not None and span.ended_ms <= at_ms:
        by = _ended_by(span, finds, linked, pulls)
        return replace(life, state="ended", since_ms=span.ended_ms, ended_by=by)
    closing = _closing(span, acts, finds, linked)
    if closing is None:
        return _opened(life, acts, at_ms)
    closed_ms, closed_by, why = closing
    back_ms = closed_ms + RESTS_MS
    if last_read_ms is None or last_read_ms < back_ms:
        return replace(life, state="ended", since_ms=closed_ms, ended_by=closed_by, reason=why)
    return _opened(replace(life, since_ms=back_ms, came_back_ms=back_ms), acts, at_ms)


def _opened(life: FlagLife, acts: Sequence[ActDone], at_ms: int) -> FlagLife:
    """A flag that is open, with what people did since it was raised or came back."""
    for act in acts:
        if act.at_ms < life.since_ms:
            continue
        life = _off_the_shelf(life, act.at_ms)
        is_shelved = life.state == "shelved"
        if act.act == "shelved":
            until_ms, why = act.until_ms, act.reason
            life = replace(life, state="shelved", shelved_until_ms=until_ms, reason=why)
        elif act.act == "working":
            life = replace(life, state="working", shelved_until_ms=None, reason="")
        elif (act.act == "seen" and life.state == "raised") or (
            act.act == "unshelved" and is_shelved
        ):
            life = replace(life, state="seen", shelved_until_ms=None, reason="")
        else:
            continue
        life = replace(life, since_ms=act.at_ms)
    return _off_the_shelf(life, at_ms)


def _off_the_shelf(life: FlagLife, at_ms: int) -> FlagLife:
    """The same, or raised again where it was shelved and the time is over."""
    until_ms = life.shelved_until_ms
    if life.state != "shelved" or until_ms is None or until_ms > at_ms:
        return life
    return replace(
        life,
        state="raised",
        since_ms=until_ms,
        came_back_ms=until_ms,
        shelved_until_ms=None,
        reason="",
    )


def _closing(
    span: Span,
    acts: Sequence[ActDone],
    finds: Sequence[FoundThere],
    linked: frozenset[tuple[int, int, int]],
) -> tuple[int, EndedBy, str] | None:
    """The last thing that closed an open flag: when, what kind of thing, and why."""
    closed: list[tuple[int, EndedBy, str]] = [
        (find.at_ms, "find", find.found)
        for find in finds
        if find.key in linked
        or (find_speaks(span, find) and verdict_of(span.kind, find.found) in ("hit", "false call"))
    ]
    closed += [
        (act.at_ms, "person", act.reason)
        for act in acts
        if act.act == "closed" and act.find is None
    ]
    return max(closed, key=lambda one: one[0], default=None)


def _ended_by(
    span: Span,
    finds: Sequence[FoundThere],
    linked: frozenset[tuple[int, int, int]],
    pulls: Sequence[int],
) -> EndedBy:
    """What a flag that has ended was ended by: the last find or pull that can have done it."""
    assert span.ended_ms is not None
    ends: list[tuple[int, EndedBy]] = [
        (find.at_ms, "find")
        for find in finds
        if find.key in linked or verdict_of(span.kind, find.found) in ("hit", "false call")
    ]
    ends += [(pulled_ms, "pull") for pulled_ms in pulls]
    can = [
        end
        for end in ends
        if max(span.raised_ms, span.ended_ms - EFFECT_MS) <= end[0] <= span.ended_ms
    ]
    return max(can, key=lambda end: end[0])[1] if can else "evidence"
