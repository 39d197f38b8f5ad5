"""A missing number makes its own result missing, and leaves every other bit for bit as it was."""

import dataclasses
import inspect
from collections.abc import Callable, Iterator, Mapping
from functools import partial
from typing import Any

import numpy as np
import pytest

from server.science import (
    arrays,
    charge,
    electrical_units,
    energy,
    energy_units,
    faraday,
    size_units,
    solution_units,
    stoichiometry,
)
from server.science.constants import metal
from server.science.electrode import arrhenius, convection, film, mixed, rates, tafel
from server.science.electrolyte import conductivity, diffusion, gas, laliberte, salts, water
from server.science.electrolyte.sulfuric_acid import acid_conductivity_s_m
from server.science.equilibrium import activities, alumina, competing, entropy, gibbs, potential
from server.science.losses import bar_field, ferric, hydrogen, ladder, leakage, shorts, wark
from server.science.losses.regressions import regressed_efficiency, regression
from server.science.processes import process
from server.science.refining import anodes, bleed, copper_balance, slimes
from server.science.statistics import (
    change_point,
    change_point_design,
    chart_design,
    cusum,
    doubtful_run_length,
    ewma,
    ewma_run_length,
    markov_run_length,
    run_length,
    spread,
    trends,
)
from server.science.uncertainty import propagation
from server.science.voltage import doubt, drops, resistance, sensitivity, terms
from server.science.voltage.cells import cell_model
from tests.science.samples import SAMPLES

COPPER = metal("Cu")
WINNING = process("copper electrowinning")
REFINING = process("copper electrorefining")
MODEL = cell_model("copper electrowinning")
COPPER_BATH = conductivity.CONDUCTIVITIES["Cu"]


def bath_of(function: Callable[..., Any]) -> Callable[..., Any]:
    """The function of a bath's salts, as one of two salts and the temperature."""

    def of_two(copper: Any, acid: Any, temperature_k: Any) -> Any:
        return function({"CuSO4": copper, "H2SO4": acid}, temperature_k)

    of_two.__name__ = function.__name__
    return of_two


def regressed(ferric_g_l: Any, metal_g_l: Any, current_density_a_m2: Any) -> Any:
    """A published regression of the efficiency, as a function of its variables."""
    return regressed_efficiency(
        regression("Khouraibchia and Moats"),
        ferric_g_l=ferric_g_l,
        copper_g_l=metal_g_l,
        current_density_a_m2=current_density_a_m2,
    )


