"""What lies outside the range for which a formula's source vouches, said beside the result."""

from collections.abc import Sequence

from server.calculator.quantities import (
    ACID_G_L,
    CURRENT_DENSITY_A_M2,
    METAL_G_L,
    TEMPERATURE_DEGC,
)
from server.calculator.sum import Remark
from server.calculator.texts import N_, Said, Word
from server.science.ranges import Range, outside
from server.science.units import degc_from_kelvin

_INPUTS = {
    "metal_g_l": METAL_G_L,
    "acid_g_l": ACID_G_L,
    "temperature_k": TEMPERATURE_DEGC,
    "current_density_a_m2": CURRENT_DENSITY_A_M2,
}


def outside_ranges(formula: str, ranges: Sequence[Range], **values: float) -> list[Remark]:
    """A remark for each range that is left; `formula` names what is stretched, to be translated.

    Values go by the quantities of the ranges, in SI units.
    """
    return [_remark(formula, left, values[left.quantity]) for left in outside(ranges, **values)]


def _remark(formula: str, left: Range, value: float) -> Remark:
    known = _INPUTS.get(left.quantity)
    is_kelvin = left.quantity.endswith("_k")
    value, low, high = (
        float(degc_from_kelvin(number)) if is_kelvin else number
        for number in (value, left.low, left.high)
    )
    text = N_(
        "%(label)s: %(value)s %(unit)s. %(formula)s is stated for %(low)s to %(high)s %(unit)s and"
        " is stretched here."
    )
    return Remark(
        "range",
        Said(
            text,
            {
                "formula": Word(formula),
                "label": Word(known.label) if known else left.quantity,
                "low": low,
                "high": high,
                "unit": known.unit if known else "",
                "value": value,
            },
        ),
    )
