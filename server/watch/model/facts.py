"""What the watch is told of a section before it has seen a reading."""

from dataclasses import dataclass

from server.science.processes import process
from server.science.uncertainty.propagation import standard_from_limit
from server.storage.plant import SectionPlan, SectionTerms
from server.watch.resistance import relative_u_resistance, resistance_ohm

# Common practice: a hand-held reading scatters by some thousandths of the cell voltage.
_TYPICAL_NOISE = 0.004

# Common practice: cells of one house differ by about a hundredth of their voltage.
_TYPICAL_SPREAD = 0.012


@dataclass(frozen=True)
class Facts:
    """A section as the model of its voltages needs it; V, A, ohm, s."""

    cells: int
    rated_amps: float
    resistance_ohm: float
    """Differential resistance of a cell, to start with."""
    u_resistance_ohm: float
    least_noise_v: float
    """What the meter alone scatters."""
    noise_v: float
    """What readings scatter, to start with."""
    spread_v: float
    """By how much healthy cells differ, to start with."""
    crop_ms: float
    """How long a cathode usually hangs."""


def facts_of(section: SectionPlan, terms: SectionTerms) -> Facts:
    """What is known of a section under the terms that hold."""
    resistance = resistance_ohm(section, terms)
    middle_v = (terms.low_volts + terms.high_volts) / 2
    least_v = float(standard_from_limit(terms.meter_accuracy_v))
    crop_days = process(section.process, section.metal, section.electrons).crop_days
    return Facts(
        cells=terms.cells,
        rated_amps=terms.rated_amps,
        resistance_ohm=resistance,
        u_resistance_ohm=resistance * relative_u_resistance(section, terms),
        least_noise_v=least_v,
        noise_v=max(_TYPICAL_NOISE * middle_v, terms.meter_accuracy_v),
        spread_v=max(_TYPICAL_SPREAD * middle_v, 2 * least_v),
        crop_ms=crop_days * 86_400_000,
    )
