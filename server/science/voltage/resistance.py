"""Differential resistance of a cell from its terms, from what is usual, and from two opinions."""

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.electrolyte.conductivity import Conductivity
from server.science.processes import Process
from server.science.uncertainty.propagation import combined
from server.science.voltage.doubt import MEASURED, doubt_parts
from server.science.voltage.models import CellModel
from server.science.voltage.sensitivity import current_slopes
from server.science.voltage.terms import cell_terms


@dataclass(frozen=True)
class Resistance:
    """A differential resistance with its standard uncertainty, ohm, for any number of cells."""

    ohm: Numbers
    standard_uncertainty_ohm: Numbers


def differential_resistance(
    model: CellModel,
    cathode_area_m2: ArrayLike,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
    *,
    measured_u: Mapping[str, ArrayLike] | None = None,
) -> Resistance:
    """Differential resistance of a cell, from the terms of its voltage.

    What one ampere more costs: electrolyte and contacts in full, the electrodes by the slopes of
    their curves, over the plated area. It says how a reading moves with the current and how
    strong a short is that lowers it; over the current it is not voltage over current.

    Parameters
    ----------
    model : CellModel
        The kind of cell.
    cathode_area_m2 : array_like, broadcast with S
        Plated area of the whole cell, both faces of all cathodes, m2; above zero.
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
    measured_u : mapping of str to array_like, optional
        Standard uncertainties of the five inputs after the area, by their names.

    Returns
    -------
    Resistance
        Arrays of the broadcast shape, with the doubt of the model's values and of the measured
        inputs; the area is taken as exact. NaN where an input is NaN or no current flows.

    Raises
    ------
    UnknownName
        As `cell_terms_with_doubt`.
    OutOfRange
        If the area is not above zero; else as `cell_terms_with_doubt`.

    Source
    ------
    Derivative of the sum of `cell_terms`; JCGM 100:2008, 5.1.2, eq. (10).

    Example
    -------
    A copper cell of 100 m2 at 30 kA.

    >>> from server.science.voltage.cells import cell_model
    >>> copper = cell_model("copper electrowinning")
    >>> found = differential_resistance(copper, 100.0, 300.0, 318.15, 40.0, 180.0, 0.040)
    >>> f"{found.ohm * 1e6:.1f}, u {found.standard_uncertainty_ohm * 1e6:.1f}"
    '15.9, u 2.5'
    """
    area = above_zero("cathode_area_m2", cathode_area_m2)

    def worked_out(tried: CellModel, given: Mapping[str, ArrayLike], factor: ArrayLike) -> Numbers:
        amps_m2, kelvin, metal, acid, gap = (given[name] for name in MEASURED)
        slope = current_slopes(tried, amps_m2, kelvin, metal, acid, gap, conductivity)
        # A factor on the conductivity divides the electrolyte's part, its bag or diaphragm apart.
        bath = slope.electrolyte - tried.separator_ohm_m2.value
        return np.asarray(slope.total + bath * (1.0 / np.asarray(factor) - 1.0))

    values = (current_density_a_m2, temperature_k, metal_g_l, acid_g_l, gap_m)
    inputs = dict(zip(MEASURED, values, strict=True))
    middle = worked_out(model, inputs, 1.0)
    parts = doubt_parts(worked_out, model, inputs, conductivity, measured_u)
    matrix = np.stack([np.broadcast_to(np.abs(part), middle.shape) for part in parts.values()])
    return Resistance(
        np.asarray(middle / area), np.asarray(combined(np.ones_like(matrix), matrix) / area)
    )


def resistive_share(
    model: CellModel,
    current_density_a_m2: ArrayLike,
    temperature_k: ArrayLike,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    gap_m: ArrayLike,
    conductivity: Conductivity | None = None,
) -> Numbers:
    """Share of a cell's voltage that follows its current, from the terms.

    R_d I / V. It is about a fifth in copper winning and nine tenths in refining; a process states
    what is usual, this is what the terms say for the conditions at hand.

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

    Returns
    -------
    ndarray, broadcast shape
        Share, from 0 to 1. NaN where an input is NaN or no current flows.

    Raises
    ------
    OutOfRange
        As `cell_terms`.

    Source
    ------
    Derivative of the sum of `cell_terms`.

    Example
    -------
    >>> from server.science.voltage.cells import cell_model
    >>> copper = cell_model("copper electrorefining")
    >>> f"{resistive_share(copper, 250.0, 333.15, 45.0, 180.0, 0.035):.2f}"
    '0.86'
    """
    conditions = current_density_a_m2, temperature_k, metal_g_l, acid_g_l, gap_m
    slope = current_slopes(model, *conditions, conductivity).total
    volts = cell_terms(model, *conditions, conductivity).total_v
    return np.asarray(slope * finite("current_density_a_m2", current_density_a_m2) / volts)


