"""The tankhouse and its sections as they are set up."""

from server.science.units import (
    degc_from_kelvin,
    ka_from_amps,
    kwh_t_from_j_kg,
    microohm_from_ohm,
    millimetres_from_metres,
    millivolts_from_volts,
    percent_from_share,
)
from server.storage.plant import FROM_THE_START_MS, House, SectionPlan
from server.web.api.account_answers import known
from server.web.api.parameters import AtTime
from server.web.api.resource import resource
from server.web.api.schemas_plant import Plant, SectionAnswer, SectionTargets
from server.web.dependencies import Now, ThisHouse, requires
from server.web.moments import moment_of

router = resource("plant")


@router.get("/sections", summary="The plant", dependencies=[requires("reader")])
def get_sections(house: ThisHouse, now_ms: Now, at: AtTime = None) -> Plant:
    """Answer the tankhouse and its sections as they are set up now, or were at a moment."""
    return plant_answer(house, moment_of(at, house, "query.at") if at else now_ms)


def plant_answer(house: House, at_ms: int) -> Plant:
    """The tankhouse as the API answers it."""
    return Plant(
        tankhouse=house.name,
        time_zone=house.time_zone,
        currency=house.currency,
        energy_price_per_kwh=house.terms_at(at_ms).energy_price_per_kwh,
        standard_potentials=house.terms_at(at_ms).standard_potentials,
        sections=[_section(section, at_ms) for section in house.sections],
    )


def _section(section: SectionPlan, at_ms: int) -> SectionAnswer:
    terms = section.terms_at(at_ms)
    return SectionAnswer(
        section=section.name,
        process=section.process,
        metal=section.metal,
        electrons=section.electrons,
        cells=terms.cells,
        rows=terms.rows,
        cathodes_per_cell=terms.cathodes_per_cell,
        cathode_area_m2=terms.cathode_area_m2,
        rated_current_ka=float(ka_from_amps(terms.rated_amps)),
        metal_value_per_kg=terms.metal_value_per_kg,
        differential_resistance_uohm=known(terms.differential_resistance_ohm, microohm_from_ohm),
        rectifier_efficiency_pct=known(terms.rectifier_efficiency, percent_from_share),
        meter_accuracy_mv=float(millivolts_from_volts(terms.meter_accuracy_v)),
        current_accuracy_pct=float(percent_from_share(terms.current_accuracy)),
        scale_accuracy_pct=float(percent_from_share(terms.scale_accuracy)),
        walk_order=terms.walk_order,
        bus_volts=terms.bus_volts,
        electrode_gap_mm=known(terms.electrode_gap_m, millimetres_from_metres),
        conductivity_s_m=terms.conductivity_s_m,
        conductivity_at_c=known(terms.conductivity_at_k, degc_from_kelvin),
        conductivity_per_c=terms.conductivity_per_k,
        conductivity_per_metal_g_l=terms.conductivity_per_metal_g_l,
        conductivity_per_acid_g_l=terms.conductivity_per_acid_g_l,
        conductivity_accuracy_pct=known(terms.conductivity_accuracy, percent_from_share),
        targets=SectionTargets(
            current_efficiency_pct=float(percent_from_share(terms.target_current_efficiency)),
            specific_energy_kwh_t=float(kwh_t_from_j_kg(terms.target_specific_energy_j_kg)),
            cell_volts=(terms.low_volts, terms.high_volts),
        ),
        since=None if terms.from_ms == FROM_THE_START_MS else terms.from_ms,
    )
