"""Every sum by its name, in the order in which they are listed."""

from difflib import get_close_matches

from server.calculator.cell_voltage import CELL_VOLTAGE
from server.calculator.charge_to_mass import CHARGE_TO_MASS
from server.calculator.deposit_thickness import DEPOSIT_THICKNESS
from server.calculator.efficiency_from_weight import EFFICIENCY_FROM_WEIGHT
from server.calculator.energy_per_tonne import ENERGY_PER_TONNE
from server.calculator.limiting_current import LIMITING_CURRENT
from server.calculator.short_current import SHORT_CURRENT
from server.calculator.sum import Sum
from server.calculator.time_to_weight import TIME_TO_WEIGHT
from server.storage.errors import NotFound

SUMS: dict[str, Sum] = {
    found.name: found
    for found in (
        CHARGE_TO_MASS,
        EFFICIENCY_FROM_WEIGHT,
        ENERGY_PER_TONNE,
        CELL_VOLTAGE,
        LIMITING_CURRENT,
        SHORT_CURRENT,
        TIME_TO_WEIGHT,
        DEPOSIT_THICKNESS,
    )
}


def sum_named(name: str) -> Sum:
    """The sum of this name.

    Raises
    ------
    NotFound
        If there is none; it tells the names that come near, or all of them.
    """
    if name in SUMS:
        return SUMS[name]
    near = get_close_matches(name.strip().lower(), SUMS, n=3, cutoff=0.5)
    known = f"near it: {', '.join(near)}" if near else f"the sums are {', '.join(SUMS)}"
    raise NotFound("sum", name, known)
