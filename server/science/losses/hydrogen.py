"""Current that makes hydrogen instead of metal."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.electrode.tafel import tafel_current_a_m2
from server.science.errors import UnknownName

# Decimal logarithms of the exchange current density of hydrogen evolution in acid, A/cm2, lowest
# and highest: compilations of Bockris and of Trasatti (from memory). Orders of magnitude only.
LOG_EXCHANGE_A_CM2: dict[str, tuple[float, float]] = {
    "Pt": (-3.0, -3.0),
    "Ni": (-6.0, -5.0),
    "Fe": (-6.0, -6.0),
    "Cu": (-7.0, -7.0),
    "Zn": (-11.0, -10.0),
    "Pb": (-13.0, -12.0),
}
# The same compilations (from memory): V for each decade of current, one electron, alpha one half.
HYDROGEN_SLOPE_V = 0.12


def hydrogen_current_a_m2(
    current_density_a_m2: ArrayLike,
    current_efficiency: ArrayLike,
    other_losses_share: ArrayLike = 0.0,
) -> Numbers:
    """Current density of hydrogen evolution, as what metal and the other losses leave.

    i (1 - CE - other). Only as good as the efficiency. Below zero it is returned as it is: the
    books then contradict each other.

    Parameters
    ----------
    current_density_a_m2 : array_like, shape S
        Current density on the cathode, A/m2; not negative.
    current_efficiency : array_like, broadcast with S
        Share of the current found as metal; not negative.
    other_losses_share : array_like, broadcast with S
        Share of the current lost in shorts, leakage and iron; not negative.

    Returns
    -------
    ndarray, broadcast shape
        Current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is negative.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77: all current makes something.

    Example
    -------
    >>> f"{hydrogen_current_a_m2(500.0, 0.90, 0.03):.0f}"
    '35'
    """
    share = 1.0 - not_negative("current_efficiency", current_efficiency)
    share = share - not_negative("other_losses_share", other_losses_share)
    return np.asarray(not_negative("current_density_a_m2", current_density_a_m2) * share)


def hydrogen_rate_a_m2(
    cathode_potential_v: ArrayLike,
    exchange_a_m2: ArrayLike,
    slope_v: ArrayLike = HYDROGEN_SLOPE_V,
    equilibrium_v: ArrayLike = 0.0,
) -> Numbers:
    """Current density of hydrogen evolution at a cathode potential, by Tafel's law.

    i = i0 10^(eta / b) with eta = equilibrium less cathode potential. Holds from about 0.1 V of
    overpotential upwards; nearer to equilibrium and above it, it overstates the rate. The
    exchange current density is known to an order of magnitude, and impurities move it by more:
    for telling whether hydrogen matters, not for an account.

    Parameters
    ----------
    cathode_potential_v : array_like, shape S
        Potential of the cathode against the standard hydrogen electrode, V.
    exchange_a_m2 : array_like, broadcast with S
        Exchange current density of hydrogen on that metal, A/m2; above zero.
    slope_v : array_like, broadcast with S
        Tafel slope, V for each decade, as a positive number; above zero.
    equilibrium_v : array_like, broadcast with S
        Equilibrium potential of hydrogen in that bath, V; 0 at unit activity and pressure.

    Returns
    -------
    ndarray, broadcast shape
        Current density as a positive number, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the exchange current density or the slope is not above zero.

    Source
    ------
    J. Tafel, Z. phys. Chem. 50 (1905) 641.

    Example
    -------
    On zinc at -0.80 V, with 1e-6.5 A/m2 (1e-10.5 A/cm2).

    >>> f"{hydrogen_rate_a_m2(-0.80, 10**-6.5):.2f}"
    '1.47'
    """
    overpotential = np.asarray(
        finite("equilibrium_v", equilibrium_v) - finite("cathode_potential_v", cathode_potential_v)
    )
    return np.asarray(
        tafel_current_a_m2(
            overpotential,
            above_zero("exchange_a_m2", exchange_a_m2),
            above_zero("slope_v", slope_v),
        )
    )


def hydrogen_exchange_a_m2(symbol: str) -> tuple[float, float]:
    """Least and most that compilations give for hydrogen's exchange current density on a metal.

    From memory, orders of magnitude. Lead, zinc and mercury hold hydrogen back; platinum and
    nickel do not, which is why traces of nickel ruin a zinc deposit.

    Parameters
    ----------
    symbol : str
        Chemical symbol of the metal, capitals or not.

    Returns
    -------
    tuple of float
        Lowest and highest, A/m2.

    Raises
    ------
    UnknownName
        If the metal is not in the table.

    Source
    ------
    J. O'M. Bockris; S. Trasatti, J. Electroanal. Chem. 39 (1972) 163 (values from memory).

    Example
    -------
    >>> low, high = hydrogen_exchange_a_m2("Zn")
    >>> f"{low:.0e} {high:.0e}"
    '1e-07 1e-06'
    """
    known = {name.lower(): logs for name, logs in LOG_EXCHANGE_A_CM2.items()}
    wanted = symbol.strip().lower()
    if wanted not in known:
        raise UnknownName("metal", symbol, LOG_EXCHANGE_A_CM2)
    low, high = known[wanted]
    # One A/cm2 is 10^4 A/m2.
    return 10.0 ** (low + 4.0), 10.0 ** (high + 4.0)
