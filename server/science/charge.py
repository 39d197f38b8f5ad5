"""Charge from a record of current or of a counter."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.errors import OutOfRange

Numbers = NDArray[np.float64]
Codes = NDArray[np.int64]

# House rule: where a stretch of charge comes from.
MEASURED, ESTIMATED, UNRECORDED = 0, 1, 2
"""What a stretch of current rests on: a sample, the samples beside a gap, or nothing."""

_AS_GOOD_AS_EQUAL = 0.2
"""Relative difference between counter and samples beyond which another counter is assumed.

Two honest instruments of a rectifier agree to a few per cent (common practice); a counter that was
exchanged shows any number.
"""


def held_current(
    at_s: ArrayLike, amps: ArrayLike, max_hold_s: float
) -> tuple[Numbers, Numbers, Codes]:
    """The current of a section as steps, from samples that hold until the next one.

    A sample holds until the next, but for `max_hold_s` at most. The rest of a longer gap is
    carried with the mean of the samples on either side: the expected charge when the current
    changed at an unknown moment of the gap, each as likely. After the last sample's hold nothing
    is known, and nothing is counted.

    Parameters
    ----------
    at_s : array_like, shape (n,)
        Moments of the samples, s, ascending.
    amps : array_like, shape (n,)
        Current at those moments, A; negative is kept (reversed current makes no metal, but is
        shown).
    max_hold_s : float
        The longest time that a sample holds, s; positive.

    Returns
    -------
    tuple of ndarray, shapes (m,), (m,), (m,)
        Moments at which the current steps, s; the current from there to the next step, A; and
        what it rests on (MEASURED, ESTIMATED, UNRECORDED). The last step is UNRECORDED with 0 A.
        All are empty where there is no sample.

    Raises
    ------
    OutOfRange
        If the moments do not ascend or `max_hold_s` is not positive.

    Source
    ------
    Common practice: a logged current is read as a staircase.

    Example
    -------
    Samples at 0, 1 and 5 h; two hours are held, two are estimated.

    >>> edge_s, step, basis = held_current([0, 3600, 18000], [100.0, 80.0, 60.0], 7200)
    >>> (edge_s / 3600).tolist(), step.tolist(), basis.tolist()
    ([0.0, 1.0, 3.0, 5.0, 7.0], [100.0, 80.0, 70.0, 60.0, 0.0], [0, 0, 1, 0, 2])
    """
    at_s, amps = np.asarray(at_s, float), np.asarray(amps, float)
    if max_hold_s <= 0:
        raise OutOfRange("max_hold_s", found=max_hold_s, allowed="more than zero")
    if at_s.size == 0:
        return at_s, amps, np.empty(0, np.int64)
    gap_s = np.diff(at_s)
    if np.any(gap_s <= 0):
        raise OutOfRange("at_s", found=float(at_s[1:][gap_s <= 0][0]), allowed="ascending moments")
    is_long = gap_s > max_hold_s
    edge_s = np.concatenate((at_s, at_s[:-1][is_long] + max_hold_s, at_s[-1:] + max_hold_s))
    step = np.concatenate((amps, (amps[:-1][is_long] + amps[1:][is_long]) / 2, [0.0]))
    basis = np.concatenate(
        (
            np.full(at_s.size, MEASURED),
            np.full(int(is_long.sum()), ESTIMATED),
            [UNRECORDED],
        )
    )
    order = np.argsort(edge_s, kind="stable")
    return edge_s[order], step[order], basis[order]


def without_outages(
    edge_s: ArrayLike, amps: ArrayLike, basis: ArrayLike, off_s: ArrayLike
) -> tuple[Numbers, Numbers, Codes]:
    """The same steps with the current at zero while the section was off.

    Parameters
    ----------
    edge_s : array_like, shape (m,)
        Moments at which the current steps, s, ascending.
    amps : array_like, shape (m,)
        Current from each of them on, A.
    basis : array_like, shape (m,)
        What each step rests on.
    off_s : array_like, shape (k, 2)
        Start and end of each outage, s; they may overlap.

    Returns
    -------
    tuple of ndarray, shapes (p,), (p,), (p,)
        Steps, current (0 A in an outage, which counts as MEASURED) and basis. Outside
        the record, before its first step and after its last, nothing is added.

    Raises
    ------
    OutOfRange
        If an outage ends before it begins.

    Source
    ------
    Common practice: the log of an outage is believed over an ammeter's zero.

    Example
    -------
    >>> edge_s, amps, basis = without_outages([0, 100], [10.0, 0.0], [0, 2], [[20, 30]])
    >>> edge_s.tolist(), amps.tolist()
    ([0.0, 20.0, 30.0, 100.0], [10.0, 0.0, 10.0, 0.0])
    """
    edge_s, amps = np.asarray(edge_s, float), np.asarray(amps, float)
    basis = np.asarray(basis, np.int64)
    off_s = np.asarray(off_s, float).reshape(-1, 2)
    if off_s.size == 0 or edge_s.size == 0:
        return edge_s, amps, basis
    if np.any(off_s[:, 1] < off_s[:, 0]):
        wrong = off_s[off_s[:, 1] < off_s[:, 0]][0, 1]
        raise OutOfRange("off_s", found=float(wrong), allowed="an end after its start")
    new_s = np.setdiff1d(off_s.ravel(), edge_s)
    new_s = new_s[(new_s > edge_s[0]) & (new_s < edge_s[-1])]
    source = np.searchsorted(edge_s, new_s, side="right") - 1
    all_s = np.concatenate((edge_s, new_s))
    all_amps = np.concatenate((amps, amps[source]))
    all_basis = np.concatenate((basis, basis[source]))
    order = np.argsort(all_s, kind="stable")
    all_s, all_amps, all_basis = all_s[order], all_amps[order], all_basis[order]
    is_off = np.zeros(all_s.size, bool)
    for start, end in off_s:
        is_off |= (all_s >= start) & (all_s < end)
    all_amps = np.where(is_off, 0.0, all_amps)
    return all_s, all_amps, np.where(is_off & (all_basis == ESTIMATED), MEASURED, all_basis)


def counter_charge_c(
    before_c: ArrayLike, after_c: ArrayLike, sampled_c: ArrayLike
) -> tuple[Numbers, Codes]:
    """Charge between two readings of an ampere-hour counter.

    Where the counter went back, it either rolled over at a power of ten, which is believed when
    the charge then fits the samples, or it was exchanged, and then the samples are all there is.
    A step that is beyond belief beside the samples is taken for an exchange too.

    Parameters
    ----------
    before_c : array_like, shape (n,)
        Counter at the start, C; not negative.
    after_c : array_like, shape (n,)
        Counter at the end, C; not negative.
    sampled_c : array_like, shape (n,)
        Charge that the samples of current give for the same time, C; NaN or 0 where there are
        none.

    Returns
    -------
    tuple of ndarray, shapes (n,), (n,)
        The charge, C, NaN where the counter was exchanged; and 0 for an ordinary step, 1 for a
        roll-over, 2 for an exchange.

    Raises
    ------
    OutOfRange
        If a counter is negative.

    Source
    ------
    Common practice; the counter's modulus is the next power of ten in ampere-hours above its
    last reading.

    Example
    -------
    A counter of six digits of kAh passes 999 999.

    >>> kah = 3.6e6
    >>> charge_c, what = counter_charge_c([999_900 * kah], [100 * kah], [201 * kah])
    >>> (charge_c / kah).round(6).tolist(), what.tolist()
    ([200.0], [1])
    """
    before_c, after_c = np.asarray(before_c, float), np.asarray(after_c, float)
    sampled_c = np.asarray(sampled_c, float)
    for quantity, values in (("before_c", before_c), ("after_c", after_c)):
        if np.any(values < 0):
            raise OutOfRange(quantity, found=float(np.nanmin(values)), allowed="zero or more")
    step_c = after_c - before_c
    with np.errstate(divide="ignore", invalid="ignore"):
        modulus_c = 3600.0 * 10.0 ** np.ceil(np.log10(np.maximum(before_c, 3600.0) / 3600.0))
    has_samples = np.isfinite(sampled_c) & (sampled_c > 0)
    rolled_c = step_c + modulus_c
    allowed_c = _AS_GOOD_AS_EQUAL * np.where(has_samples, sampled_c, np.inf)
    is_roll = (step_c < 0) & has_samples & (np.abs(rolled_c - sampled_c) <= allowed_c)
    is_step = (step_c >= 0) & (~has_samples | (np.abs(step_c - sampled_c) <= allowed_c))
    charge_c = np.where(is_step, step_c, np.where(is_roll, rolled_c, np.nan))
    return charge_c, np.where(is_step, 0, np.where(is_roll, 1, 2))


def charge_between(at_s: ArrayLike, amps: ArrayLike, from_s: float, to_s: float) -> float:
    """Charge of a staircase of current between two moments.

    Parameters
    ----------
    at_s : array_like, shape (n,)
        Moments at which the current steps, s, ascending.
    amps : array_like, shape (n,)
        Current from each of them to the next, A; the last holds on.
    from_s : float
        Start, s.
    to_s : float
        End, s; not before the start.

    Returns
    -------
    float
        Charge, C. Before the first step the current counts as zero. NaN where a step that is
        needed is NaN.

    Raises
    ------
    OutOfRange
        If the end lies before the start.

    Source
    ------
    Definition of charge, Q = integral of I dt.

    Example
    -------
    >>> charge_between([0, 60], [10.0, 20.0], 30, 90)
    900.0
    """
    at_s, amps = np.asarray(at_s, float), np.asarray(amps, float)
    if to_s < from_s:
        raise OutOfRange("to_s", found=to_s, allowed=f"not before {from_s}")
    starts = np.maximum(at_s, from_s)
    ends = np.minimum(np.append(at_s[1:], np.inf), to_s)
    lasts = np.maximum(ends - starts, 0.0)
    return float(np.sum(np.where(lasts > 0, amps * lasts, 0.0)))
