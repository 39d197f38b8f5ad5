"""The differential resistance that refers a section's voltages to a common current."""

import math

from server.science.processes import process
from server.storage.plant import SectionPlan, SectionTerms

_OWN_FIGURE = 0.1
"""Relative standard uncertainty of a resistance that the plant itself states (common practice)."""


def resistance_ohm(section: SectionPlan, terms: SectionTerms) -> float:
    """Differential resistance of one cell of a section, ohm.

    The plant's own figure where it has one; else the share of the cell voltage that follows
    the current in this process, at the middle of the target voltages and rated current.
    """
    if terms.differential_resistance_ohm is not None:
        return terms.differential_resistance_ohm
    kind = process(section.process, section.metal, section.electrons)
    middle_v = (terms.low_volts + terms.high_volts) / 2
    return kind.resistive_share * middle_v / terms.rated_amps


def relative_u_resistance(section: SectionPlan, terms: SectionTerms) -> float:
    """Relative standard uncertainty of that resistance, from the half-width of its band."""
    if terms.differential_resistance_ohm is not None:
        return _OWN_FIGURE
    kind = process(section.process, section.metal, section.electrons)
    return kind.resistive_share_half_width / kind.resistive_share / math.sqrt(3)