# What is bound here is fixed; every other input that `SAMPLES` names is an array of three.
ELEMENTWISE: list[Callable[..., Any]] = [
    partial(arrays.finite, "volts"),
    partial(arrays.not_negative, "volts"),
    partial(arrays.above_zero, "volts"),
    electrical_units.amps_from_ka,
    electrical_units.coulombs_from_kah,
    electrical_units.ohm_from_microohm,
    electrical_units.volts_from_millivolts,
    energy_units.kwh_t_from_j_kg,
    energy_units.joules_from_kwh,
    solution_units.kelvin_from_degc,
    solution_units.share_from_percent,
    size_units.kg_from_tonnes,
    energy.referred_volts,
    partial(charge.counter_charge_c, sampled_c=np.nan),
    partial(faraday.deposited_kg, metal=COPPER),
    partial(faraday.charge_for_c, metal=COPPER),
    partial(faraday.current_efficiency, metal=COPPER),
    faraday.specific_energy_j_kg,
    partial(faraday.specific_energy_from_volts_j_kg, metal=COPPER),
    partial(faraday.deposit_thickness_m, metal=COPPER),
    faraday.current_density_a_m2,
    partial(stoichiometry.oxygen_made_kg, metal=COPPER),
    partial(stoichiometry.sulfuric_acid_made_kg, metal=COPPER),
    stoichiometry.hydrogen_made_m3,
    arrhenius.arrhenius_ratio,
    arrhenius.arrhenius_at,
    arrhenius.activation_j_mol,
    convection.schmidt,
    convection.grashof,
    convection.sherwood,
    convection.natural_film_m,
    film.film_limiting_a_m2,
    film.film_thickness_m,
    film.share_of_limit,
    film.levich_film_m,
    film.levich_limiting_a_m2,
    mixed.mixed_current_a_m2,
    mixed.kinetic_current_a_m2,
    mixed.concentration_overpotential_v,
    mixed.dissolution_overpotential_v,
    mixed.cathode_current_a_m2,
    mixed.cathode_overpotential_v,
    rates.butler_volmer_a_m2,
    rates.butler_volmer_overpotential_v,
    rates.back_reaction_share,
    rates.charge_transfer_ohm_m2,
    tafel.tafel_slope_v,
    tafel.transfer_from_slope,
    tafel.tafel_overpotential_v,
    tafel.tafel_current_a_m2,
    tafel.tafel_exchange_a_m2,
    partial(conductivity.conductivity_s_m, COPPER_BATH),
    partial(conductivity.conductivity_with_doubt, COPPER_BATH),
    partial(diffusion.ion_diffusivity_m2_s, "Cu2+"),
    diffusion.copper_diffusivity_m2_s,
    diffusion.copper_diffusivity_with_doubt,
    gas.bruggeman_s_m,
    gas.bruggeman_risen_s_m,
    bath_of(laliberte.density_kg_m3),
    bath_of(laliberte.mass_shares),
    bath_of(laliberte.viscosity_pa_s),
    bath_of(laliberte.kinematic_viscosity_m2_s),
    partial(salts.salt_g_l_from_metal, symbol="Cu"),
    partial(salts.metal_g_l_from_salt, symbol="Cu"),
    water.water_density_kg_m3,
    water.water_viscosity_pa_s,
    acid_conductivity_s_m,
    activities.molality_mol_kg,
    partial(activities.sulfate_coefficient, "Cu"),
    activities.acid_coefficient,
    partial(activities.sulfate_activities, COPPER),
    alumina.alumina_volts,
    partial(competing.starts_v, side="cathode"),
    partial(competing.driving_v, side="anode"),
    partial(entropy.temperature_coefficient_v_k, electrons=2),
    entropy.standard_at_v,
    partial(gibbs.gibbs_j_mol, electrons=2),
    partial(gibbs.volts_from_gibbs, electrons=2),
    partial(gibbs.equilibrium_ln_constant, electrons=2),
    partial(gibbs.thermoneutral_volts, electrons=2),
    partial(potential.nernst_slope_v, electrons=2),
    partial(potential.nernst_v, electrons=2),
    partial(potential.metal_potential_v, COPPER, standard_at_temperature=True),
    partial(potential.oxygen_potential_v, standard_at_temperature=True),
    partial(potential.reversible_volts, WINNING, standard_at_temperature=True),
    partial(potential.concentration_cell_volts, electrons=2),
    bar_field.flux_density_t,
    bar_field.distance_for_field_m,
    ferric.ferric_transfer_m_s,
    ferric.ferric_current_at_a_m2,
    ferric.ferric_current_a_m2,
    ferric.ferric_loss_share,
    ferric.ferric_rule_share,
    partial(hydrogen.hydrogen_current_a_m2, other_losses_share=0.05),
    partial(hydrogen.hydrogen_rate_a_m2, equilibrium_v=0.0),
    ladder.ladder_volts,
    partial(ladder.ladder_short_ohm, cell_volts=2.0, current_a=2e5, back_volts=1.5),
    leakage.string_volts,
    leakage.leakage_from_share_a,
    leakage.leakage_a,
    leakage.string_leakage_a,
    regressed,
    shorts.short_from_volts,
    shorts.share_of_many_shorts,
    partial(shorts.lost_metal_kg, metal=COPPER),
    shorts.lost_value,
    shorts.short_energy_ratio,
    wark.wark_efficiency,
    wark.wark_constant,
    anodes.dissolved_kg,
    anodes.anode_life_s,
    partial(anodes.scrap_share, amps=900.0),
    anodes.crops_per_anode,
    anodes.crop_cathode_kg,
    partial(anodes.anodic_efficiency, charge_c=1e9),
    bleed.impurity_to_solution_kg_s,
    bleed.bleed_m3_s,
    bleed.steady_g_l,
    bleed.concentration_after_g_l,
    partial(bleed.time_to_limit_s, bleed_m3_s=1e-3),
    copper_balance.copper_build_up_kg_s,
    copper_balance.liberator_cells,
    slimes.slimes_kg,
    slimes.element_in_slimes_kg,
    slimes.grade_of_slimes,
    chart_design.false_flags_per_thousand,
    chart_design.run_length_for,
    partial(change_point.glr_run_length, window=100),
    partial(run_length.cusum_run_length, 0.5, 4.0),
    partial(run_length.siegmund_run_length, 0.5, 4.0),
    partial(markov_run_length.cusum_markov_run_length, 0.5, 4.0, cells=50),
    partial(markov_run_length.ewma_markov_run_length, 0.1, 2.7, cells=51),
    partial(ewma_run_length.ewma_run_length, 0.1, 2.7),
    partial(ewma_run_length.shewhart_run_length, 3.0),
    partial(change_point_design.shiryaev_roberts_run_length, 100.0, 1.0),
    doubtful_run_length.autocorrelation_inflation,
    partial(ewma.ewma_half_width, weight=0.1, width=2.7),
    propagation.standard_from_limit,
    propagation.expanded,
    partial(trends.time_to_limit, limit=5.0),
    drops.electrolyte_drop_v,
    drops.contact_drop_v,
    drops.bar_drop_v,
    partial(terms.bath_conductivity_s_m, MODEL),
    partial(terms.cell_terms, MODEL, limiting_a_m2=None),
    partial(doubt.cell_terms_with_doubt, MODEL, limiting_a_m2=None),
    partial(sensitivity.sensitivities, MODEL, limiting_a_m2=None),
    partial(sensitivity.current_slopes, MODEL, limiting_a_m2=None),
    partial(terms.terms_without_model, REFINING),
    partial(resistance.differential_resistance, MODEL),
    partial(resistance.resistive_share, MODEL),
    partial(resistance.typical_resistance, WINNING),
]

