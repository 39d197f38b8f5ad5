"""Flags as people and programs read them."""

from dataclasses import dataclass

from sqlalchemy.orm import Session

from server.storage.flag_rows import flags_touching
from server.storage.flags import Flag
from server.storage.plant import House


@dataclass(frozen=True)
class FlagResult:
    """What the watch says of a cell; SI units."""

    section: str
    cell: int
    kind: str
    tier: str
    raised_ms: int
    ended_ms: int | None
    raised_by_ms: int
    volts: float | None
    expected_volts: float | None
    deviation_v: float | None
    short_amps: float | None
    u_short_amps: float | None
    lost_kg_per_day: float | None
    lost_value_per_day: float | None
    evidence: str
    probability: float | None
    """Of a short, as stated when it was raised; None for what is no short."""


def flag_result(house: House, flag: Flag) -> FlagResult:
    """A flag with its section's name and its cell's number."""
    section = house.section_of_id(flag.section_id)
    return FlagResult(
        section=section.name,
        cell=section.number_of(flag.cell_id),
        kind=flag.kind,
        tier=flag.tier,
        raised_ms=flag.raised_ms,
        ended_ms=flag.ended_ms,
        raised_by_ms=flag.raised_by_ms,
        volts=flag.volts,
        expected_volts=flag.expected_volts,
        deviation_v=flag.deviation_v,
        short_amps=flag.short_amps,
        u_short_amps=flag.u_short_amps,
        lost_kg_per_day=flag.lost_kg_per_day,
        lost_value_per_day=flag.lost_value_per_day,
        evidence=flag.evidence,
        probability=flag.probability,
    )


def flags_between(
    session: Session,
    house: House,
    from_ms: int,
    to_ms: int,
    section: str | None = None,
    open_only: bool = False,
    tier: str | None = None,
) -> list[FlagResult]:
    """Flags whose life touches [from_ms, to_ms), by section, moment and cell."""
    section_id = None if section is None else house.section(section).id
    return [
        flag_result(house, flag)
        for flag in flags_touching(session, from_ms, to_ms, section_id, open_only, tier)
    ]
