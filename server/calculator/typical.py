"""What is usual for a process: it stands in where no section of the house is chosen."""

import math

from server.calculator.filled import Doubt, Filled, rounded
from server.calculator.sum import Basis
from server.calculator.texts import N_, Said
from server.science.processes import PROCESSES, Process, process
from server.science.uncertainty.propagation import standard_from_limit
from server.science.units import (
    degc_from_kelvin,
    millimetres_from_metres,
    percent_from_share,
)
from server.science.voltage.cells import CELL_MODELS
from server.storage.plant import House

TYPICAL = Said(N_("typical of the process"))
METAL_AS_CAST = Said(N_("metal as cast"))

# Limits of error that a plant file has where it names none: 0.5 %, 0.2 % and 2 mV.
USUAL_CURRENT_ACCURACY = 0.005
USUAL_SCALE_ACCURACY = 0.002
USUAL_METER_ACCURACY_V = 0.002

# Common practice: relative standard uncertainty of a titration or an atomic absorption assay.
ASSAY_SHARE = 0.02
# Common practice: standard uncertainty of a hand-held thermometer in a cell, degC.
THERMOMETER_DEGC = 0.5
# Common practice: an electrode's place in its cell, relative standard uncertainty of the area.
AREA_SHARE = 0.005

# Common practice: how evenly electrodes hang, standard uncertainty of the gap, mm.
GAP_MM = 1.0
# Common practice: relative standard uncertainty of a conductivity measured at the plant.
CONDUCTIVITY_SHARE = 0.02
# Common practice: the film where oxygen stirs the cell, and half-width of what is seen, mm.
STIRRED_FILM_MM = (0.1, 0.05)
# Common practice: the film where only the solution's own convection moves it, with half-width, mm.
QUIET_FILM_MM = (0.2, 0.1)

HOURS_PER_DAY = 24.0


def typical_basis(
    house: House, now_ms: int, name: str, metal: str | None, electrons: int | None
) -> Basis:
    """A process in general, with what is usual for it.

    Raises
    ------
    ScienceError
        If there is no such process or metal.
    """
    kind = process(name, metal, electrons)
    terms = house.terms_at(now_ms)
    return Basis(
        process=kind,
        currency=house.currency,
        table=terms.standard_potentials,
        filled=typical_values(kind)
        | _usual_current(kind)
        | {"energy_price_per_kwh": price_of(terms.energy_price_per_kwh)},
        doubts=usual_doubts(kind),
        usual=usual_ranges(kind),
    )


def price_of(price_per_kwh: float) -> Filled:
    """The house's price of energy."""
    return Filled(price_per_kwh, Said(N_("price of energy, set-up")))


def typical_values(kind: Process) -> dict[str, Filled]:
    """What is usual for a process, as far as anything is."""
    found = {
        "cells": Filled(1.0, Said(N_("one cell"))),
        "hours": Filled(kind.crop_days * HOURS_PER_DAY, Said(N_("usual growth of a crop"))),
        "density_kg_m3": Filled(kind.metal.density_kg_m3, METAL_AS_CAST),
        "starter_kg": Filled(0.0, Said(N_("none"))),
        "deposit_kg": Filled(0.0, Said(N_("none"))),
        "film_mm": Filled(_film_mm(kind)[0], _origin_of_film(kind)),
    }
    found |= _usual_conditions(kind)
    if math.isfinite(kind.typical_efficiency):
        efficiency_pct = rounded(percent_from_share(kind.typical_efficiency))
        found["current_efficiency_pct"] = Filled(efficiency_pct, TYPICAL)
        found["volts"] = Filled(rounded(sum(kind.typical_volts) / 2), TYPICAL)
    return found


def _usual_conditions(kind: Process) -> dict[str, Filled]:
    """Bath and gap in the middle of what plants of this kind run, where there is a model of it."""
    model = CELL_MODELS.get(kind.name)
    if model is None:
        return {}
    usual = model.usual
    return {
        "metal_g_l": Filled(usual.metal_g_l, TYPICAL),
        "acid_g_l": Filled(usual.acid_g_l, TYPICAL),
        "temperature_degc": Filled(rounded(float(degc_from_kelvin(usual.temperature_k))), TYPICAL),
        "gap_mm": Filled(rounded(float(millimetres_from_metres(usual.gap_m))), TYPICAL),
    }


def _usual_current(kind: Process) -> dict[str, Filled]:
    """The current density of such plants; a section has its own."""
    model = CELL_MODELS.get(kind.name)
    if model is None:
        return {}
    return {"current_density_a_m2": Filled(model.usual.current_density_a_m2, TYPICAL)}


def usual_doubts(kind: Process) -> dict[str, Doubt]:
    """How sure numbers are of which nothing else is known."""
    doubts = doubts_of_instruments(
        USUAL_CURRENT_ACCURACY,
        USUAL_SCALE_ACCURACY,
        USUAL_METER_ACCURACY_V,
        Said(N_("a usual accuracy, a limit")),
    )
    practice = Said(N_("common practice"))
    doubts |= {
        "metal_g_l": Doubt(practice, share=ASSAY_SHARE),
        "acid_g_l": Doubt(practice, share=ASSAY_SHARE),
        "temperature_degc": Doubt(practice, always=THERMOMETER_DEGC),
        "cathode_area_m2": Doubt(practice, share=AREA_SHARE),
        "gap_mm": Doubt(practice, always=GAP_MM),
        "conductivity_s_m": Doubt(practice, share=CONDUCTIVITY_SHARE),
        "film_mm": Doubt(practice, always=float(standard_from_limit(_film_mm(kind)[1]))),
    }
    low, high = kind.efficiency_band
    if math.isfinite(low):
        half_pct = percent_from_share((high - low) / 2)
        origin = Said(N_("half the usual band of the process"))
        doubts["current_efficiency_pct"] = Doubt(
            origin, always=float(standard_from_limit(half_pct))
        )
    return doubts


def doubts_of_instruments(
    current: float, scale: float, meter_v: float, origin: Said
) -> dict[str, Doubt]:
    """Standard uncertainties from limits of error: shares of current and weight, and volts."""
    current, scale, meter_v = (
        float(standard_from_limit(limit)) for limit in (current, scale, meter_v)
    )
    return {
        "current_ka": Doubt(origin, share=current),
        "current_density_a_m2": Doubt(origin, share=current),
        "charge_kah": Doubt(origin, share=current),
        "net_kg": Doubt(origin, share=scale),
        "starter_kg": Doubt(origin, share=scale),
        "deposit_kg": Doubt(origin, share=scale),
        "volts": Doubt(origin, always=meter_v),
    }


def usual_ranges(kind: Process) -> dict[str, tuple[float, float]]:
    """Between what the inputs of a process usually lie."""
    low, high = kind.efficiency_band
    if not math.isfinite(low):
        return {}
    band = (rounded(percent_from_share(low)), rounded(percent_from_share(high)))
    return {"volts": kind.typical_volts, "current_efficiency_pct": band}


def _film_mm(kind: Process) -> tuple[float, float]:
    return STIRRED_FILM_MM if kind.kind == "electrowinning" else QUIET_FILM_MM


def _origin_of_film(kind: Process) -> Said:
    if kind.kind == "electrowinning":
        return Said(N_("common practice where oxygen stirs the cell"))
    return Said(N_("common practice in a quiet cell"))


def process_names() -> list[str]:
    """The processes that can be chosen without a section."""
    return list(PROCESSES)
