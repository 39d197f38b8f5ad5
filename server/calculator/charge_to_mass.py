"""Charge to mass: how much metal a current makes in a time."""

from server.calculator.charge import (
    CONSTANTS,
    FARADAY,
    PROPAGATION,
    cell_charge_c,
    charge_numbers,
    charge_symbols,
    efficiency_share,
    kg_per_kah,
)
from server.calculator.filled import Filled
from server.calculator.quantities import CELLS, CHARGE_KAH, CURRENT_KA, EFFICIENCY_PCT, HOURS
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Said
from server.calculator.warnings import above_full_efficiency
from server.science.faraday import deposited_kg
from server.science.stoichiometry import sulfuric_acid_made_kg
from server.science.units import kah_from_coulombs


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    charge, parts = charge_numbers(case)
    symbols = charge_symbols(case)
    k = kg_per_kah(metal)
    parts |= {"k": k, "cells": case["cells"], "efficiency": efficiency_share(case.values)}

    def ideal_kg(values: Numbers) -> float:
        return float(deposited_kg(cell_charge_c(values), metal)) * values["cells"]

    def made_kg(values: Numbers) -> float:
        return ideal_kg(values) * efficiency_share(values)

    def acid_kg(values: Numbers) -> float:
        return float(sulfuric_acid_made_kg(made_kg(values), metal))

    outputs = [
        Output(
            "made_kg",
            N_("metal made"),
            "kg",
            f"m = K · {symbols} · N · η",
            Said(f"%(k)s kg/kAh × {charge} × %(cells)s × %(efficiency)s", parts),
            made_kg,
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
            "cell_kah",
            N_("charge through the cells"),
            "kAh",
            f"Q = {symbols} · N" if symbols != "Q" else "Q · N",
            Said(f"{charge} × %(cells)s", parts),
            lambda values: float(kah_from_coulombs(cell_charge_c(values))) * values["cells"],
        ),
    ]
    if case.basis.process.kind == "electrowinning":
        acid_kg_kg = float(sulfuric_acid_made_kg(1.0, metal))
        outputs.append(
            Output(
                "acid_kg",
                N_("sulfuric acid made"),
                "kg",
                "m(H₂SO₄) = m · z/2 · M(H₂SO₄) / M",
                Said(
                    "%(made)s kg × %(acid)s kg/kg",
                    {"made": made_kg(case.values), "acid": acid_kg_kg},
                ),
                acid_kg,
            )
        )
    return outputs


def _remarks(case: Case, _results: Numbers) -> list[Remark]:
    return above_full_efficiency(case["current_efficiency_pct"])


CHARGE_TO_MASS = Sum(
    name="charge-to-mass",
    title=N_("Charge to mass"),
    question=N_("How much metal a charge makes, by Faraday's law."),
    formula="m = K · I · t · N · η",
    inputs=(CURRENT_KA, HOURS, CHARGE_KAH, CELLS, EFFICIENCY_PCT),
    outputs=_outputs,
    needs=frozenset({"efficiency"}),
    own={"hours": Filled(24.0, Said(N_("a day")))},
    results=("made_kg", "theoretical_kg", "cell_kah", "acid_kg"),
    sources=(FARADAY, CONSTANTS, PROPAGATION),
    remarks=_remarks,
)
