"""Acting on a flag: what may be done to it in which state, written down with who, when and why."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.errors import Conflict, NotFound
from server.storage.finds import find_id
from server.storage.flag_acts import FlagAct, add_act
from server.storage.flag_rows import flags_touching
from server.storage.plant import House
from server.watch.flags import FlagResult, flag_result
from server.watch.life import LONGEST_SHELF_MS, FlagLife
from server.watch.lives import lives


class ActRefused(ValueError):
    """Something is missing from an act, or is more than is allowed."""

    def __init__(self, what: str, found: object = "") -> None:
        self.what, self.found = what, found
        super().__init__(f"{what}: {found}" if found else what)


@dataclass(frozen=True)
class Meant:
    """Which flag is meant: its cell, its kind and when it was raised."""

    section: str
    cell: int
    kind: str
    raised_ms: int


@dataclass(frozen=True)
class Wanted:
    """What is to be done to a flag.

    `until_ms` goes with shelving; whoever works on it is whoever acts where nobody is named;
    `find` is (moment, cathode) of the find that closes it.
    """

    act: str
    until_ms: int | None = None
    reason: str = ""
    assigned_to: str = ""
    find: tuple[int, int] | None = None


def flag_meant(session: Session, house: House, meant: Meant) -> FlagResult:
    """The flag that is meant.

    Raises
    ------
    NotFound
        When the watch does not raise it, or no longer.
    """
    section = house.section(meant.section)
    cell_id = section.cell_id(meant.cell)
    for flag in flags_touching(session, meant.raised_ms, meant.raised_ms + 1, section.id):
        if (flag.cell_id, flag.kind, flag.raised_ms) == (cell_id, meant.kind, meant.raised_ms):
            return flag_result(house, flag)
    raise NotFound("flag", meant.kind, f"of {meant.section}, cell {meant.cell}, raised then")


def life_now(session: Session, house: House, flag: FlagResult, now_ms: int) -> FlagLife:
    """How one flag stands."""
    return lives(session, house, [flag], now_ms)[0]


def act_on(
    session: Session, house: House, meant: Meant, wanted: Wanted, who: str, now_ms: int
) -> FlagResult:
    """Do something to a flag; answers the flag.

    Raises
    ------
    NotFound
        When there is no such flag, or no such find.
    Conflict
        When the flag has ended, or is to be taken off a shelf on which it is not.
    ActRefused
        When a reason is missing, or the time on the shelf is none that is allowed.
    """
    flag = flag_meant(session, house, meant)
    _checked(wanted, now_ms)
    section = house.section(meant.section)
    life = life_now(session, house, flag, now_ms)
    if life.state == "ended" and wanted.find is None:
        raise Conflict("this flag has ended")
    if wanted.act == "unshelved" and life.state != "shelved":
        raise Conflict("this flag is not on the shelf")
    found_id = None
    if wanted.find is not None:
        found_id = find_id(session, section.cell_id(meant.cell), *wanted.find)
        if found_id is None:
            raise NotFound("find", wanted.find[0])
    add_act(
        session,
        FlagAct(
            cell_id=section.cell_id(meant.cell),
            kind=meant.kind,
            raised_ms=meant.raised_ms,
            at_ms=now_ms,
            who=who,
            act=wanted.act,
            until_ms=wanted.until_ms if wanted.act == "shelved" else None,
            reason=wanted.reason,
            assigned_to=(wanted.assigned_to or who) if wanted.act == "working" else None,
            find_id=found_id,
        ),
    )
    return flag


def _checked(wanted: Wanted, now_ms: int) -> None:
    needs_reason = wanted.act == "shelved" or (wanted.act == "closed" and wanted.find is None)
    if needs_reason and not wanted.reason:
        raise ActRefused("reason")
    if wanted.act == "shelved":
        until_ms = wanted.until_ms
        if until_ms is None or not now_ms < until_ms <= now_ms + LONGEST_SHELF_MS:
            raise ActRefused("until", until_ms or "")
