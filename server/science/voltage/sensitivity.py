"""How the terms of a cell voltage and their sum answer to current, heat, composition and gap."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.electrolyte.conductivity import Conductivity
from server.science.equilibrium.tables import DEFAULT_TABLE, PotentialTable
from server.science.voltage.drops import electrolyte_drop_v
from server.science.voltage.models import CellModel
from server.science.voltage.terms import VoltageTerms, bath_conductivity_s_m, cell_terms

# Ours: steps of the central differences. Their square is far below, and the rounding of a voltage
# over them far from, the digits that anyone could measure.
TEMPERATURE_STEP_K = 0.01
# Ours: the same for current density and concentrations, as a share of the value.
STEP_SHARE = 1e-5


@dataclass(frozen=True)
class TermSlopes:
    """Derivatives of the terms of a cell voltage by one input, V per unit of the input."""

    reversible: Numbers
    anode: Numbers
    cathode: Numbers
    electrolyte: Numbers
    contacts: Numbers

    @property
    def total(self) -> Numbers:
        """Give the derivative of the whole voltage."""
        return np.asarray(
            self.reversible + self.anode + self.cathode + self.electrolyte + self.contacts
        )


@dataclass(frozen=True)
class Sensitivities:
    """Derivatives of the terms by each input, all else held.

    By current density in ohm m2, by temperature in V/K, by metal and by acid in V per g/L, by gap
    in V/m.
    """

    current_density_ohm_m2: TermSlopes
    temperature_v_k: TermSlopes
    metal_v_per_g_l: TermSlopes
    acid_v_per_g_l: TermSlopes
    gap_v_m: TermSlopes


def sensitivities(
    model: CellModel,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    limiting_a_m2: ArrayLike | None = None,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> Sensitivities:
    """Derivatives of the terms of a cell voltage by everything a plant can turn.

    By current density and gap from the formulas; by temperature, metal and acid, and for a cathode
    near its limit by current too, from central differences (`TEMPERATURE_STEP_K`, `STEP_SHARE`).
    More acid makes the solution conduct, and the reversible voltage rise: in acid baths the first
    wins. That the electrodes' part of the change with temperature is small is an assumption of
    the models, see `UsualPoint`.

    Parameters
    ----------
    model : CellModel
        The kind of cell.
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2; not negative.
    temperature_k : array_like, broadcast with S
        Temperature of the electrolyte, K; above zero.
    metal_g_l : array_like, broadcast with S
        Metal in solution, g/L; above zero.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid at the anode, g/L; above zero.
    gap_m : array_like, broadcast with S
        Distance between the faces of anode and cathode, m; not negative.
    conductivity : Conductivity, optional
        The plant's own; the correlation that the model names where not given.
    table : PotentialTable
        Where the standard potentials are taken from.
    limiting_a_m2 : array_like, broadcast with S, optional
        Limiting current density of the cathode, A/m2; above the current.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L, that the correlation of conductivity has terms for.

    Returns
    -------
    Sensitivities
        Arrays of the broadcast shape. NaN as in `cell_terms`.

    Raises
    ------
    UnknownName
        As `cell_terms`.
    OutOfRange
        As `cell_terms`.

    Source
    ------
    Derivatives of the formulas of `cell_terms`, worked out here.

    Example
    -------
    Copper: what 10 A/m2, 1 K, 10 g/L of acid and 1 mm do, in mV.

    >>> from server.science.voltage.cells import cell_model
    >>> copper = cell_model("copper electrowinning")
    >>> slopes = sensitivities(copper, 300.0, 318.15, 40.0, 180.0, 0.040)
    >>> moved = (
    ...     10e3 * slopes.current_density_ohm_m2.total,
    ...     1e3 * slopes.temperature_v_k.total,
    ...     10e3 * slopes.acid_v_per_g_l.total,
    ...     slopes.gap_v_m.total,
    ... )
    >>> [f"{millivolts:.1f}" for millivolts in moved]
    ['15.9', '-2.1', '-6.6', '5.1']
    """
    current = finite("current_density_a_m2", current_density_a_m2)
    kelvin = above_zero("temperature_k", temperature_k)
    metal, acid = above_zero("metal_g_l", metal_g_l), above_zero("acid_g_l", acid_g_l)

    def terms(
        at_k: Numbers = kelvin,
        metal_there: Numbers = metal,
        acid_there: Numbers = acid,
    ) -> VoltageTerms:
        return cell_terms(
            model,
            current,
            at_k,
            metal_there,
            acid_there,
            gap_m,
            conductivity,
            table,
            limiting_a_m2=limiting_a_m2,
            others_g_l=others_g_l,
        )

    by_gap = electrolyte_drop_v(
        current, 1.0, bath_conductivity_s_m(model, metal, acid, kelvin, conductivity, others_g_l)
    )
    by_current = current_slopes(
        model,
        current,
        kelvin,
        metal,
        acid,
        gap_m,
        conductivity,
        limiting_a_m2=limiting_a_m2,
        others_g_l=others_g_l,
    )
    shape = by_current.total.shape
    none = np.zeros(shape)
    return Sensitivities(
        by_current,
        _difference(lambda moved: terms(at_k=moved), kelvin, np.asarray(TEMPERATURE_STEP_K)),
        _difference(lambda moved: terms(metal_there=moved), metal, STEP_SHARE * metal),
        _difference(lambda moved: terms(acid_there=moved), acid, STEP_SHARE * acid),
        TermSlopes(none, none, none, np.broadcast_to(by_gap, shape), none),
    )


def current_slopes(
    model: CellModel,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
    *,
    limiting_a_m2: ArrayLike | None = None,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> TermSlopes:
    """Derivatives of the terms of a cell voltage by current density alone.

    The first part of `sensitivities`, for those who need no other: the differential resistance
    of a square metre. No table of potentials enters.

    Parameters
    ----------
    model : CellModel
        The kind of cell.
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2; not negative.
    temperature_k : array_like, broadcast with S
        Temperature of the electrolyte, K; above zero.
    metal_g_l : array_like, broadcast with S
        Metal in solution, g/L; not negative.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid at the anode, g/L; not negative.
    gap_m : array_like, broadcast with S
        Distance between the faces of anode and cathode, m; not negative.
    conductivity : Conductivity, optional
        The plant's own; the correlation that the model names where not given.
    limiting_a_m2 : array_like, broadcast with S, optional
        Limiting current density of the cathode, A/m2; above the current.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L, that the correlation of conductivity has terms for.

    Returns
    -------
    TermSlopes
        Arrays of the broadcast shape, ohm m2. NaN where an input is NaN; electrodes also where no
        current flows.

    Raises
    ------
    UnknownName
        As `cell_terms`.
    OutOfRange
        As `cell_terms`.

    Source
    ------
    Derivatives of the formulas of `cell_terms`, worked out here.

    Example
    -------
    >>> from server.science.voltage.cells import cell_model
    >>> zinc = cell_model("zinc electrowinning")
    >>> slopes = current_slopes(zinc, 500.0, 311.15, 60.0, 170.0, 0.035)
    >>> f"{slopes.total * 1e3:.2f}"
    '1.25'
    """
    current = not_negative("current_density_a_m2", current_density_a_m2)
    # An electrode without current has no slope to state, as it has no cost.
    flowing = np.where(current > 0.0, current, np.nan)
    if limiting_a_m2 is None:
        cathode = model.cathode.differential_ohm_m2(flowing, temperature_k)
    else:
        step = STEP_SHARE * flowing
        above, below = (
            model.cathode.overpotential_v(end, temperature_k, limiting_a_m2)
            for end in (flowing + step, flowing - step)
        )
        cathode = np.asarray((above - below) / (2.0 * step))
    bath = bath_conductivity_s_m(
        model, metal_g_l, acid_g_l, temperature_k, conductivity, others_g_l
    )
    slopes = (
        np.zeros(()),
        model.anode.differential_ohm_m2(flowing, temperature_k),
        cathode,
        # What one ampere per square metre costs, it costs each time.
        electrolyte_drop_v(1.0, gap_m, bath) + model.separator_ohm_m2.value,
        np.asarray(model.contact_ohm_m2.value),
    )
    return TermSlopes(*np.broadcast_arrays(*slopes))


def _difference(
    terms: Callable[[Numbers], VoltageTerms], centre: Numbers, step: Numbers
) -> TermSlopes:
    """Derivatives of all terms from the two sides of a value."""
    above, below = (list(terms(end).stated().values()) for end in (centre + step, centre - step))
    return TermSlopes(
        *((high - low) / (2.0 * step) for high, low in zip(above, below, strict=True))
    )
