"""Tafel's law: overpotential and the logarithm of the current, far from equilibrium."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.errors import WrongShape


@dataclass(frozen=True)
class TafelLine:
    """A straight line through a polarisation curve, with the standard errors of the fit.

    The exchange current is where the line meets zero overpotential, far from the points, so its
    error is a factor: `exchange_u_decades` is the standard error of its base-10 logarithm.
    """

    slope_v: float
    slope_u_v: float
    exchange_a_m2: float
    exchange_u_decades: float


def tafel_slope_v(
    transfer: ArrayLike, temperature_k: ArrayLike, electrons: ArrayLike = 1
) -> Numbers:
    """Volts that a tenfold current costs, from the transfer coefficient.

    b = ln(10) R T / (a n F). Leave `electrons` at 1 for an apparent transfer coefficient, which
    already counts the electrons, as Butler-Volmer here takes it; texts that write a z F set both.

    Parameters
    ----------
    transfer : array_like, shape S
        Transfer coefficient of the driven direction; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    electrons : array_like, broadcast with S
        Electrons that the coefficient does not yet count; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Tafel slope, V per decade. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    J. Tafel, Z. Phys. Chem. 50 (1905) 641; the slope as in the IUPAC recommendation of Guidelli
    and others, Pure Appl. Chem. 86 (2014) 245.

    Example
    -------
    >>> f"{tafel_slope_v(0.5, 298.15):.4f}"
    '0.1183'
    """
    counted = above_zero("transfer", transfer) * above_zero("electrons", electrons)
    kelvin = above_zero("temperature_k", temperature_k)
    return np.asarray(math.log(10.0) * GAS_CONSTANT_J_MOL_K * kelvin / (counted * FARADAY_C_MOL))


def transfer_from_slope(
    slope_v: ArrayLike, temperature_k: ArrayLike, electrons: ArrayLike = 1
) -> Numbers:
    """Transfer coefficient behind a measured Tafel slope; undoes `tafel_slope_v`.

    a = ln(10) R T / (b n F).

    Parameters
    ----------
    slope_v : array_like, shape S
        Tafel slope, V per decade; above zero.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    electrons : array_like, broadcast with S
        Electrons that the coefficient is not to count; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Transfer coefficient. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    As `tafel_slope_v`.

    Example
    -------
    >>> f"{transfer_from_slope(0.120, 298.15):.3f}"
    '0.493'
    """
    # The two stand in the same place of the law, so either is had from the other.
    return tafel_slope_v(above_zero("slope_v", slope_v), temperature_k, electrons)


def tafel_overpotential_v(
    current_a_m2: ArrayLike, exchange_a_m2: ArrayLike, slope_v: ArrayLike
) -> Numbers:
    """Overpotential that a current density costs by Tafel's law.

    eta = b log10(i / i0), for anode and cathode alike as a positive cost. It leaves the reverse
    reaction out, which is fair well above the exchange current: `back_reaction_share` says how
    fair. Near or below it the result falls to zero and below, as the formula has it, and is of no
    use; no current at all has no overpotential by this law.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Current density in the driven direction, A/m2; not negative.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    slope_v : array_like, broadcast with S
        Tafel slope, V per decade; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Overpotential, V. NaN where an input is NaN or no current flows.

    Raises
    ------
    OutOfRange
        If a current is negative or another input not above zero.

    Source
    ------
    J. Tafel, Z. Phys. Chem. 50 (1905) 641.

    Example
    -------
    >>> f"{tafel_overpotential_v(300.0, 1.0, 0.118):.4f}"
    '0.2923'
    """
    current = not_negative("current_a_m2", current_a_m2)
    flowing = np.where(current > 0.0, current, np.nan)
    # Two logarithms, because the ratio of a large to a tiny current may exceed the largest float.
    decades = np.log10(flowing) - np.log10(above_zero("exchange_a_m2", exchange_a_m2))
    return np.asarray(above_zero("slope_v", slope_v) * decades)


def tafel_current_a_m2(
    overpotential_v: ArrayLike, exchange_a_m2: ArrayLike, slope_v: ArrayLike
) -> Numbers:
    """Current density that an overpotential drives by Tafel's law.

    i = i0 10^(eta / b), with the limits of `tafel_overpotential_v`.

    Parameters
    ----------
    overpotential_v : array_like, shape S
        Overpotential in the driven direction, V.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density i0, A/m2; above zero.
    slope_v : array_like, broadcast with S
        Tafel slope, V per decade; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero, or the current exceeds the largest float.

    Source
    ------
    J. Tafel, Z. Phys. Chem. 50 (1905) 641.

    Example
    -------
    >>> f"{tafel_current_a_m2(0.236, 1.0, 0.118):.0f}"
    '100'
    """
    decades = finite("overpotential_v", overpotential_v) / above_zero("slope_v", slope_v)
    # A current beyond the largest float is refused below, by name, instead of warned of here.
    with np.errstate(over="ignore"):
        current = above_zero("exchange_a_m2", exchange_a_m2) * 10.0**decades
    return finite("current_a_m2", current)


def tafel_exchange_a_m2(
    current_a_m2: ArrayLike, overpotential_v: ArrayLike, slope_v: ArrayLike
) -> Numbers:
    """Exchange current density for which a known point lies on a Tafel line.

    i0 = i / 10^(eta / b). For fitting a stated overpotential, such as a maker's anode potential at
    one current density.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Current density at the known point, A/m2; above zero.
    overpotential_v : array_like, broadcast with S
        Overpotential at the known point, V.
    slope_v : array_like, broadcast with S
        Tafel slope, V per decade; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Exchange current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is infinite or not above zero, or the result exceeds the largest float.

    Source
    ------
    J. Tafel, Z. Phys. Chem. 50 (1905) 641.

    Example
    -------
    >>> f"{tafel_exchange_a_m2(300.0, 0.6478, 0.100):.1e}"
    '1.0e-04'
    """
    overpotential = finite("overpotential_v", overpotential_v)
    return tafel_current_a_m2(-overpotential, above_zero("current_a_m2", current_a_m2), slope_v)


def tafel_line(overpotential_v: ArrayLike, current_a_m2: ArrayLike) -> TafelLine:
    """Tafel slope and exchange current from a measured polarisation curve.

    Least squares of log10 i on the overpotential, which the instrument sets and so is the surer
    of the two. Hand over only points well away from equilibrium and well below the limiting
    current; both bend the curve, and the line takes no notice of it.

    Parameters
    ----------
    overpotential_v : array_like, shape (N,)
        Overpotentials in the driven direction, V.
    current_a_m2 : array_like, shape (N,)
        Current densities at them, A/m2; above zero.

    Returns
    -------
    TafelLine
        Slope, exchange current density and their standard errors. Points with a NaN are left
        out.

    Raises
    ------
    OutOfRange
        If a current is not above zero.
    WrongShape
        If the two do not have the same length, or fewer than three different overpotentials
        have a current.

    Source
    ------
    J. Tafel, Z. Phys. Chem. 50 (1905) 641; fit as `scipy.stats.linregress`.

    Example
    -------
    Ferrous ions oxidised on platinum, 100 to 250 mV.

    >>> line = tafel_line([0.10, 0.15, 0.20, 0.25], [125.0, 290.0, 655.0, 1490.0])
    >>> f"{line.slope_v:.3f} V, {line.exchange_a_m2:.1f} A/m2"
    '0.140 V, 24.2 A/m2'
    """
    overpotential = finite("overpotential_v", overpotential_v)
    current = above_zero("current_a_m2", current_a_m2)
    if overpotential.shape != current.shape or overpotential.ndim != 1:
        raise WrongShape("current_a_m2", found=current.shape, allowed=f"{overpotential.shape}")
    known = ~np.isnan(overpotential + current)
    if np.unique(overpotential[known]).size < 3:
        raise WrongShape(
            "overpotential_v", found=overpotential[known].tolist(), allowed="3 or more"
        )
    # Loaded here: it takes a good part of the time in which a command starts.
    from scipy import stats

    fit = stats.linregress(overpotential[known], np.log10(current[known]))
    return TafelLine(
        slope_v=float(1.0 / fit.slope),
        slope_u_v=float(fit.stderr / fit.slope**2),
        exchange_a_m2=float(10.0**fit.intercept),
        exchange_u_decades=float(fit.intercept_stderr),
    )
