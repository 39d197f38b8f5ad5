"""The charge of a cell as the sums take it: current and time, or ampere-hours that are known."""

from server.calculator.sum import Case, Numbers
from server.calculator.texts import Part
from server.science.constants import Metal
from server.science.faraday import current_density_a_m2, equivalent_kg_c
from server.science.units import (
    amps_from_ka,
    coulombs_from_kah,
    kg_kah_from_kg_c,
    seconds_from_hours,
    share_from_percent,
)

FARADAY = "M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77: m = Q M / (z F)"
CONSTANTS = "K = M / (z F): F CODATA 2018 (exact), M IUPAC standard atomic weight"
PROPAGATION = "±: JCGM 100:2008, 5.1, independent inputs"


def kg_per_kah(metal: Metal) -> float:
    """Metal for each kiloampere-hour, kg/kAh."""
    return float(kg_kah_from_kg_c(equivalent_kg_c(metal)))


def cell_charge_c(values: Numbers) -> float:
    """Charge of one cell, C: what was typed, else current times time."""
    if "charge_kah" in values:
        return float(coulombs_from_kah(values["charge_kah"]))
    return float(amps_from_ka(values["current_ka"]) * seconds_from_hours(values["hours"]))


def charge_symbols(case: Case) -> str:
    """The charge of one cell in a formula."""
    return "Q" if case.has("charge_kah") else "I · t"


def charge_numbers(case: Case) -> tuple[str, dict[str, Part]]:
    """The charge of one cell with its numbers, for a formula's right-hand side."""
    if case.has("charge_kah"):
        return "%(charge)s kAh", {"charge": case["charge_kah"]}
    parts: dict[str, Part] = {"current": case["current_ka"], "hours": case["hours"]}
    return "%(current)s kA × %(hours)s h", parts


def efficiency_share(values: Numbers) -> float:
    """Current efficiency as a share."""
    return float(share_from_percent(values["current_efficiency_pct"]))


def density_a_m2(values: Numbers) -> float:
    """Current density over both faces of the cathodes, A/m2: typed, else from the current."""
    if "current_density_a_m2" in values:
        return values["current_density_a_m2"]
    area_m2 = values["cathodes"] * values["cathode_area_m2"]
    return float(current_density_a_m2(amps_from_ka(values["current_ka"]), area_m2))


def density_numbers(case: Case) -> tuple[str, dict[str, Part]]:
    """The current density with its numbers, for a formula's right-hand side."""
    if case.has("current_density_a_m2"):
        return "%(density)s A/m²", {"density": case["current_density_a_m2"]}
    parts: dict[str, Part] = {
        "current": case["current_ka"],
        "cathodes": case["cathodes"],
        "area": case["cathode_area_m2"],
    }
    return "%(current)s kA / (%(cathodes)s × %(area)s m²)", parts
