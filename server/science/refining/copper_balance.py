"""Copper that piles up in a refinery's electrolyte, and the liberator cells that take it out."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import COPPER, Metal
from server.science.faraday import equivalent_kg_c

# Below this copper, arsenic leaves as arsine rather than as metal: liberators are said to take
# arsenic out best at 2 to 10 g/L of copper (a technology supplier's note, looked up).
LOW_COPPER_G_L = 2.0


@dataclass(frozen=True)
class GasLimit:
    """One published limit for arsine in air; local law governs.

    `value` is in `unit`. `status` is "looked up" or "from memory".
    """

    what: str
    value: float
    unit: str
    source: str
    status: str


# NIOSH's page on arsine (May 1994), which quotes OSHA's limit too, looked up; the lower value of
# ACGIH from memory; the danger to life that NIOSH revised, from a public data file.
ARSINE_LIMITS = (
    GasLimit("mean of eight hours, OSHA", 0.05, "ppm", "29 CFR 1910.1000", "looked up"),
    GasLimit("ceiling of 15 minutes, NIOSH", 0.002, "mg/m3", "NIOSH, arsine, 1994", "looked up"),
    GasLimit("danger to life, as first set", 6.0, "ppm", "NIOSH, arsine, 1994", "looked up"),
    GasLimit("danger to life, revised", 3.0, "ppm", "NIOSH pocket guide", "looked up"),
    GasLimit("mean of eight hours, ACGIH", 0.005, "ppm", "ACGIH", "from memory"),
)


def copper_build_up_kg_s(
    current_a: ArrayLike,
    cells: ArrayLike,
    anodic_efficiency: ArrayLike,
    cathodic_efficiency: ArrayLike,
    chemical_kg_s: ArrayLike = 0.0,
    metal: Metal = COPPER,
) -> Numbers:
    """Copper that the electrolyte gains because anodes give more than cathodes take.

    K I N (eta_a - eta_c), and what air and acid dissolve without current. Cathodic efficiency
    falls with every short, so shorts show up here as copper in the solution. Negative where the
    electrolyte is drawn down.

    Parameters
    ----------
    current_a : array_like, shape S
        Current through each cell, A; not negative.
    cells : array_like, broadcast with S
        Cells in series at that current; not negative.
    anodic_efficiency : array_like, broadcast with S
        Metal dissolved over what Faraday's law gives, as a share; not negative.
    cathodic_efficiency : array_like, broadcast with S
        Metal deposited over what Faraday's law gives, as a share; not negative.
    chemical_kg_s : array_like, broadcast with S
        Copper dissolved from anodes, oxide and slimes without current, kg/s; not negative.
    metal : Metal
        The metal refined.

    Returns
    -------
    ndarray, broadcast shape
        Copper gained, kg/s. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, on both electrodes.

    Example
    -------
    1000 cells at 30 kA, 99.0 against 96.5 %, 3000 kg dissolve by themselves: kg in a day.

    >>> f"{copper_build_up_kg_s(30e3, 1000, 0.990, 0.965, 3000 / 86_400) * 86_400:.0f}"
    '24339'
    """
    difference = not_negative("anodic_efficiency", anodic_efficiency) - not_negative(
        "cathodic_efficiency", cathodic_efficiency
    )
    amps = not_negative("current_a", current_a) * not_negative("cells", cells)
    made_kg_s = equivalent_kg_c(metal) * amps * difference
    return np.asarray(made_kg_s + not_negative("chemical_kg_s", chemical_kg_s))


def liberator_cells(
    copper_kg_s: ArrayLike,
    liberator_a: ArrayLike,
    current_efficiency: ArrayLike,
    metal: Metal = COPPER,
) -> Numbers:
    """Liberator cells, with anodes that do not dissolve, that take copper out as fast as it comes.

    CAUTION. Where copper runs low while arsenic is present, the cathode makes ARSINE, a gas that
    kills at a few parts per million, and hydrogen; antimony makes stibine. How far to strip is
    a matter of safety before it is one of efficiency: hoods, gas alarms, the site's procedure
    and local codes govern, and `low_copper_with_arsenic` points to the bath. Not rounded: build
    whole cells.

    Parameters
    ----------
    copper_kg_s : array_like, shape S
        Copper to take out, kg/s; not negative.
    liberator_a : array_like, broadcast with S
        Current through each liberator cell, A; above zero.
    current_efficiency : array_like, broadcast with S
        Their current efficiency, as a share; above zero. It falls as copper runs low.
    metal : Metal
        The metal taken out.

    Returns
    -------
    ndarray, broadcast shape
        Cells. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the copper is negative, or current or efficiency not above zero.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77; arsine: US patents 4083761 and 4146447, and
    NIOSH on arsine (1994).

    Example
    -------
    >>> f"{liberator_cells(24_338.9 / 86_400, 25e3, 0.90):.2f}"
    '38.02'
    """
    each_kg_s = (
        equivalent_kg_c(metal)
        * above_zero("liberator_a", liberator_a)
        * above_zero("current_efficiency", current_efficiency)
    )
    return np.asarray(not_negative("copper_kg_s", copper_kg_s) / each_kg_s)


def low_copper_with_arsenic(copper_g_l: ArrayLike, arsenic_g_l: ArrayLike) -> NDArray[np.bool_]:
    """Tell where a liberator's bath is low enough in copper that arsine must be expected.

    CAUTION. True is a warning; False is no clearance: the copper at the cathode lies below that
    of a sample, and arsine has been made above this figure too. Gas alarms and the site's
    procedure govern.

    Parameters
    ----------
    copper_g_l : array_like, shape S
        Copper leaving the liberator, g/L; not negative.
    arsenic_g_l : array_like, broadcast with S
        Arsenic there, g/L; not negative.

    Returns
    -------
    ndarray of bool, broadcast shape
        True where copper is below `LOW_COPPER_G_L` and arsenic is present or unknown, and where
        copper is unknown while arsenic is present: what is not known is not safe.

    Raises
    ------
    OutOfRange
        If a concentration is negative.

    Source
    ------
    `LOW_COPPER_G_L`; arsine at low copper: US patent 4146447, claims.

    Example
    -------
    >>> low_copper_with_arsenic([0.5, 8.0], 5.0)
    array([ True, False])
    """
    copper = not_negative("copper_g_l", copper_g_l)
    arsenic = not_negative("arsenic_g_l", arsenic_g_l)
    return np.asarray(~(copper >= LOW_COPPER_G_L) & ~(arsenic == 0.0))
