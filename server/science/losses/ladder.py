"""A cell as a ladder of parallel plate pairs, some of them shorted."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import OutOfRange, WrongShape


@dataclass(frozen=True)
class LadderCell:
    """What a ladder of plate pairs does at one cell current; pairs run along the last axis.

    `healthy_volts` is the voltage of the same pairs without shorts. `pair_volts` lies across the
    plates of each pair, behind its contact. `plating_a` may be negative where a hard short pulls
    a pair below its back voltage: the model then has it run backwards, as a discharging battery
    would; in a real cell the deposit there dissolves or the pair stands still.
    """

    current_a: Numbers
    cell_volts: Numbers
    healthy_volts: Numbers
    pair_volts: Numbers
    plating_a: Numbers
    short_a: Numbers

    @property
    def loss_share(self) -> Numbers:
        """Share of the cell's current that the shorts take; NaN without current."""
        with np.errstate(divide="ignore", invalid="ignore"):
            share = self.short_a.sum(axis=-1) / self.current_a
        return np.asarray(np.where(self.current_a > 0.0, share, math.nan))

    @property
    def deviation_v(self) -> Numbers:
        """Cell voltage less the healthy one, V; a short lowers it."""
        return np.asarray(self.cell_volts - self.healthy_volts)

    @property
    def heat_w(self) -> Numbers:
        """Heat in each short, W: its current times the voltage across the plates."""
        return np.asarray(self.short_a * self.pair_volts)

    @property
    def energy_ratio(self) -> Numbers:
        """Energy for each kilogram of metal, over that of the healthy cell.

        1 where nothing is lost and wherever voltage and metal fall together, as in refining.
        """
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = self.cell_volts / self.healthy_volts / (1.0 - self.loss_share)
        return np.asarray(np.where(self.loss_share < 1.0, ratio, math.nan))

    @property
    def runs_backwards(self) -> NDArray[np.bool_]:
        """Tell which pairs the linear model has dissolving their deposit; False for NaN."""
        return np.asarray(self.plating_a < 0.0)


def ladder_cell(
    current_a: ArrayLike,
    back_volts: ArrayLike,
    pair_ohm: ArrayLike,
    short_ohm: ArrayLike = math.inf,
    contact_ohm: ArrayLike = 0.0,
) -> LadderCell:
    """Voltage, pair currents and short currents of a cell with any number of shorts.

    Pair k is a back voltage V0 behind r, its short R beside it, and its contacts c in series
    with both: (u - V0) / r + u / R = (V - u) / c, with V the same for all pairs and the currents
    adding up to the cell's. Each pair with its short and contact is one source behind one
    resistance, so the sum has a closed form and no system has to be solved. Several shorts in
    one pair count as one: their conductances add.

    Linear: V0 and r stand for the curve of current and voltage near the working point, so a
    pair that lost most of its current is described less well. The bars along the cell are taken
    as having no resistance; that of hanger bar and contact point belongs in `contact_ohm`.

    Parameters
    ----------
    current_a : array_like, shape (...)
        Current through the cell, A; not negative.
    back_volts : array_like, broadcast with (..., N)
        Voltage V0 of each pair at no current, by extrapolation, V; zero in refining; not negative.
    pair_ohm : array_like, shape (..., N)
        Differential resistance r of each of the N pairs, ohm; above zero.
    short_ohm : array_like, broadcast with (..., N)
        Resistance of each pair's short, ohm; above zero, infinity where there is none.
    contact_ohm : array_like, broadcast with (..., N)
        Resistance of hanger bar and contacts in series with each pair, ohm; not negative.

    Returns
    -------
    LadderCell
        Arrays of shape (...) for the cell and (..., N) for the pairs. One NaN makes all of that
        cell NaN, since the pairs share its current; other cells stay.

    Raises
    ------
    OutOfRange
        If a current, voltage or contact is negative, or a resistance is not above zero.
    WrongShape
        If the pairs are not in a sequence, or the inputs do not broadcast.

    Source
    ------
    G. Kirchhoff, Ann. Phys. 64 (1845) 497; J. Millman, Proc. IRE 28 (1940) 413 for the sum.

    Example
    -------
    Refining: 50 pairs at 30 kA and 0.300 V, one with a short of 0.25 milliohm.

    >>> shorts = np.full(50, np.inf)
    >>> shorts[7] = 0.25e-3
    >>> cell = ladder_cell(30e3, 0.0, np.full(50, 0.5e-3), shorts)
    >>> f"{cell.cell_volts:.4f} V, {cell.short_a[7]:.0f} A, {100 * cell.loss_share:.2f} %"
    '0.2885 V, 1154 A, 3.85 %'
    """
    amps = not_negative("current_a", current_a)
    short = np.asarray(short_ohm, dtype=np.float64)
    if (short <= 0.0).any():
        raise OutOfRange("short_ohm", found=float(np.nanmin(short)), allowed="above zero")
    back = not_negative("back_volts", back_volts)
    pair = above_zero("pair_ohm", pair_ohm)
    contact = not_negative("contact_ohm", contact_ohm)
    try:
        back, pair, short, contact = np.broadcast_arrays(back, pair, short, contact)
        np.broadcast_shapes(amps.shape, pair.shape[:-1])
    except ValueError as problem:
        raise WrongShape("pair_ohm", np.shape(pair_ohm), "shapes that broadcast") from problem
    if pair.ndim == 0:
        raise WrongShape("pair_ohm", found="a single number", allowed="pairs in a sequence")
    healthy, _ = _shared_volts(amps, back, pair + contact)
    # Thevenin's equivalent of a pair and its short, seen from the contact.
    beside = 1.0 / (1.0 / pair + 1.0 / short)
    source = back / pair * beside
    volts, entering_a = _shared_volts(amps, source, beside + contact)
    across = volts[..., np.newaxis] - entering_a * contact
    amps = np.broadcast_to(amps, volts.shape)
    return LadderCell(
        current_a=amps,
        cell_volts=volts,
        healthy_volts=healthy,
        pair_volts=across,
        plating_a=np.asarray((across - back) / pair),
        short_a=np.asarray(across / short),
    )


