"""Flags from SI to the units that the API's fields name."""

from typing import Any

from server.science.units import ka_from_amps, kwh_from_joules, millivolts_from_volts
from server.watch.flags import FlagResult
from server.watch.life import FlagLife
from server.watch.planned import PlannedStop
from server.watch.worklist import WorkItem
from server.web.api.account_answers import known
from server.web.api.schemas_flags import (
    FlagAnswer,
    NewestAnswer,
    PlannedStopAnswer,
    WorkItemAnswer,
)


def flag_answer(flag: FlagResult, life: FlagLife) -> FlagAnswer:
    """A flag as the API answers it."""
    return FlagAnswer(**_fields(flag, life))


def work_item_answer(item: WorkItem) -> WorkItemAnswer:
    """An item of the work list as the API answers it."""
    newest = item.newest
    return WorkItemAnswer(
        **_fields(item.flag, item.life),
        rank=item.rank,
        walk=item.walk,
        newest=NewestAnswer(
            updated_at=newest.updated_ms,
            deviation_mv=known(newest.deviation_v, millivolts_from_volts),
            probability=newest.probability,
            short_ka=known(newest.short_amps, ka_from_amps),
            u_short_ka=known(newest.u_short_amps, ka_from_amps),
            lost_kg_per_day=newest.lost_kg_per_day,
            lost_value_per_day=newest.lost_value_per_day,
        ),
    )


def planned_answer(stop: PlannedStop) -> PlannedStopAnswer:
    """A cell that deserves a planned stop as the API answers it."""
    return PlannedStopAnswer(
        section=stop.section,
        cell=stop.cell,
        flags=stop.flags,
        since=stop.since_ms,
        last_raised_at=stop.last_ms,
        deviation_mv=known(stop.deviation_v, millivolts_from_volts),
        gain_kwh_per_month=known(stop.gain_j_per_month, kwh_from_joules),
        gain_kg_per_month=stop.gain_kg_per_month,
    )


def _fields(flag: FlagResult, life: FlagLife) -> dict[str, Any]:
    return {
        "section": flag.section,
        "cell": flag.cell,
        "kind": flag.kind,
        "tier": flag.tier,
        "raised_at": flag.raised_ms,
        "ended_at": flag.ended_ms,
        "raised_by": flag.raised_by_ms,
        "volts": flag.volts,
        "expected_volts": flag.expected_volts,
        "deviation_mv": known(flag.deviation_v, millivolts_from_volts),
        "short_ka": known(flag.short_amps, ka_from_amps),
        "u_short_ka": known(flag.u_short_amps, ka_from_amps),
        "lost_kg_per_day": flag.lost_kg_per_day,
        "lost_value_per_day": flag.lost_value_per_day,
        "evidence": flag.evidence,
        "state": life.state,
        "shelved_until": life.shelved_until_ms,
        "seen_by": life.seen_by,
        "assigned_to": life.assigned_to,
        "ended_by": life.ended_by,
        "verdict": life.verdict,
        "probability": flag.probability,
    }
