"""How sure the terms of a cell voltage and their sum are, and what that doubt comes from."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.electrolyte.conductivity import CONDUCTIVITIES, Conductivity
from server.science.equilibrium.tables import DEFAULT_TABLE, PotentialTable
from server.science.errors import UnknownName
from server.science.uncertainty.propagation import combined
from server.science.voltage.models import CellModel, stated_values, with_stated
from server.science.voltage.terms import VoltageTerms, cell_terms

# The inputs that a plant measures, in the order of `cell_terms`.
MEASURED = ("current_density_a_m2", "temperature_k", "metal_g_l", "acid_g_l", "gap_m")
# The doubt of the correlation itself, which is a factor on the conductivity.
CONDUCTIVITY = "conductivity"


@dataclass(frozen=True)
class DoubtedTerms:
    """Terms of a cell voltage with their standard uncertainties, V.

    `standard_uncertainties` holds those of the terms. The terms share inputs (the current is in
    four of them), so `total_standard_uncertainty_v` is not the root of their squares. `parts` says
    by name what each input adds to the total's: signed, V, and independent of each other.
    """

    terms: VoltageTerms
    standard_uncertainties: VoltageTerms
    total_standard_uncertainty_v: Numbers
    parts: Mapping[str, Numbers]


def cell_terms_with_doubt(
    model: CellModel,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
    table: PotentialTable = DEFAULT_TABLE,
    *,
    measured_u: Mapping[str, ArrayLike] | None = None,
    limiting_a_m2: ArrayLike | None = None,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> DoubtedTerms:
    """Terms of the voltage of a cell under current, with their standard uncertainties.

    Every value of the model that has a doubt, the correlation of conductivity and every measured
    input that is given one are moved up and down by it in turn, and half the difference is its
    part. First order; the inputs count as independent of each other, the terms do not.

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
    measured_u : mapping of str to array_like, optional
        Standard uncertainties of the five inputs above by their names, in their units; not
        negative, and smaller than a concentration or gap itself. None where not given.
    limiting_a_m2 : array_like, broadcast with S, optional
        Limiting current density of the cathode, A/m2; taken as exact.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L; taken as exact.

    Returns
    -------
    DoubtedTerms
        Arrays of the broadcast shape. NaN where an input or its uncertainty is NaN.

    Raises
    ------
    UnknownName
        If an uncertainty is given for something else than the five inputs; else as `cell_terms`.
    OutOfRange
        As `cell_terms`, at the inputs or at the ends of an uncertainty.

    Source
    ------
    JCGM 100:2008, 5.1.3 note 2 and 5.1.2 eq. (10); terms of shared inputs: H.2.3.

    Example
    -------
    The sum is hardly surer than the bands of its terms.

    >>> from server.science.voltage.cells import cell_model
    >>> copper = cell_model("copper electrowinning")
    >>> found = cell_terms_with_doubt(copper, 300.0, 318.15, 40.0, 180.0, 0.040)
    >>> f"{found.terms.total_v:.2f} V, u {found.total_standard_uncertainty_v:.2f} V"
    '1.93 V, u 0.11 V'
    """

    def worked_out(tried: CellModel, inputs: Mapping[str, ArrayLike], factor: ArrayLike) -> Numbers:
        terms = cell_terms(
            tried,
            **inputs,
            conductivity=conductivity,
            table=table,
            limiting_a_m2=limiting_a_m2,
            others_g_l=others_g_l,
            conductivity_factor=factor,
        )
        return np.stack(list(terms.stated().values()))

    values = (current_density_a_m2, temperature_k, metal_g_l, acid_g_l, gap_m)
    inputs = dict(zip(MEASURED, values, strict=True))
    middle = worked_out(model, inputs, 1.0)
    parts = doubt_parts(worked_out, model, inputs, conductivity, measured_u)
    matrix = np.stack([np.broadcast_to(part, middle.shape) for part in parts.values()])
    doubts = combined(np.ones_like(matrix), np.abs(matrix))
    totals = {name: np.asarray(part.sum(axis=0)) for name, part in parts.items()}
    return DoubtedTerms(
        VoltageTerms(*middle),
        VoltageTerms(*doubts),
        combined(np.ones_like(matrix[:, 0]), np.abs(matrix.sum(axis=1))),
        totals,
    )


def doubt_parts(
    result: Callable[[CellModel, Mapping[str, ArrayLike], ArrayLike], Numbers],
    model: CellModel,
    inputs: Mapping[str, ArrayLike],
    conductivity: Conductivity | None = None,
    measured_u: Mapping[str, ArrayLike] | None = None,
) -> dict[str, Numbers]:
    """What each doubted value of a model and each measured input does to a result.

    Parameters
    ----------
    result : callable
        Takes a model, the inputs by name and a factor on the conductivity; gives an array.
    model : CellModel
        The kind of cell.
    inputs : mapping of str to array_like
        The measured inputs by name.
    conductivity : Conductivity, optional
        The plant's own, for its uncertainty; the correlation that the model names where not given.
    measured_u : mapping of str to array_like, optional
        Standard uncertainties of the inputs, in their units; not negative.

    Returns
    -------
    dict of str to ndarray
        Half the difference of the results with the value moved up and down by its standard
        uncertainty, unit of the result. Values without a doubt are left out.

    Raises
    ------
    UnknownName
        If an uncertainty is given for no input.
    OutOfRange
        If an uncertainty is negative, and what the result refuses.

    Source
    ------
    JCGM 100:2008, 5.1.3 note 2.

    Example
    -------
    >>> from server.science.voltage.cells import cell_model
    >>> parts = doubt_parts(
    ...     lambda tried, inputs, factor: np.asarray(300.0 * tried.contact_ohm_m2.value),
    ...     cell_model("zinc electrowinning"),
    ...     {},
    ... )
    >>> f"{parts['contact_ohm_m2'] * 1000:.1f} mV"
    '8.7 mV'
    """
    parts: dict[str, Numbers] = {}
    for name, stated in stated_values(model):
        doubt = stated.standard_uncertainty
        if doubt > 0.0:
            ends = [
                with_stated(model, name, replace(stated, value=stated.value + moved))
                for moved in (doubt, -doubt)
            ]
            parts[name] = _half(*(result(end, inputs, 1.0) for end in ends))
    bath = CONDUCTIVITIES[model.conductivity_of] if conductivity is None else conductivity
    if bath.u_share > 0.0:
        factors = 1.0 + bath.u_share, 1.0 - bath.u_share
        parts[CONDUCTIVITY] = _half(*(result(model, inputs, factor) for factor in factors))
    for name, given in (measured_u or {}).items():
        if name not in inputs:
            raise UnknownName("measured input", name, inputs)
        doubts = not_negative(f"standard uncertainty of {name}", given)
        moved_inputs = [{**inputs, name: np.add(inputs[name], by)} for by in (doubts, -doubts)]
        parts[name] = _half(*(result(model, moved, 1.0) for moved in moved_inputs))
    return parts


def _half(above: Numbers, below: Numbers) -> Numbers:
    """Half the difference of two results."""
    return np.asarray((above - below) / 2.0)
