"""The cells of a section as they stand on the floor now: in service or not, healthy or leaning."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.accounts.state import states_of_cells
from server.storage.flag_rows import flags_touching
from server.storage.flags import Flag
from server.storage.latest import latest
from server.storage.plant import House, SectionPlan
from server.watch.deviations import leans_now

_TIERS = ("act", "look")


@dataclass(frozen=True)
class FloorCell:
    """One cell on the floor."""

    cell: int
    state: str
    """in service, bypassed or off."""
    volts: float | None
    read_ms: int | None
    deviation_v: float | None
    """Above what a healthy cell would read; None without a recent reading under load."""
    times_noise: float | None
    """The deviation in multiples of what is usual in the section."""
    flag_kind: str | None
    """Of its open flags the one that matters most."""


def section_floor(
    session: Session, house: House, section_name: str, now_ms: int
) -> list[FloorCell]:
    """Every cell of a section as it stands now, by number."""
    section = house.section(section_name)
    flags = flags_touching(session, now_ms, now_ms + 1, section.id, open_only=True)
    return _floor(session, house, section, _first_flags(flags), now_ms)


def house_floors(session: Session, house: House, now_ms: int) -> list[list[FloorCell]]:
    """The floors of all sections, in their order."""
    flags = _first_flags(flags_touching(session, now_ms, now_ms + 1, open_only=True))
    return [_floor(session, house, section, flags, now_ms) for section in house.sections]


def _floor(
    session: Session, house: House, section: SectionPlan, flags: dict[int, str], now_ms: int
) -> list[FloorCell]:
    _, states = states_of_cells(session, section, now_ms)
    newest = latest(session, section.cell_ids)
    leaning = leans_now(session, house, section.name, now_ms)
    floor = []
    for number, state in states.items():
        cell_id = section.cell_id(number)
        read_ms, volts = newest.get(cell_id, (None, None))
        lean = leaning.get(number) if state == "in service" else None
        floor.append(
            FloorCell(
                cell=number,
                state=state,
                volts=volts,
                read_ms=read_ms,
                deviation_v=lean.deviation_v if lean else None,
                times_noise=lean.times_noise if lean else None,
                flag_kind=flags.get(cell_id),
            )
        )
    return floor


def _first_flags(flags: list[Flag]) -> dict[int, str]:
    """Of each cell the kind of the flag that matters most."""
    kinds: dict[int, str] = {}
    by_weight = sorted(
        flags, key=lambda f: (_TIERS.index(f.tier), -(f.lost_value_per_day or 0.0), f.raised_ms)
    )
    for flag in by_weight:
        kinds.setdefault(flag.cell_id, flag.kind)
    return kinds
