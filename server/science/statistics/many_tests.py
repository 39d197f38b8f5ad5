"""Many tests at once: which of them mean something, when each alone errs now and then."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, not_negative
from server.science.errors import OutOfRange


@dataclass(frozen=True)
class Findings:
    """Tests that stand together, with the chances adjusted for their number.

    `adjusted` are the p-values to be held against the rate, `found` the tests that stand, in the
    shape of the p-values; a missing test is NaN and not found. `cut_off` is the largest p-value
    that stands, NaN where none does.
    """

    adjusted: Numbers
    found: NDArray[np.bool_]
    cut_off: float


def false_discoveries_held(
    p_values: ArrayLike, rate: float = 0.05, any_dependence: bool = False
) -> Findings:
    """Tests that stand when only a small share of those that stand may be false.

    The step-up procedure of Benjamini and Hochberg: of the cells called out, on average no more
    than the rate are called out by chance. For independent tests, and such as tend to err
    together; `any_dependence` makes it hold for all, at the price of finding less. Missing tests
    are left out and count as not made.

    Parameters
    ----------
    p_values : array_like, any shape
        Chances of each test under nothing being wrong; 0 to 1, NaN where there was no test.
    rate : float
        Share of false ones among those that stand; above 0 and below 1.
    any_dependence : bool
        Use the bound of Benjamini and Yekutieli.

    Returns
    -------
    Findings
        Adjusted p-values and what stands.

    Raises
    ------
    OutOfRange
        If a p-value or the rate lies outside its range.

    Source
    ------
    Y. Benjamini and Y. Hochberg, J. R. Stat. Soc. B 57 (1995) 289; Y. Benjamini and D.
    Yekutieli, Ann. Stat. 29 (2001) 1165.

    Example
    -------
    >>> result = false_discoveries_held([0.001, 0.6, 0.02, float("nan"), 0.03])
    >>> result.adjusted.round(3).tolist()
    [0.004, 0.6, 0.04, nan, 0.04]
    >>> result.found.tolist(), result.cut_off
    ([True, False, True, False, True], 0.03)
    """
    chances, made = _tests(p_values, rate)
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import stats

    adjusted = np.full(chances.shape, np.nan)
    if made.any():
        method = "by" if any_dependence else "bh"
        adjusted[made] = stats.false_discovery_control(chances[made], method=method)
    return _findings(chances, adjusted, rate)


def no_false_one_held(p_values: ArrayLike, rate: float = 0.05) -> Findings:
    """Tests that stand when not a single one of those that stand may be false.

    Holm's step-down procedure: the chance that any test stands wrongly is no more than the rate,
    whatever their dependence. It finds all that Bonferroni's rule finds, and sometimes more. For
    few tests with dear consequences; for a house of cells see `false_discoveries_held`.

    Parameters
    ----------
    p_values : array_like, any shape
        Chances of each test under nothing being wrong; 0 to 1, NaN where there was no test.
    rate : float
        Chance that any test stands wrongly; above 0 and below 1.

    Returns
    -------
    Findings
        Adjusted p-values and what stands.

    Raises
    ------
    OutOfRange
        If a p-value or the rate lies outside its range.

    Source
    ------
    S. Holm, Scand. J. Stat. 6 (1979) 65.

    Example
    -------
    >>> no_false_one_held([0.01, 0.04, 0.03]).adjusted.tolist()
    [0.03, 0.06, 0.06]
    """
    chances, made = _tests(p_values, rate)
    adjusted = np.full(chances.shape, np.nan)
    order = np.argsort(chances[made], kind="stable")
    stepped = np.maximum.accumulate(chances[made][order] * np.arange(order.size, 0, -1))
    inverse = np.empty_like(order)
    inverse[order] = np.arange(order.size)
    adjusted[made] = np.minimum(stepped, 1.0)[inverse]
    return _findings(chances, adjusted, rate)


def _tests(p_values: ArrayLike, rate: float) -> tuple[Numbers, NDArray[np.bool_]]:
    """The p-values as an array, and which of the tests were made."""
    if not 0.0 < rate < 1.0:
        raise OutOfRange("rate", found=rate, allowed="above 0 and below 1")
    chances = not_negative("p_values", p_values)
    if (chances > 1.0).any():
        raise OutOfRange("p_values", found=float(np.nanmax(chances)), allowed="0 to 1")
    return chances, np.isfinite(chances)


def _findings(chances: Numbers, adjusted: Numbers, rate: float) -> Findings:
    """What stands at the rate."""
    found = adjusted <= rate
    cut_off = float(chances[found].max()) if found.any() else math.nan
    return Findings(adjusted=adjusted, found=np.asarray(found), cut_off=cut_off)
