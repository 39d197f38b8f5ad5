"""The lives of many flags at once, with what of the books they follow from."""

from collections.abc import Sequence

from sqlalchemy.orm import Session

from server.storage.finds import finds_between, pulls_between
from server.storage.flag_acts import FlagKey, acts_on_flags
from server.storage.plant import House
from server.storage.readings_before import last_believed
from server.watch.flags import FlagResult
from server.watch.life import DAY_MS, EFFECT_MS, FlagLife, Span, life_of

_REACH_MS = 30 * DAY_MS
"""How far back a cell's newest reading is looked for."""


def key_of(house: House, flag: FlagResult) -> FlagKey:
    """What a flag's acts are kept under."""
    return house.section(flag.section).cell_id(flag.cell), flag.kind, flag.raised_ms


def lives(
    session: Session, house: House, flags: Sequence[FlagResult], at_ms: int
) -> list[FlagLife]:
    """How each of these flags stands at a moment."""
    if not flags:
        return []
    first_ms = min(flag.raised_ms for flag in flags)
    last_ms = max(flag.raised_ms for flag in flags)
    keys = [key_of(house, flag) for flag in flags]
    acts = acts_on_flags(session, first_ms, last_ms + 1)
    finds = finds_between(session, first_ms, at_ms + 1)
    ended = [flag.ended_ms for flag in flags if flag.ended_ms is not None]
    pulls = pulls_between(session, min(ended) - EFFECT_MS, max(ended) + 1) if ended else {}
    closable = {key[0] for key in keys if key in acts or key[0] in finds}
    read_ms = _last_read(session, sorted(closable), at_ms)
    return [
        life_of(
            Span(flag.kind, flag.raised_ms, flag.ended_ms),
            acts.get(key, ()),
            finds.get(key[0], ()),
            at_ms,
            pulls.get(key[0], ()),
            read_ms.get(key[0]),
        )
        for flag, key in zip(flags, keys, strict=True)
    ]


def _last_read(session: Session, cell_ids: Sequence[int], at_ms: int) -> dict[int, int]:
    """Moment of each cell's newest believed reading by then."""
    asked = [(cell_id, at_ms + 1) for cell_id in cell_ids]
    found, moments, _ = last_believed(session, asked, _REACH_MS, 1)
    return dict(zip(found.tolist(), moments.tolist(), strict=True))
