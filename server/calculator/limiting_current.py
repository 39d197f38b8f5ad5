"""Limiting current: how much the solution can bring to the cathode, and the share in use."""

from dataclasses import replace

from server.calculator.charge import PROPAGATION, density_a_m2, density_numbers
from server.calculator.inputs import Input
from server.calculator.out_of_range import outside_ranges
from server.calculator.quantities import (
    ACID_G_L,
    CATHODE_AREA_M2,
    CATHODES,
    CURRENT_DENSITY_A_M2,
    CURRENT_KA,
    METAL_G_L,
    TEMPERATURE_DEGC,
)
from server.calculator.sum import Case, ModelDoubt, Numbers, Output, Remark, Sum
from server.calculator.texts import N_, Part, Said
from server.science.constants import FARADAY_C_MOL, Metal
from server.science.electrode.film import (
    SMOOTH_DEPOSIT_HIGH_SHARE,
    SMOOTH_DEPOSIT_LOW_SHARE,
    film_limiting_a_m2,
    share_of_limit,
)
from server.science.electrolyte.diffusion import (
    COPPER_DIFFUSION_RANGES,
    ION_DIFFUSIVITIES_M2_S,
    ION_U_SHARE,
    copper_diffusivity_m2_s,
    copper_diffusivity_with_doubt,
    ion_diffusivity_m2_s,
)
from server.science.electrolyte.laliberte import viscosity_pa_s
from server.science.electrolyte.salts import bath_g_l
from server.science.units import (
    kelvin_from_degc,
    metres_from_millimetres,
    mol_m3_from_g_l,
    percent_from_share,
)

# SI Brochure, 9th ed. (2019), table 7: a square micrometre is 1e-12 square metre.
M2_PER_UM2 = 1e-12

DIFFUSIVITY_UM2_S = Input(
    "diffusivity_um2_s",
    N_("Diffusion coefficient of the ion"),
    "µm²/s",
    1,
    100_000,
    is_needed=False,
    hint=N_("left blank, worked out for the temperature; 1000 µm²/s are 10⁻⁹ m²/s"),
    replaces=("temperature_degc", "acid_g_l"),
)
FILM_MM = Input("film_mm", N_("Film at the cathode"), "mm", 0, 10, is_above=True)

_FACTOR = "diffusivity_factor"


def _ion(metal: Metal) -> str:
    return f"{metal.symbol}{metal.electrons}+"


def _diffusivity_m2_s(case: Case, values: Numbers) -> float:
    """Diffusion coefficient, m2/s: typed, else by what is known of the ion in such a bath."""
    if "diffusivity_um2_s" in values:
        return values["diffusivity_um2_s"] * M2_PER_UM2
    metal, kelvin = case.basis.metal, float(kelvin_from_degc(values["temperature_degc"]))
    if metal.symbol == "Cu":
        known = copper_diffusivity_m2_s(kelvin)
    else:
        bath = bath_g_l({metal.symbol: values["metal_g_l"]}, values.get("acid_g_l", 0.0))
        known = ion_diffusivity_m2_s(_ion(metal), kelvin, viscosity_pa_s(bath, kelvin))
    return float(known) * values[_FACTOR]


def _limiting_a_m2(case: Case, values: Numbers) -> float:
    metal = case.basis.metal
    return float(
        film_limiting_a_m2(
            metal.electrons,
            _diffusivity_m2_s(case, values),
            mol_m3_from_g_l(values["metal_g_l"], metal.molar_mass_kg_mol),
            metres_from_millimetres(values["film_mm"]),
        )
    )


