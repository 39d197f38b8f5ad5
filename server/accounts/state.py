"""Sections and cells as they are now."""

from sqlalchemy.orm import Session

from server.accounts.account import metal_of, section_account
from server.accounts.crops import cells_of
from server.accounts.periods import DAY_MS, day_of, shift_of
from server.accounts.results import CellState, RoundState, SectionState
from server.accounts.stock import StockBook, stock_at
from server.accounts.trends import last_current
from server.storage.current import effective_outages
from server.storage.flag_rows import flags_touching
from server.storage.flags import Flag
from server.storage.latest import latest
from server.storage.plant import House, SectionPlan
from server.storage.readings import between

_RECENT_MS = 7 * DAY_MS
_TIERS = ("act", "look")


def states_of_cells(
    session: Session, section: SectionPlan, now_ms: int
) -> tuple[bool, dict[int, str]]:
    """Whether the section is off, and the state of each cell by number."""
    there = section.terms_at(now_ms).cells
    states = dict.fromkeys(range(1, there + 1), "in service")
    is_off = False
    for cells, _, _, state in effective_outages(session, section.id, now_ms, now_ms + 1):
        if not cells:
            is_off = True
            continue
        states.update((number, state) for number in cells_of(cells) if number in states)
    if is_off:
        states = dict.fromkeys(states, "off")
    return is_off, states


def round_state(session: Session, house: House, section_name: str, now_ms: int) -> RoundState:
    """How far this shift's round has come."""
    section = house.section(section_name)
    shift = shift_of(now_ms, house)
    _, states = states_of_cells(session, section, now_ms)
    series = between(session, section.cell_ids, shift.from_ms, min(shift.to_ms, now_ms + 1))
    return RoundState(
        shift=shift.name,
        from_ms=shift.from_ms,
        to_ms=shift.to_ms,
        cells_read=len(set(series.cell_id.tolist())),
        cells_in_service=sum(state == "in service" for state in states.values()),
        last_read_ms=int(series.at_ms.max()) if len(series) else None,
    )


def _worst_flags(flags: list[Flag]) -> dict[int, Flag]:
    """Of each cell the flag that matters most: to act on before to look at, then the costliest."""
    worst: dict[int, Flag] = {}
    for flag in sorted(
        flags, key=lambda f: (_TIERS.index(f.tier), -(f.lost_value_per_day or 0.0), f.raised_ms)
    ):
        worst.setdefault(flag.cell_id, flag)
    return worst


def cell_states(session: Session, house: House, section_name: str, now_ms: int) -> list[CellState]:
    """Every cell of a section as it is now, by number."""
    section = house.section(section_name)
    _, states = states_of_cells(session, section, now_ms)
    newest = latest(session, section.cell_ids)
    stock = stock_at(session, section, metal_of(section), now_ms)
    flags = _worst_flags(flags_touching(session, now_ms, now_ms + 1, section.id, open_only=True))
    cells = []
    for number, state in states.items():
        cell_id = section.cell_id(number)
        read_ms, volts = newest.get(cell_id, (None, None))
        flag = flags.get(cell_id)
        efficiency = float(stock.shown_efficiency[number - 1])
        cells.append(
            CellState(
                number=number,
                volts=volts,
                read_ms=read_ms,
                state=state,
                deposit_started_ms=int(stock.started_ms[number - 1]) or None,
                deposit_kg=float(stock.kg[number - 1]),
                last_efficiency=efficiency if efficiency == efficiency else None,
                flag_kind=flag.kind if flag else None,
                flag_tier=flag.tier if flag else None,
                flag_raised_ms=flag.raised_ms if flag else None,
                evidence=flag.evidence if flag else None,
            )
        )
    return cells


def section_states(session: Session, house: House, now_ms: int) -> list[SectionState]:
    """Every section as it is now: current, round, the last week's figures, open flags."""
    flags: dict[int, list[Flag]] = {}
    for flag in flags_touching(session, now_ms, now_ms + 1, open_only=True):
        flags.setdefault(flag.section_id, []).append(flag)
    return [
        _section_state(session, house, section, flags.get(section.id, []), now_ms)
        for section in house.sections
    ]


def _section_state(
    session: Session, house: House, section: SectionPlan, flags: list[Flag], now_ms: int
) -> SectionState:
    terms = section.terms_at(now_ms)
    is_off, states = states_of_cells(session, section, now_ms)
    sample = last_current(session, section, now_ms)
    today = day_of(now_ms, house.time_zone)
    # At midnight sharp the day has no length yet; its first millisecond stands for it.
    to_ms = max(now_ms, today.from_ms + 1)
    week_ms = to_ms - _RECENT_MS
    book = StockBook(session, section, metal_of(section), week_ms, to_ms)
    return SectionState(
        name=section.name,
        process=section.process,
        metal=section.metal,
        amps=sample[1] if sample else None,
        amps_at_ms=sample[0] if sample else None,
        rated_amps=terms.rated_amps,
        is_off=is_off,
        cells_in_service=sum(state == "in service" for state in states.values()),
        cells=terms.cells,
        round=round_state(session, house, section.name, now_ms),
        recent=section_account(session, house, section.name, week_ms, to_ms, book),
        today=section_account(session, house, section.name, today.from_ms, to_ms, book),
        open_flags=len(flags),
        acting_flags=sum(flag.tier == "act" for flag in flags),
    )
