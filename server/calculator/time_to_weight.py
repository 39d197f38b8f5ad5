"""Time to a target weight: how long a cathode has to hang yet."""

from server.calculator.charge import (
    CONSTANTS,
    FARADAY,
    PROPAGATION,
    efficiency_share,
    kg_per_kah,
)
from server.calculator.inputs import Input
from server.calculator.quantities import CATHODES, CURRENT_KA, EFFICIENCY_PCT
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.calculator.warnings import above_full_efficiency
from server.science.faraday import charge_for_c, deposited_kg
from server.science.units import amps_from_ka, hours_from_seconds, seconds_from_hours

HOURS_PER_DAY = 24.0

TARGET_KG = Input("target_kg", N_("Target weight of a cathode"), "kg", 0, 10_000, is_above=True)
DEPOSIT_KG = Input("deposit_kg", N_("Metal on it already"), "kg", 0, 10_000)


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    parts: dict[str, Part] = {
        "k": kg_per_kah(metal),
        "target": case["target_kg"],
        "deposit": case["deposit_kg"],
        "cathodes": case["cathodes"],
        "current": case["current_ka"],
        "efficiency": efficiency_share(case.values),
    }

    def hours(values: Numbers) -> float:
        # Whoever has passed the target waits for a time below zero: since when it is too heavy.
        grown_kg = (values["target_kg"] - values["deposit_kg"]) * values["cathodes"]
        charge_c = float(charge_for_c(abs(grown_kg), metal)) / efficiency_share(values)
        amps = float(amps_from_ka(values["current_ka"]))
        return float(hours_from_seconds(charge_c / amps)) * (1 if grown_kg >= 0 else -1)

    def kg_per_day(values: Numbers) -> float:
        day_c = float(amps_from_ka(values["current_ka"]) * seconds_from_hours(HOURS_PER_DAY))
        made_kg = float(deposited_kg(day_c, metal)) * efficiency_share(values)
        return made_kg / values["cathodes"]

    parts["hours"] = hours(case.values)
    return [
        Output(
            "hours",
            N_("time to the target"),
            "h",
            "t = (m_target − m) · n / (K · I · η)",
            Said(
                "(%(target)s kg − %(deposit)s kg) × %(cathodes)s /"
                " (%(k)s kg/kAh × %(current)s kA × %(efficiency)s)",
                parts,
            ),
            hours,
        ),
        Output(
            "days",
            N_("the same in days"),
            "d",
            "t / 24",
            Said("%(hours)s h / (24 h/d)", parts),
            lambda values: hours(values) / HOURS_PER_DAY,
        ),
        Output(
            "kg_per_day",
            N_("growth of a cathode a day"),
            "kg/d",
            "24 · K · I · η / n",
            Said("24 h/d × %(k)s kg/kAh × %(current)s kA × %(efficiency)s / %(cathodes)s", parts),
            kg_per_day,
        ),
    ]


def _remarks(case: Case, results: Numbers) -> list[Remark]:
    found = above_full_efficiency(case["current_efficiency_pct"])
    if results["hours"] < 0:
        found.append(Remark("note", Said(N_("The target is passed already."))))
    return found


TIME_TO_WEIGHT = Sum(
    name="time-to-weight",
    title=N_("Time to a target weight"),
    question=N_("How long cathodes have to hang until each weighs what is wanted."),
    formula="t = (m_target − m) · n / (K · I · η)",
    inputs=(TARGET_KG, DEPOSIT_KG, CATHODES, CURRENT_KA, EFFICIENCY_PCT),
    outputs=_outputs,
    needs=frozenset({"efficiency", "target"}),
    results=("hours", "days", "kg_per_day"),
    sources=(FARADAY, CONSTANTS, PROPAGATION),
    remarks=_remarks,
    limits=(
        N_("The efficiency is taken to stay as it is; shorts come more often late in the growth."),
    ),
)