# Functions of rounds by cells, along the rounds: a NaN stays in its own column.
BY_COLUMN: list[Callable[..., Any]] = [
    partial(cusum.cusum, k=0.5),
    partial(cusum.first_crossings, h=1.0),
    partial(ewma.ewma, weight=0.2),
    partial(change_point.glr, window=4),
    partial(change_point.shiryaev_roberts, shift=1.0),
    partial(change_point.shiryaev_posterior, shift=1.0, hazard=0.01),
    partial(spread.median, axis=0),
    partial(spread.median_absolute_deviation, axis=0),
    partial(spread.robust_sd, axis=0),
    partial(spread.moving_range_sd, axis=0),
    partial(spread.hampel_scores, axis=0),
    partial(spread.is_outlying, axis=0),
]


def name_of(function: Callable[..., Any]) -> str:
    """The function's own name, whatever is bound to it."""
    return str(getattr(function, "func", function).__name__)


def inputs_of(function: Callable[..., Any]) -> dict[str, np.ndarray]:
    """A sample for every input that nothing is bound to and that may be an array."""
    bound = getattr(function, "keywords", {})
    taken = [name for name in inspect.signature(function).parameters if name not in bound]
    return {name: np.array(SAMPLES[name]) for name in taken if name in SAMPLES}


def arrays_of(result: Any, place: str = "") -> Iterator[tuple[str, np.ndarray]]:
    """Every array of a result by its place: fields of classes, items of tuples and mappings."""
    if dataclasses.is_dataclass(result):
        parts = {field.name: getattr(result, field.name) for field in dataclasses.fields(result)}
    elif isinstance(result, tuple):
        parts = {str(number): part for number, part in enumerate(result)}
    else:
        parts = dict(result) if isinstance(result, Mapping) else {}
    for name, part in parts.items():
        yield from arrays_of(part, f"{place}.{name}")
    if isinstance(result, np.ndarray | np.generic):
        yield place, np.asarray(result)


def bits(values: np.ndarray) -> bytes:
    """Numbers as they lie in memory, which tells 0.0 from -0.0."""
    return np.ascontiguousarray(values).tobytes()


@pytest.mark.parametrize("function", ELEMENTWISE, ids=name_of)
def test_a_missing_number_costs_its_own_element_and_no_other(function):
    inputs = inputs_of(function)
    whole = dict(arrays_of(function(**inputs)))
    numbers = [place for place, found in whole.items() if found.dtype == np.float64]
    # Said first, for otherwise the comparison below would find nothing lost in nothing.
    assert inputs
    assert numbers
    assert not any(np.isnan(whole[place]).any() for place in numbers)

    for name, element in ((name, element) for name in inputs for element in range(3)):
        missing = {**inputs, name: inputs[name].copy()}
        missing[name][element] = np.nan

        found = dict(arrays_of(function(**missing)))

        lost = [
            place for place in numbers if found[place].shape and np.isnan(found[place][element])
        ]
        assert lost, name
        for place in whole:
            others = [other for other in range(3) if other != element]
            if whole[place].shape:
                assert bits(found[place][others]) == bits(whole[place][others]), (name, place)


@pytest.mark.parametrize("function", BY_COLUMN, ids=name_of)
def test_a_missing_reading_leaves_the_other_cells_alone(function):
    rounds = np.random.default_rng(3).normal(size=(12, 4))
    whole = dict(arrays_of(function(rounds)))

    for cell in range(4):
        missing = rounds.copy()
        missing[5, cell] = np.nan
        others = [other for other in range(4) if other != cell]

        for place, found in arrays_of(function(missing)):
            assert bits(found[..., others]) == bits(whole[place][..., others]), place


@pytest.mark.parametrize(
    "name", ["current_a", "back_volts", "pair_ohm", "short_ohm", "contact_ohm"]
)
def test_a_missing_pair_costs_its_own_cell_and_no_other(name):
    inputs = {
        "current_a": np.array([20e3, 25e3, 31e3]),
        "back_volts": np.full((3, 5), 1.5),
        "pair_ohm": np.full((3, 5), 8e-4),
        "short_ohm": np.where(np.eye(3, 5) > 0, 2e-3, np.inf),
        "contact_ohm": np.full((3, 5), 3e-5),
    }
    whole = ladder.ladder_cell(**inputs)
    inputs[name][(1, 2)[: inputs[name].ndim]] = np.nan

    found = ladder.ladder_cell(**inputs)

    assert np.isnan(found.cell_volts[1])
    for place, values in arrays_of(found):
        kept = dict(arrays_of(whole))[place]
        assert bits(values[[0, 2]]) == bits(kept[[0, 2]]), place


def test_the_tables_hold_most_of_the_science():
    assert len({name_of(function) for function in ELEMENTWISE + BY_COLUMN}) > 140
