"""Flags as rows, each with the sentence that says why it was raised."""

from dataclasses import dataclass

import numpy as np

from server.science.faraday import deposited_kg
from server.science.processes import process
from server.storage.flags import Flag
from server.storage.plant import SectionPlan
from server.watch.model.raising import Raised
from server.watch.model.state import KINDS

SHORT, HIGH, LOW, UNREAD, SUSPECT = KINDS

_INTERVAL = 1.96
"""Standard uncertainties to either side that hold a true value 95 times in a hundred."""


@dataclass(frozen=True)
class Doubt:
    """A reading that is not believed, and why."""

    volts: float
    reason: str


def flag_of(section: SectionPlan, raised: Raised, doubt: Doubt | None) -> Flag:
    """The flag as it is stored."""
    flag = Flag(
        cell_id=section.cell_ids[raised.place],
        kind=raised.kind,
        raised_ms=raised.raised_ms,
        section_id=section.id,
        tier=raised.tier,
        ended_ms=raised.ended_ms,
        raised_by_ms=raised.raised_ms,
        evidence="",
    )
    if raised.kind == SUSPECT:
        flag.volts = doubt.volts if doubt else None
        flag.evidence = doubt.reason if doubt else "The reading is not believed."
    elif raised.outcome is None:
        flag.evidence = (
            "Left out of three rounds in a row in which most of the section's other cells were"
            " read, and not bypassed."
        )
    else:
        _measured(section, raised, flag)
    return flag


def _measured(section: SectionPlan, raised: Raised, flag: Flag) -> None:
    outcome, at = raised.outcome, raised.at
    assert outcome is not None
    terms = section.terms_at(raised.raised_ms)
    volts = float(outcome.readings.volts[at])
    expected, band = float(outcome.expected_v[at]), float(outcome.band_v[at])
    flag.volts, flag.expected_volts, flag.deviation_v = volts, expected, volts - expected
    away_mv = abs(volts - expected) * 1000
    side = "below" if volts < expected else "above"
    seen = (
        f"{volts:.3f} V, {away_mv:.0f} mV {side} the {expected:.3f} V (± {band * 1000:.0f} mV)"
        " that its own former readings and the cells around it say"
    )
    if raised.kind != SHORT:
        lasting_mv, chance_mv = (
            abs(float(values[at])) * 1000 for values in (outcome.lasting_v, outcome.u_lasting_v)
        )
        what = "risen" if raised.kind == HIGH else "fallen"
        hint = (
            " Contacts first, then anodes and flow."
            if raised.kind == HIGH
            else " Nodules or a short that creeps."
        )
        flag.evidence = (
            f"Over the last days it has {what} {_mv(lasting_mv)} from what it used to be;"
            f" chance alone makes {_mv(chance_mv)}. Now {seen}.{hint}"
        )
        return
    metal = process(section.process, section.metal, section.electrons).metal
    amps = float(min(outcome.given_amps[at], outcome.readings.amps[at]))
    u_amps = float(outcome.u_given_amps[at])
    low = max(amps - _INTERVAL * u_amps, 0.0)
    lost_kg = float(deposited_kg(amps * 86_400, metal)) * terms.target_current_efficiency
    flag.short_amps, flag.u_short_amps = amps, u_amps
    flag.lost_kg_per_day = lost_kg
    flag.lost_value_per_day = lost_kg * terms.metal_value_per_kg
    flag.probability = float(np.round(outcome.probability[at], 6))
    flag.evidence = (
        f"{seen[0].upper()}{seen[1:]}. A short is {flag.probability * 100:.0f} % likely; about"
        f" {amps / 1000:.1f} kA would pass there ({low / 1000:.1f} to"
        f" {(amps + _INTERVAL * u_amps) / 1000:.1f}), {lost_kg:.0f} kg of {metal.name} a day."
    )


def _mv(millivolts: float) -> str:
    """A few millivolts with a decimal, more without."""
    return f"{millivolts:.1f} mV" if millivolts < 9.95 else f"{millivolts:.0f} mV"
