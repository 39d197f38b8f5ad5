"""Short current: how much a short takes, from how far its cell stands below a healthy one."""

from dataclasses import replace

from server.calculator.charge import PROPAGATION, efficiency_share, kg_per_kah
from server.calculator.inputs import Input
from server.calculator.quantities import (
    CURRENT_KA,
    EFFICIENCY_PCT,
    METAL_VALUE,
    RESISTANCE_UOHM,
    VOLTS,
)
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.calculator.warnings import above_full_efficiency
from server.science.losses.shorts import (
    lost_metal_kg,
    lost_value,
    short_energy_ratio,
    short_from_volts,
)
from server.science.units import (
    amps_from_ka,
    ka_from_amps,
    ohm_from_microohm,
    percent_from_share,
    seconds_from_hours,
    volts_from_millivolts,
)

HOURS_PER_DAY = 24.0
ROUNDING = 1e-9

DEVIATION_MV = Input(
    "deviation_mv",
    N_("Voltage against a healthy cell"),
    "mV",
    -20_000,
    20_000,
    hint=N_("a drop is negative"),
)

HEALTHY = replace(VOLTS, label=N_("Voltage of the healthy cell"))
"""The drop is counted from here: with the shorted cell's own reading it would count twice."""


def _amps(values: Numbers) -> float:
    """Current of the short, A."""
    found = short_from_volts(
        volts_from_millivolts(values["deviation_mv"]),
        ohm_from_microohm(values["differential_resistance_uohm"]),
    )
    return float(found.value)


def _loss_share(values: Numbers) -> float:
    """Share of the cell's current that the short takes."""
    return _amps(values) / float(amps_from_ka(values["current_ka"]))


def _resistive_share(values: Numbers) -> float:
    """Share of the healthy voltage that follows the current."""
    resistance_ohm = float(ohm_from_microohm(values["differential_resistance_uohm"]))
    share = resistance_ohm * float(amps_from_ka(values["current_ka"])) / values["volts"]
    # In refining all of it may follow: a rounding error above that is not more than all.
    return min(share, 1.0) if share < 1.0 + ROUNDING else share


def _has_energy(values: Numbers) -> bool:
    """Whether the shares are such that the energy of a kilogram can be told."""
    return 0 < _loss_share(values) < 1 and _resistive_share(values) <= 1


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    parts: dict[str, Part] = {
        "deviation": case["deviation_mv"],
        "resistance": case["differential_resistance_uohm"],
        "current": case["current_ka"],
        "volts": case["volts"],
        "k": kg_per_kah(metal),
        "efficiency": efficiency_share(case.values),
        "short_ka": float(ka_from_amps(_amps(case.values))),
        "short_a": _amps(case.values),
        "value": case.values.get("metal_value_per_kg", 0.0),
        "currency": case.basis.currency,
        "loss": _loss_share(case.values),
        "resistive": _resistive_share(case.values),
    }

    def lost_kg(values: Numbers) -> float:
        day_s = float(seconds_from_hours(HOURS_PER_DAY))
        return float(lost_metal_kg(_amps(values), day_s, metal, efficiency_share(values)))

    def heat_w(values: Numbers) -> float:
        volts = values["volts"] + float(volts_from_millivolts(values["deviation_mv"]))
        return _amps(values) * volts

    parts["lost"] = lost_kg(case.values)
    outputs = [
        Output(
            "short_ka",
            N_("current of the short"),
            "kA",
            "I_s = −ΔV / R_d",
            Said("−(%(deviation)s mV) / %(resistance)s µΩ", parts),
            lambda values: float(ka_from_amps(_amps(values))),
        ),
        Output(
            "loss_pct",
            N_("of the cell's current"),
            "%",
            "I_s / I",
            Said("%(short_ka)s kA / %(current)s kA", parts),
            lambda values: float(percent_from_share(_loss_share(values))),
        ),
        Output(
            "lost_kg_per_day",
            N_("metal not made a day"),
            "kg/d",
            "24 · K · I_s · η",
            Said("24 h/d × %(k)s kg/kAh × %(short_ka)s kA × %(efficiency)s", parts),
            lost_kg,
        ),
    ]
    if case.has("metal_value_per_kg"):
        outputs.append(
            Output(
                "lost_value_per_day",
                N_("its value a day"),
                "¤/d",
                "24 · K · I_s · η · v",
                Said("%(lost)s kg/d × %(value)s %(currency)s/kg", parts),
                lambda values: float(lost_value(lost_kg(values), values["metal_value_per_kg"])),
            )
        )
    outputs.append(
        Output(
            "heat_w",
            N_("heat where it touches"),
            "W",
            "P = I_s · (V + ΔV)",
            Said("%(short_a)s A × (%(volts)s V + %(deviation)s mV)", parts),
            heat_w,
        )
    )
    if _has_energy(case.values):
        outputs.append(
            Output(
                "energy_pct",
                N_("more energy for a kilogram"),
                "%",
                "(1 − p) · s / (1 − s),  s = I_s / I,  p = R_d · I / V",
                Said("(1 − %(resistive)s) × %(loss)s / (1 − %(loss)s)", parts),
                lambda values: float(
                    percent_from_share(
                        short_energy_ratio(_loss_share(values), _resistive_share(values)) - 1.0
                    )
                ),
            )
        )
    return outputs


def _remarks(case: Case, results: Numbers) -> list[Remark]:
    found = above_full_efficiency(case["current_efficiency_pct"])
    short_ka, u_ka = results["short_ka"], results["u_short_ka"]
    if short_ka >= case["current_ka"]:
        text = N_("That is more than the whole current: the voltage or the resistance is wrong.")
        found.append(Remark("warning", Said(text)))
    elif short_ka < 0:
        text = N_(
            "The cell stands above a healthy one: no short does that. Look at its contacts and"
            " anodes."
        )
        found.append(Remark("note", Said(text)))
    elif short_ka < 2 * u_ka:
        text = N_("Less than twice its standard uncertainty: it may be no short at all.")
        found.append(Remark("note", Said(text)))
    if _resistive_share(case.values) > 1:
        text = N_(
            "R_d · I is more than the cell's whole voltage: the resistance, the current or the"
            " voltage is wrong."
        )
        found.append(Remark("warning", Said(text)))
    return found


SHORT_CURRENT = Sum(
    name="short-current",
    title=N_("Short current from a voltage drop"),
    question=N_("How much current a short takes, and what that costs a day."),
    formula="I_s = −ΔV / R_d",
    inputs=(DEVIATION_MV, RESISTANCE_UOHM, CURRENT_KA, HEALTHY, EFFICIENCY_PCT, METAL_VALUE),
    outputs=_outputs,
    needs=frozenset({"deviation", "efficiency", "volts"}),
    results=(
        "short_ka",
        "loss_pct",
        "lost_kg_per_day",
        "lost_value_per_day",
        "heat_w",
        "energy_pct",
    ),
    sources=(
        "V = E + R_d (I − I_s), a ladder of parallel plate pairs with one ohmic short (derived)",
        "M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77",
        PROPAGATION,
    ),
    limits=(
        N_(
            "All of the drop is put down to one metallic short; a cell is taken as straight near"
            " its working point."
        ),
    ),
    cautions=(
        N_(
            "Shorts are live and can be hot enough to burn or to melt: the site's procedure"
            " governs who goes there and how. This sum only advises where to look."
        ),
    ),
    remarks=_remarks,
)
