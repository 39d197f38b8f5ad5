"""Thickness of a deposit: how far it has grown towards the anode, on each face."""

from dataclasses import replace

from server.calculator.charge import (
    CONSTANTS,
    FARADAY,
    PROPAGATION,
    density_a_m2,
    density_numbers,
    efficiency_share,
    kg_per_kah,
)
from server.calculator.inputs import Input
from server.calculator.quantities import (
    CATHODE_AREA_M2,
    CATHODES,
    CURRENT_DENSITY_A_M2,
    CURRENT_KA,
    EFFICIENCY_PCT,
    HOURS,
)
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.calculator.warnings import above_full_efficiency
from server.science.faraday import deposit_thickness_m, deposited_kg
from server.science.units import millimetres_from_metres, seconds_from_hours

DENSITY_KG_M3 = Input("density_kg_m3", N_("Density of the deposit"), "kg/m³", 100, 25_000)


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    density, parts = density_numbers(case)
    more: dict[str, Part] = {
        "k": kg_per_kah(metal),
        "hours": case["hours"],
        "efficiency": efficiency_share(case.values),
        "solid": case["density_kg_m3"],
    }
    parts |= more

    def kg_m2(values: Numbers) -> float:
        charge_c_m2 = density_a_m2(values) * float(seconds_from_hours(values["hours"]))
        return float(deposited_kg(charge_c_m2, metal)) * efficiency_share(values)

    def mm(values: Numbers) -> float:
        deposit = replace(metal, density_kg_m3=values["density_kg_m3"])
        return float(millimetres_from_metres(deposit_thickness_m(kg_m2(values), 1.0, deposit)))

    parts["a_m2"] = density_a_m2(case.values)
    parts["kg_m2"] = kg_m2(case.values)
    return [
        Output(
            "thickness_mm",
            N_("thickness on each face"),
            "mm",
            "d = m_A / ρ",
            Said("%(kg_m2)s kg/m² / %(solid)s kg/m³", parts),
            mm,
        ),
        Output(
            "kg_m2",
            N_("metal on a square metre"),
            "kg/m²",
            "m_A = K · i · t · η",
            Said("%(k)s kg/kAh × %(a_m2)s A/m² × %(hours)s h × %(efficiency)s / 1000", parts),
            kg_m2,
        ),
        Output(
            "current_density_a_m2",
            N_("current density"),
            "A/m²",
            "i" if case.has("current_density_a_m2") else "i = I / (n · A)",
            Said(density, parts),
            density_a_m2,
        ),
    ]


def _remarks(case: Case, _results: Numbers) -> list[Remark]:
    return above_full_efficiency(case["current_efficiency_pct"])


DEPOSIT_THICKNESS = Sum(
    name="deposit-thickness",
    title=N_("Thickness of a deposit"),
    question=N_("How thick the metal has grown on each face of a cathode."),
    formula="d = K · i · t · η / ρ",
    inputs=(
        CURRENT_KA,
        CATHODES,
        CATHODE_AREA_M2,
        CURRENT_DENSITY_A_M2,
        HOURS,
        EFFICIENCY_PCT,
        DENSITY_KG_M3,
    ),
    outputs=_outputs,
    needs=frozenset({"efficiency"}),
    results=("thickness_mm", "kg_m2", "current_density_a_m2"),
    sources=(
        FARADAY,
        CONSTANTS,
        "ρ: metal as cast, CRC Handbook of Chemistry and Physics",
        PROPAGATION,
    ),
    limits=(
        N_(
            "A mean over both faces: nodules stand out further, and a porous deposit is thicker"
            " than the density of cast metal says."
        ),
    ),
    remarks=_remarks,
)
