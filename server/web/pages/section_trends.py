"""The trends of a section over a period: figures of its days, and its current in steps."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from server.accounts.periods import DAY_MS
from server.accounts.results import Account, DayFigures
from server.accounts.trends import CurrentSteps
from server.figures.layout import Axis, Figure, Outage, Target, Window
from server.figures.trends import Bars, Line, Numbers, trend
from server.science.units import (
    ka_from_amps,
    kwh_t_from_j_kg,
    percent_from_share,
    tonnes_from_kg,
)
from server.web.filters import number
from server.web.i18n import gettext as _

_GAP_MS = 2 * DAY_MS
_UNRECORDED = 2


@dataclass(frozen=True)
class Trend:
    """One figure of the page with its title and the sentence that stands for it."""

    key: str
    title: str
    figure: Figure | None
    """None where there is nothing to draw."""
    sentence: str
    note: str = ""
    """The target in words, which would hide the line at the width of these figures."""


def section_trends(
    days: Sequence[DayFigures],
    steps: CurrentSteps,
    outages: Sequence[tuple[str, int, int | None, str]],
    account: Account,
    zone: str,
) -> list[Trend]:
    """Efficiency, energy, voltage and mass of each day, and the current."""
    window = Window(account.from_ms, account.to_ms, zone)
    off = [
        Outage(from_ms, account.to_ms if to_ms is None else to_ms)
        for cells, from_ms, to_ms, _state in outages
        if not cells
    ]
    efficiency_target = float(percent_from_share(account.target_current_efficiency))
    energy_target = float(kwh_t_from_j_kg(account.target_specific_energy_j_kg))
    return [
        _of_days(
            "efficiency",
            Axis(_("Current efficiency of the lots"), "%", 1),
            days,
            lambda day: day.crop_current_efficiency,
            percent_from_share,
            window,
            off,
            Target(
                efficiency_target, _("target %(value)s") % {"value": number(efficiency_target, 1)}
            ),
        ),
        _of_days(
            "energy",
            Axis(_("Specific energy"), "kWh/t", 0),
            days,
            lambda day: day.specific_energy_j_kg,
            kwh_t_from_j_kg,
            window,
            off,
            Target(energy_target, _("target %(value)s") % {"value": number(energy_target)}),
        ),
        _of_days(
            "volts",
            Axis(_("Mean cell voltage"), "V", 3),
            days,
            lambda day: day.mean_cell_volts,
            _as_it_is,
            window,
            off,
        ),
        _mass(days, window, off),
        _current(steps, window, off),
    ]


def _as_it_is(values: Numbers) -> Numbers:
    return values


def _column(
    days: Sequence[DayFigures],
    value: Callable[[DayFigures], float | None],
    convert: Callable[[Numbers], Numbers],
) -> Numbers:
    """One value of each day in the axis' unit, NaN where there is none."""
    values = [value(day) for day in days]
    return convert(np.array([np.nan if v is None else v for v in values], np.float64))


def _of_days(
    key: str,
    axis: Axis,
    days: Sequence[DayFigures],
    value: Callable[[DayFigures], float | None],
    convert: Callable[[Numbers], Numbers],
    window: Window,
    outages: Sequence[Outage],
    target: Target | None = None,
) -> Trend:
    """A line through the middles of the days."""
    values = _column(days, value, convert)
    middles = np.array([(day.from_ms + day.to_ms) // 2 for day in days], np.int64)
    known = np.isfinite(values)
    line = Line(axis.quantity, middles[known], values[known], gap_ms=_GAP_MS)
    targets = [Target(target.value, "")] if target else []
    figure = trend(window, axis, [line], targets=targets, outages=outages) if known.any() else None
    note = target.words if target else ""
    return Trend(key, axis.quantity, figure, _sentence(axis, values, target), note)


def _mass(days: Sequence[DayFigures], window: Window, outages: Sequence[Outage]) -> Trend:
    axis = Axis(_("Cathode metal pulled each day"), "t", 1, starts_at_zero=True)
    values = _column(days, lambda day: day.pulled_kg, tonnes_from_kg)
    bars = Bars(
        axis.quantity,
        np.array([day.from_ms for day in days], np.int64),
        np.array([day.to_ms for day in days], np.int64),
        values,
    )
    figure = trend(window, axis, [bars], outages=outages) if np.any(values > 0) else None
    return Trend("mass", axis.quantity, figure, _sentence(axis, values))


def _current(steps: CurrentSteps, window: Window, outages: Sequence[Outage]) -> Trend:
    axis = Axis(_("Section current"), "kA", 1, starts_at_zero=True)
    amps = np.where(steps.basis == _UNRECORDED, np.nan, steps.amps)
    values = np.asarray(ka_from_amps(amps))
    at_ms = np.maximum(steps.at_ms, window.from_ms)
    line = Line(axis.quantity, at_ms, values, shape="steps")
    is_known = bool(np.isfinite(values).any())
    figure = trend(window, axis, [line], outages=outages) if is_known else None
    return Trend("current", axis.quantity, figure, _sentence(axis, values))


def _sentence(axis: Axis, values: Numbers, target: Target | None = None) -> str:
    """What the figure shows in one sentence, for whoever does not see it."""
    known = values[np.isfinite(values)]
    if not len(known):
        return _("%(quantity)s: nothing to draw.") % {"quantity": axis.quantity}
    words = _("%(quantity)s: from %(low)s to %(high)s %(unit)s, at the end %(last)s.") % {
        "quantity": axis.quantity,
        "low": number(float(known.min()), axis.decimals),
        "high": number(float(known.max()), axis.decimals),
        "last": number(float(known[-1]), axis.decimals),
        "unit": axis.unit,
    }
    return f"{words} {target.words}." if target else words