def shrunk_resistance(
    ohm: ArrayLike,
    standard_uncertainty_ohm: ArrayLike,
    prior_ohm: ArrayLike,
    prior_standard_uncertainty_ohm: ArrayLike,
) -> Resistance:
    """Resistance from a cell's own readings and from what was believed before, weighed together.

    Each counts with the inverse square of its uncertainty, so that a cell with few readings
    keeps near the usual figure and one with many its own. The two must not rest on the same
    readings. Where the readings give nothing the prior stands.

    Parameters
    ----------
    ohm : array_like, shape S
        Resistance from readings, ohm; NaN where they give none.
    standard_uncertainty_ohm : array_like, broadcast with S
        Its standard uncertainty, ohm; above zero, NaN where there is none.
    prior_ohm : array_like, broadcast with S
        Resistance believed before, ohm.
    prior_standard_uncertainty_ohm : array_like, broadcast with S
        Its standard uncertainty, ohm; above zero.

    Returns
    -------
    Resistance
        Arrays of the broadcast shape. NaN where the prior is.

    Raises
    ------
    OutOfRange
        If a number is infinite or an uncertainty not above zero.

    Source
    ------
    Weighted mean of two normal estimates; Bayes' theorem with a normal prior.

    Example
    -------
    >>> both = shrunk_resistance(15e-6, 1e-6, 13e-6, 2e-6)
    >>> f"{both.ohm * 1e6:.1f}, u {both.standard_uncertainty_ohm * 1e6:.2f}"
    '14.6, u 0.89'
    """
    own, own_u = (
        finite("ohm", ohm),
        above_zero("standard_uncertainty_ohm", standard_uncertainty_ohm),
    )
    prior = finite("prior_ohm", prior_ohm)
    prior_u = above_zero("prior_standard_uncertainty_ohm", prior_standard_uncertainty_ohm)
    silent = np.isnan(own) | np.isnan(own_u)
    # Shares rather than inverse squares, which a resistance of a microohm would make enormous.
    share = np.where(silent, 0.0, prior_u**2 / (prior_u**2 + np.where(silent, 1.0, own_u) ** 2))
    blended = prior + share * (np.where(silent, prior, own) - prior)
    both_u = prior_u * np.where(silent, 1.0, own_u / np.hypot(own_u, prior_u))
    return Resistance(np.asarray(blended), np.asarray(both_u))


def typical_resistance(process: Process, volts: ArrayLike, amps: ArrayLike) -> Resistance:
    """Differential resistance that is usual for a process, before any reading says better.

    The share of the cell voltage that follows the current, times voltage over current.

    Parameters
    ----------
    process : Process
        The process, with its resistive share and the half-width of the band around it.
    volts : array_like, shape S
        Usual cell voltage, V; above zero.
    amps : array_like, broadcast with S
        Current that goes with it, A; above zero.

    Returns
    -------
    Resistance
        Arrays of the broadcast shape; the uncertainty is the half-width over the root of three.
        NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a voltage or current is not above zero.

    Source
    ------
    Common practice; see the shares in `server.science.processes`.

    Example
    -------
    >>> from server.science.processes import process
    >>> usual = typical_resistance(process("copper electrowinning"), 2.0, 30e3)
    >>> f"{usual.ohm * 1e6:.1f}, u {usual.standard_uncertainty_ohm * 1e6:.1f}"
    '13.3, u 3.8'
    """
    whole = above_zero("volts", volts) / above_zero("amps", amps)
    doubt = process.resistive_share_half_width / math.sqrt(3.0)
    return Resistance(np.asarray(process.resistive_share * whole), np.asarray(doubt * whole))
