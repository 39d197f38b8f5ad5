"""Whether what is derived agrees with what was recorded, as far as that is quickly told."""

import numpy as np
from sqlalchemy.orm import Session

from server.accounts.periods import DAY_MS
from server.storage.derived_rows import charge_days, charge_knots, last_summaries
from server.storage.latest import latest
from server.storage.plant import SectionPlan
from server.storage.readings import between, newest_believed
from server.storage.stale import pending

_ROUNDING = 1e-9
"""Relative; sums of some thousand doubles in another order differ by less."""

_DAYS = 31
"""The last days whose summaries are held against the readings themselves."""


def unsound(session: Session, section: SectionPlan) -> list[str]:
    """What is wrong with the derived figures of a section, a sentence each.

    Figures that are yet to follow their records are not held against them.
    """
    lagging = {stretch.kind for stretch in pending(session) if stretch.section_id == section.id}
    faults = []
    if "charge" not in lagging:
        faults += _charge_faults(session, section)
    if "readings" not in lagging:
        faults += _latest_faults(session, section) + _summary_faults(session, section)
    return [f"{section.name}: {fault}; `ampledger recompute` mends it" for fault in faults]


def _charge_faults(session: Session, section: SectionPlan) -> list[str]:
    """Running sums that do not add up, from day to day or within a day."""
    days, knots = charge_days(session, section.id), charge_knots(session, section.id)
    if not len(days):
        return [] if not len(knots) else ["there are steps of current and no days of charge"]
    faults = []
    for total, before in (("total_c", "before_c"), ("estimated_c", "estimated_before_c")):
        carried = np.concatenate(([0.0], np.cumsum(days[total])))[:-1]
        if not np.allclose(days[before], carried, rtol=_ROUNDING, atol=1e-3):
            faults.append("the running sum of charge does not add up from day to day")
            break
    last = np.searchsorted(knots["at_ms"], days["day_ms"] + DAY_MS) - 1
    first = np.searchsorted(knots["at_ms"], days["day_ms"])
    # The record itself may begin within its first day.
    if np.any(first > last) or np.any(knots["at_ms"][first[1:]] != days["day_ms"][1:]):
        return [*faults, "a day of charge has no step at its start"]
    left_s = (days["day_ms"] + DAY_MS - knots["at_ms"][last]) / 1000
    whole = knots["since_day_c"][last] + knots["amps"][last] * left_s
    if not np.allclose(whole, days["total_c"], rtol=_ROUNDING, atol=1e-3):
        faults.append("the steps of current do not add up to the charge of their day")
    return faults


def _latest_faults(session: Session, section: SectionPlan) -> list[str]:
    """Cells whose newest reading is not the one that is kept as such."""
    kept = latest(session, section.cell_ids)
    wrong = []
    for number, cell_id in enumerate(section.cell_ids, start=1):
        newest = newest_believed(session, cell_id)
        known = None if newest is None else (newest[0], newest[1] / 1e6)
        if kept.get(cell_id) != known:
            wrong.append(str(number))
    if not wrong:
        return []
    return [f"the newest reading of cell {', '.join(wrong[:5])} is not the one that is shown"]


def _summary_faults(session: Session, section: SectionPlan) -> list[str]:
    """Days whose summary is not that of their readings."""
    summaries = last_summaries(session, section.id, "day", _DAYS)
    if not summaries:
        return []
    from_ms = min(start_ms for start_ms, *_ in summaries)
    to_ms = max(end_ms for _, end_ms, *_ in summaries)
    series = between(session, section.cell_ids, from_ms, to_ms).believed()
    order = np.argsort(series.at_ms, kind="stable")
    at_ms = series.at_ms[order]
    sums_uv = np.concatenate(([0], np.cumsum(series.microvolts[order])))
    for start_ms, end_ms, readings, sum_uv in summaries:
        first, last = np.searchsorted(at_ms, [start_ms, end_ms])
        if last - first != readings or sums_uv[last] - sums_uv[first] != sum_uv:
            return ["the summary of a day is not that of its readings"]
    return []
