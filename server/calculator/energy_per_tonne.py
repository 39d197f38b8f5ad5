"""Energy per tonne: from the cell voltage and the current efficiency."""

from server.calculator.charge import (
    CONSTANTS,
    PROPAGATION,
    efficiency_share,
    kg_per_kah,
)
from server.calculator.inputs import Input
from server.calculator.quantities import CELLS, EFFICIENCY_PCT, ENERGY_PRICE, VOLTS
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.calculator.warnings import above_full_efficiency
from server.science.faraday import specific_energy_from_volts_j_kg
from server.science.units import kwh_t_from_j_kg, share_from_percent

BARS_V = Input(
    "bars_v",
    N_("Bars and contacts of the whole section"),
    "V",
    0,
    1000,
    is_needed=False,
    hint=N_("what the rectifier gives beyond the sum of the cells"),
)
RECTIFIER_PCT = Input(
    "rectifier_efficiency_pct",
    N_("Rectifier efficiency"),
    "%",
    10,
    100,
    is_needed=False,
    hint=N_("left blank, the energy is not told as AC"),
)


def _section_volts(values: Numbers) -> float:
    """Voltage of one cell with its share of the bars, V."""
    return values["volts"] + values.get("bars_v", 0.0) / values["cells"]


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    has_bars, has_rectifier = case.has("bars_v"), case.has("rectifier_efficiency_pct")
    parts: dict[str, Part] = {
        "k": kg_per_kah(metal),
        "volts": case["volts"],
        "efficiency": efficiency_share(case.values),
        "cells": case["cells"],
        "bars": case.values.get("bars_v", 0.0),
        "price": case["energy_price_per_kwh"],
        "currency": case.basis.currency,
    }

    def kwh_t(volts: float, values: Numbers) -> float:
        joules = specific_energy_from_volts_j_kg(volts, efficiency_share(values), metal)
        return float(kwh_t_from_j_kg(joules))

    def dc_kwh_t(values: Numbers) -> float:
        return kwh_t(_section_volts(values), values)

    def ac_kwh_t(values: Numbers) -> float:
        return dc_kwh_t(values) / float(share_from_percent(values["rectifier_efficiency_pct"]))

    outputs = [
        Output(
            "cells_kwh_t",
            N_("DC energy of the cells"),
            "kWh/t",
            "w = 1000 · V / (K · η)",
            Said("1000 × %(volts)s V / (%(k)s kg/kAh × %(efficiency)s)", parts),
            lambda values: kwh_t(values["volts"], values),
        )
    ]
    whole = outputs[0].model
    if has_bars:
        numbers = "1000 × (%(volts)s V + %(bars)s V / %(cells)s) / (%(k)s kg/kAh × %(efficiency)s)"
        outputs.append(
            Output(
                "section_kwh_t",
                N_("DC energy with the bars"),
                "kWh/t",
                "w_DC = 1000 · (V + V_bars / N) / (K · η)",
                Said(numbers, parts),
                dc_kwh_t,
            )
        )
        whole = dc_kwh_t
    if has_rectifier:
        parts["dc"] = dc_kwh_t(case.values)
        parts["rectifier"] = float(share_from_percent(case["rectifier_efficiency_pct"]))
        outputs.append(
            Output(
                "ac_kwh_t",
                N_("AC energy"),
                "kWh/t",
                "w_AC = w_DC / η_rectifier",
                Said("%(dc)s kWh/t / %(rectifier)s", parts),
                ac_kwh_t,
            )
        )
        whole = ac_kwh_t
    parts["whole"] = whole(case.values)
    outputs.append(
        Output(
            "cost_per_t",
            N_("cost of energy"),
            "¤/t",
            "w · p",
            Said("%(whole)s kWh/t × %(price)s %(currency)s/kWh", parts),
            lambda values: whole(values) * values["energy_price_per_kwh"],
        )
    )
    return outputs


def _remarks(case: Case, _results: Numbers) -> list[Remark]:
    return above_full_efficiency(case["current_efficiency_pct"])


ENERGY_PER_TONNE = Sum(
    name="energy-per-tonne",
    title=N_("Energy per tonne"),
    question=N_("How many kilowatt-hours a tonne takes at this voltage and efficiency."),
    formula="w = 1000 · V / (K · η)",
    inputs=(VOLTS, EFFICIENCY_PCT, CELLS, BARS_V, RECTIFIER_PCT, ENERGY_PRICE),
    outputs=_outputs,
    needs=frozenset({"efficiency", "volts"}),
    results=("cells_kwh_t", "section_kwh_t", "ac_kwh_t", "cost_per_t"),
    sources=(
        "M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, W = V · Q",
        CONSTANTS,
        PROPAGATION,
    ),
    limits=(N_("Tonnes are metric; the voltage is the mean over the charge, not over time."),),
    remarks=_remarks,
)