def _outputs(case: Case) -> list[Output]:
    metal = case.basis.metal
    density, parts = density_numbers(case)
    diffusivity_um2_s = _diffusivity_m2_s(case, case.values) / M2_PER_UM2
    more: dict[str, Part] = {
        "z": metal.electrons,
        "faraday": FARADAY_C_MOL,
        "diffusivity": diffusivity_um2_s,
        "mol_m3": float(mol_m3_from_g_l(case["metal_g_l"], metal.molar_mass_kg_mol)),
        "film": case["film_mm"],
        "limit": _limiting_a_m2(case, case.values),
        "a_m2": density_a_m2(case.values),
    }
    parts |= more
    outputs = [
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
    if not case.has("diffusivity_um2_s"):
        outputs.append(_diffusivity_output(case, diffusivity_um2_s))
    return outputs


def _diffusivity_output(case: Case, diffusivity_um2_s: float) -> Output:
    of_copper = case.basis.metal.symbol == "Cu"
    parts: dict[str, Part] = {
        "diffusivity": diffusivity_um2_s,
        "degc": case["temperature_degc"],
    }
    return Output(
        "diffusivity_um2_s",
        N_("diffusion coefficient"),
        "µm²/s",
        "D = D₆₀ · exp(E/R · (1/T₆₀ − 1/T))" if of_copper else "D = D₂₅ · T/T₂₅ · μ₂₅/μ",
        Said("D(%(degc)s °C)", parts),
        lambda values: _diffusivity_m2_s(case, values) / M2_PER_UM2,
    )


def _model_doubts(case: Case) -> list[ModelDoubt]:
    if case.has("diffusivity_um2_s"):
        return []
    share = ION_U_SHARE
    if case.basis.metal.symbol == "Cu":
        kelvin = float(kelvin_from_degc(case["temperature_degc"]))
        value, doubt = copper_diffusivity_with_doubt(kelvin)
        share = float(doubt / value)
    return [ModelDoubt(_FACTOR, N_("What is known of the diffusion coefficient"), 1.0, share)]


def _remarks(case: Case, results: Numbers) -> list[Remark]:
    found = []
    if not case.has("diffusivity_um2_s") and case.basis.metal.symbol == "Cu":
        known = {"metal_g_l": case["metal_g_l"]}
        known["temperature_k"] = float(kelvin_from_degc(case["temperature_degc"]))
        if case.has("acid_g_l"):
            known["acid_g_l"] = case["acid_g_l"]
        formula = N_("The diffusion coefficient")
        found += outside_ranges(formula, COPPER_DIFFUSION_RANGES, **known)
    low, high = (
        float(percent_from_share(share))
        for share in (SMOOTH_DEPOSIT_LOW_SHARE, SMOOTH_DEPOSIT_HIGH_SHARE)
    )
    if results["share_pct"] > 100:
        text = N_(
            "More current than the film can feed: the rest makes hydrogen or powder, or the film"
            " is thinner than put in."
        )
        found.append(Remark("warning", Said(text)))
    elif results["share_pct"] > high:
        text = N_(
            "Beyond %(high)s %% of the limit deposits are expected rough; smooth ones are grown"
            " below %(low)s to %(high)s %% (common practice)."
        )
        found.append(Remark("range", Said(text, {"low": low, "high": high})))
    return found


def _also_needed(metal: Metal) -> tuple[str, ...]:
    """A diffusion coefficient must be typed for an ion that the science does not know."""
    return () if _ion(metal) in ION_DIFFUSIVITIES_M2_S else ("diffusivity_um2_s",)


LIMITING_CURRENT = Sum(
    name="limiting-current",
    title=N_("Limiting current"),
    question=N_("How much current the solution can feed at the cathode, and how much is in use."),
    formula="i_L = z · F · D · c / δ",
    inputs=(
        METAL_G_L,
        TEMPERATURE_DEGC,
        replace(ACID_G_L, is_needed=False),
        DIFFUSIVITY_UM2_S,
        FILM_MM,
        CURRENT_KA,
        CATHODES,
        CATHODE_AREA_M2,
        CURRENT_DENSITY_A_M2,
    ),
    outputs=_outputs,
    needs=frozenset({"assay"}),
    also_needed=_also_needed,
    results=("limiting_a_m2", "share_pct", "current_density_a_m2", "diffusivity_um2_s"),
    sources=(
        "W. Nernst, Z. Phys. Chem. 47 (1904) 52",
        "D of Cu²⁺: M. S. Moats and others, Hydrometallurgy 56 (2000) 255 (activation energy);"
        " its value at 60 °C from memory",
        "D of other ions: their limiting values in water, A. Einstein, Ann. Phys. 322 (1905) 549,"
        " and viscosity by Laliberté, J. Chem. Eng. Data 54 (2009) 1725",
        PROPAGATION,
    ),
    limits=(
        N_(
            "A mean over the plate, migration left out: corners, poor flow and a low feed have"
            " less."
        ),
    ),
    model_doubts=_model_doubts,
    remarks=_remarks,
)
