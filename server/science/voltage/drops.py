"""Voltage that the current takes in passing electrolyte, contacts and bars."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative

# International Annealed Copper Standard: 58 m/(ohm mm2) at 20 degC, looked up in a table of the
# Industrial Power Engineering and Applications Handbook, p. 970.
ANNEALED_COPPER_OHM_M = 1.0 / 58.0e6
# The same table: temperature coefficient of the resistance at 20 degC.
ANNEALED_COPPER_PER_K = 0.00393
# The same table: the temperature to which both belong, 20 degC.
ANNEALED_COPPER_K = 293.15


def electrolyte_drop_v(
    current_density_a_m2: ArrayLike, gap_m: ArrayLike, conductivity_s_m: ArrayLike
) -> Numbers:
    """Voltage across the electrolyte between two plates.

    j d / kappa, for a current that crosses straight from face to face. Gas in the gap lowers the
    conductivity, see `bruggeman_s_m`; give the lowered one.

    Parameters
    ----------
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2.
    gap_m : array_like, broadcast with S
        Distance between the faces of anode and cathode, m; not negative. Not the spacing of the
        bars: half the pitch of the cathodes less half of either thickness.
    conductivity_s_m : array_like, broadcast with S
        Conductivity of what is in the gap, S/m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is infinite, a gap negative or a conductivity not above zero.

    Source
    ------
    G. S. Ohm, Die galvanische Kette (1827).

    Example
    -------
    >>> f"{electrolyte_drop_v(300.0, 0.040, 60.0):.3f}"
    '0.200'
    """
    current = finite("current_density_a_m2", current_density_a_m2)
    gap = not_negative("gap_m", gap_m)
    return np.asarray(current * gap / above_zero("conductivity_s_m", conductivity_s_m))


def contact_drop_v(current_density_a_m2: ArrayLike, contact_ohm_m2: ArrayLike) -> Numbers:
    """Voltage in contacts, hanger bars and plates of a cell.

    j r, with the resistance written for a square metre of cathode, so that cells of any size
    compare: the resistance of one cathode's way from bar to bar times its plated area.

    Parameters
    ----------
    current_density_a_m2 : array_like, shape S
        Current over the plated area, A/m2.
    contact_ohm_m2 : array_like, broadcast with S
        Resistance times plated area, ohm m2; not negative.

    Returns
    -------
    ndarray, broadcast shape
        V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is infinite or a resistance negative.

    Source
    ------
    G. S. Ohm, Die galvanische Kette (1827).

    Example
    -------
    A contact of 50 microohm to a cathode of 2 m2.

    >>> f"{contact_drop_v(300.0, 50e-6 * 2.0):.3f}"
    '0.030'
    """
    current = finite("current_density_a_m2", current_density_a_m2)
    return np.asarray(current * not_negative("contact_ohm_m2", contact_ohm_m2))


def bar_drop_v(
    amps: ArrayLike,
    length_m: ArrayLike,
    section_m2: ArrayLike,
    temperature_k: ArrayLike = ANNEALED_COPPER_K,
    share_of_annealed: ArrayLike = 1.0,
) -> Numbers:
    """Voltage along a copper bar that carries its current from end to end.

    I rho L / A, with the resistivity of annealed copper rising in a straight line with
    temperature. A bar that gathers its current evenly along its length takes half of it. Joints
    are not in it.

    Parameters
    ----------
    amps : array_like, shape S
        Current in the bar, A.
    length_m : array_like, broadcast with S
        Length, m; not negative.
    section_m2 : array_like, broadcast with S
        Cross-section, m2; above zero.
    temperature_k : array_like, broadcast with S
        Temperature of the bar, K; above zero. Good from -10 to 100 degC.
    share_of_annealed : array_like, broadcast with S
        Conductivity of the bar as a share of annealed copper's; above zero. Rolled bar has 0.97
        and more, aluminium about 0.6.

    Returns
    -------
    ndarray, broadcast shape
        V. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is infinite, a length negative or another input not above zero.

    Source
    ------
    International Annealed Copper Standard, as in the Industrial Power Engineering and Applications
    Handbook, p. 970; the straight line: J. H. Dellinger, Bull. Bur. Stand. 7 (1911) 71.

    Example
    -------
    30 kA over 10 m of a bar of 200 by 150 mm, at 60 degC.

    >>> f"{bar_drop_v(30e3, 10.0, 0.200 * 0.150, 333.15):.3f}"
    '0.200'
    """
    warmer_k = above_zero("temperature_k", temperature_k) - ANNEALED_COPPER_K
    resistivity = ANNEALED_COPPER_OHM_M * (1.0 + ANNEALED_COPPER_PER_K * warmer_k)
    length = not_negative("length_m", length_m)
    conducting = above_zero("section_m2", section_m2) * above_zero(
        "share_of_annealed", share_of_annealed
    )
    return np.asarray(finite("amps", amps) * resistivity * length / conducting)
