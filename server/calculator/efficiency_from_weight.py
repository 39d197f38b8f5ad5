"""Efficiency from a weight: what the scale says of the charge that grew the cathodes."""

from server.calculator.charge import (
    CONSTANTS,
    FARADAY,
    PROPAGATION,
    cell_charge_c,
    charge_numbers,
    charge_symbols,
    kg_per_kah,
)
from server.calculator.inputs import Input
from server.calculator.quantities import CELLS, CHARGE_KAH, CURRENT_KA, HOURS
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.calculator.warnings import above_full_efficiency
from server.science.faraday import current_efficiency, deposited_kg
from server.science.units import percent_from_share

NET_KG = Input("net_kg", N_("Net weight of the crop"), "kg", 0, 1e8, is_above=True)
STARTER_KG = Input("starter_kg", N_("Starter sheets in it"), "kg", 0, 1e8)


def _metal_kg(values: Numbers) -> float:
    return values["net_kg"] - values["starter_kg"]


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    charge, charge_parts = charge_numbers(case)
    symbols = charge_symbols(case)
    parts: dict[str, Part] = {
        "k": kg_per_kah(metal),
        "cells": case["cells"],
        "net": case["net_kg"],
        "starter": case["starter_kg"],
        "metal": _metal_kg(case.values),
        **charge_parts,
    }

    def ideal_kg(values: Numbers) -> float:
        return float(deposited_kg(cell_charge_c(values) * values["cells"], metal))

    def efficiency_pct(values: Numbers) -> float:
        charge_c = cell_charge_c(values) * values["cells"]
        return float(percent_from_share(current_efficiency(_metal_kg(values), charge_c, metal)))

    parts["ideal"] = ideal_kg(case.values)
    return [
        Output(
            "current_efficiency_pct",
            N_("current efficiency"),
            "%",
            f"η = (m − m_starter) / (K · {symbols} · N)",
            Said(
                f"(%(net)s kg − %(starter)s kg) / (%(k)s kg/kAh × {charge} × %(cells)s)",
                parts,
            ),
            efficiency_pct,
        ),
        Output(
            "theoretical_kg",
            N_("metal that the charge could make"),
            "kg",
            f"m₀ = K · {symbols} · N",
            Said(f"%(k)s kg/kAh × {charge} × %(cells)s", parts),
            ideal_kg,
        ),
        Output(
            "missing_kg",
            N_("metal that was not made"),
            "kg",
            "m₀ − (m − m_starter)",
            Said("%(ideal)s kg − %(metal)s kg", parts),
            lambda values: ideal_kg(values) - _metal_kg(values),
        ),
    ]


def _remarks(case: Case, results: Numbers) -> list[Remark]:
    found = above_full_efficiency(
        results["current_efficiency_pct"], results["u_current_efficiency_pct"]
    )
    low, high = (percent_from_share(share) for share in case.basis.process.efficiency_band)
    if results["current_efficiency_pct"] < low or high < results["current_efficiency_pct"] <= 100:
        text = N_("Usual here are %(low)s to %(high)s %%.")
        found.append(Remark("range", Said(text, {"low": float(low), "high": float(high)})))
    return found


EFFICIENCY_FROM_WEIGHT = Sum(
    name="efficiency-from-weight",
    title=N_("Efficiency from a weight"),
    question=N_("Which share of the charge is found again as metal on the scale."),
    formula="η = (m − m_starter) / (K · I · t · N)",
    inputs=(NET_KG, STARTER_KG, CURRENT_KA, HOURS, CHARGE_KAH, CELLS),
    outputs=_outputs,
    needs=frozenset({"lot"}),
    results=("current_efficiency_pct", "theoretical_kg", "missing_kg"),
    sources=(FARADAY, CONSTANTS, PROPAGATION),
    remarks=_remarks,
)
