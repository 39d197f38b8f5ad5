"""Limiting current: how much the solution can bring to the cathode, and the share in use."""

from server.calculator.charge import PROPAGATION, density_a_m2, density_numbers
from server.calculator.inputs import Input
from server.calculator.quantities import (
    CATHODE_AREA_M2,
    CATHODES,
    CURRENT_DENSITY_A_M2,
    CURRENT_KA,
    METAL_G_L,
)
from server.calculator.sum import Case, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.science.constants import FARADAY_C_MOL
from server.science.electrode.film import (
    SMOOTH_DEPOSIT_HIGH_SHARE,
    SMOOTH_DEPOSIT_LOW_SHARE,
    film_limiting_a_m2,
    share_of_limit,
)
from server.science.units import metres_from_millimetres, mol_m3_from_g_l, percent_from_share

# SI Brochure, 9th ed. (2019), table 7: a square micrometre is 1e-12 square metre.
M2_PER_UM2 = 1e-12

DIFFUSIVITY_UM2_S = Input(
    "diffusivity_um2_s",
    N_("Diffusion coefficient of the ion"),
    "µm²/s",
    1,
    100_000,
    hint=N_("1000 µm²/s are 10⁻⁹ m²/s"),
)
FILM_MM = Input("film_mm", N_("Film at the cathode"), "mm", 0, 10, is_above=True)


def _limiting_a_m2(case: Case, values: Numbers) -> float:
    metal = case.basis.metal
    return float(
        film_limiting_a_m2(
            metal.electrons,
            values["diffusivity_um2_s"] * M2_PER_UM2,
            mol_m3_from_g_l(values["metal_g_l"], metal.molar_mass_kg_mol),
            metres_from_millimetres(values["film_mm"]),
        )
    )


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    density, parts = density_numbers(case)
    mol_m3 = float(mol_m3_from_g_l(case["metal_g_l"], metal.molar_mass_kg_mol))
    more: dict[str, Part] = {
        "z": metal.electrons,
        "faraday": FARADAY_C_MOL,
        "diffusivity": case["diffusivity_um2_s"],
        "mol_m3": mol_m3,
        "film": case["film_mm"],
        "limit": _limiting_a_m2(case, case.values),
        "a_m2": density_a_m2(case.values),
    }
    parts |= more
    return [
        Output(
            "limiting_a_m2",
            N_("limiting current density"),
            "A/m²",
            "i_L = z · F · D · c / δ",
            Said(
                "%(z)s × %(faraday)s C/mol × %(diffusivity)s µm²/s × %(mol_m3)s mol/m³"
                " / %(film)s mm",
                parts,
            ),
            lambda values: _limiting_a_m2(case, values),
        ),
        Output(
            "share_pct",
            N_("of it in use"),
            "%",
            "i / i_L",
            Said("%(a_m2)s A/m² / %(limit)s A/m²", parts),
            lambda values: float(
                percent_from_share(
                    share_of_limit(density_a_m2(values), _limiting_a_m2(case, values))
                )
            ),
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


def _remarks(_case: Case, results: Numbers) -> list[Remark]:
    share_pct = results["share_pct"]
    low, high = (
        float(percent_from_share(share))
        for share in (SMOOTH_DEPOSIT_LOW_SHARE, SMOOTH_DEPOSIT_HIGH_SHARE)
    )
    if share_pct > 100:
        text = N_(
            "More current than the film can feed: the rest makes hydrogen or powder, or the film"
            " is thinner than put in."
        )
        return [Remark("warning", Said(text))]
    if share_pct > high:
        text = N_(
            "Beyond %(high)s %% of the limit deposits are expected rough; smooth ones are grown"
            " below %(low)s to %(high)s %% (common practice)."
        )
        return [Remark("range", Said(text, {"low": low, "high": high}))]
    return []


LIMITING_CURRENT = Sum(
    name="limiting-current",
    title=N_("Limiting current"),
    question=N_("How much current the solution can feed at the cathode, and how much is in use."),
    formula="i_L = z · F · D · c / δ",
    inputs=(
        METAL_G_L,
        DIFFUSIVITY_UM2_S,
        FILM_MM,
        CURRENT_KA,
        CATHODES,
        CATHODE_AREA_M2,
        CURRENT_DENSITY_A_M2,
    ),
    outputs=_outputs,
    needs=frozenset({"assay"}),
    results=("limiting_a_m2", "share_pct", "current_density_a_m2"),
    sources=(
        "W. Nernst, Z. Phys. Chem. 47 (1904) 52",
        PROPAGATION,
    ),
    limits=(
        N_(
            "A mean over the plate, migration left out: corners, poor flow and a low feed have"
            " less."
        ),
    ),
    remarks=_remarks,
)