def _shared_volts(amps: Numbers, sources: Numbers, ohm: Numbers) -> tuple[Numbers, Numbers]:
    """Voltage that sources behind resistances share at a total current, and each one's current."""
    conductance = 1.0 / ohm
    volts = np.asarray((amps + (sources * conductance).sum(axis=-1)) / conductance.sum(axis=-1))
    return volts, np.asarray((volts[..., np.newaxis] - sources) * conductance)


def ladder_volts(
    current_a: ArrayLike,
    back_volts: ArrayLike,
    pair_ohm: ArrayLike,
    pairs: ArrayLike,
    short_ohm: ArrayLike,
) -> Numbers:
    """Voltage of a cell of equal pairs with one short across its bars.

    V = (I + N V0 / r) / (N / r + 1 / R): the ladder with no contacts, in closed form. The short
    takes V / R.

    Parameters
    ----------
    current_a : array_like, shape S
        Current through the cell, A; not negative.
    back_volts : array_like, broadcast with S
        Voltage V0 of a pair at no current, V; zero in refining; not negative.
    pair_ohm : array_like, broadcast with S
        Differential resistance r of a pair, ohm; above zero.
    pairs : array_like, broadcast with S
        Pairs N in the cell; above zero.
    short_ohm : array_like, broadcast with S
        Resistance R of the short, ohm; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Cell voltage, V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current or voltage is negative, or a resistance or number not above zero.

    Source
    ------
    J. Millman, Proc. IRE 28 (1940) 413.

    Example
    -------
    Winning: 50 pairs at 30 kA, 1.5 V behind 0.8333 milliohm, a short of 2 milliohm.

    >>> f"{ladder_volts(30e3, 1.5, 0.8333333e-3, 50, 2e-3):.4f}"
    '1.9835'
    """
    conductance = above_zero("pairs", pairs) / above_zero("pair_ohm", pair_ohm)
    driven = not_negative("current_a", current_a) + not_negative("back_volts", back_volts) * (
        conductance
    )
    return np.asarray(driven / (conductance + 1.0 / above_zero("short_ohm", short_ohm)))


def ladder_short_ohm(
    cell_volts: ArrayLike,
    current_a: ArrayLike,
    back_volts: ArrayLike,
    pair_ohm: ArrayLike,
    pairs: ArrayLike,
) -> Numbers:
    """Resistance of the one short that gives a cell of equal pairs its voltage.

    `ladder_volts` the other way round: what the pairs do not carry, I - N (V - V0) / r, goes
    through the short.

    Parameters
    ----------
    cell_volts : array_like, shape S
        Measured voltage of the cell, V.
    current_a : array_like, broadcast with S
        Current through the cell, A; not negative.
    back_volts : array_like, broadcast with S
        Voltage V0 of a pair at no current, V; not negative.
    pair_ohm : array_like, broadcast with S
        Differential resistance r of a pair, ohm; above zero.
    pairs : array_like, broadcast with S
        Pairs N in the cell; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Resistance, ohm. NaN where an input is NaN, and where the voltage is the healthy one or
        above it, so that no short explains it.

    Raises
    ------
    OutOfRange
        If a current or voltage V0 is negative, or a resistance or number not above zero.

    Source
    ------
    `ladder_volts`, solved for the short.

    Example
    -------
    >>> f"{1000 * ladder_short_ohm(1.98347, 30e3, 1.5, 0.8333333e-3, 50):.3f}"
    '2.000'
    """
    volts = finite("cell_volts", cell_volts)
    conductance = above_zero("pairs", pairs) / above_zero("pair_ohm", pair_ohm)
    carried = (volts - not_negative("back_volts", back_volts)) * conductance
    short_a = not_negative("current_a", current_a) - carried
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(np.where(short_a > 0.0, volts / short_a, math.nan))
