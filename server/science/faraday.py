"""Charge to metal, metal to current efficiency, and volts to energy per kilogram of metal."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import FARADAY_C_MOL, Metal


def equivalent_kg_c(metal: Metal) -> float:
    """Electrochemical equivalent: metal that one coulomb deposits.

    k = M / (n F). It holds for one valency; a bath that works at two needs the charge of each.
    In kg/kAh, as plants quote it, the same number times 3.6e6.

    Parameters
    ----------
    metal : Metal
        The metal deposited, at the valency of its bath.

    Returns
    -------
    float
        Mass per charge, kg/C; never NaN.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, DOI 10.1098/rstl.1834.0008.

    Example
    -------
    Copper from sulfate, in kg/kAh.

    >>> from server.science.constants import COPPER
    >>> f"{equivalent_kg_c(COPPER) * 3.6e6:.5f}"
    '1.18549'
    """
    return metal.molar_mass_kg_mol / (metal.electrons * FARADAY_C_MOL)


def deposited_kg(charge_c: ArrayLike, metal: Metal) -> Numbers:
    """Metal that a charge deposits when none of it is lost.

    m = k Q. An upper limit: what the scale can show at a current efficiency of 1.

    Parameters
    ----------
    charge_c : array_like, shape S
        Charge through the cathodes, C; not negative. Cells in series each pass the full charge.
    metal : Metal
        The metal deposited.

    Returns
    -------
    ndarray, shape S
        Mass, kg. NaN where the charge is NaN.

    Raises
    ------
    OutOfRange
        If any charge is negative or infinite.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, DOI 10.1098/rstl.1834.0008.

    Example
    -------
    One cell at 30 kA for a day.

    >>> from server.science.constants import COPPER
    >>> f"{deposited_kg(30e3 * 86_400, COPPER):.1f}"
    '853.6'
    """
    return np.asarray(not_negative("charge_c", charge_c) * equivalent_kg_c(metal))


def charge_for_c(mass_kg: ArrayLike, metal: Metal) -> Numbers:
    """Charge that a mass of metal needs when none of it is lost.

    Q = m / k, the inverse of `deposited_kg`. A lower limit: a plant spends more.

    Parameters
    ----------
    mass_kg : array_like, shape S
        Metal deposited, kg; not negative.
    metal : Metal
        The metal deposited.

    Returns
    -------
    ndarray, shape S
        Charge, C. NaN where the mass is NaN.

    Raises
    ------
    OutOfRange
        If any mass is negative or infinite.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, DOI 10.1098/rstl.1834.0008.

    Example
    -------
    A tonne of zinc, in kAh.

    >>> from server.science.constants import ZINC
    >>> f"{charge_for_c(1000.0, ZINC) / 3.6e6:.2f}"
    '819.87'
    """
    return np.asarray(not_negative("mass_kg", mass_kg) / equivalent_kg_c(metal))


def current_efficiency(stripped_kg: ArrayLike, charge_c: ArrayLike, metal: Metal) -> Numbers:
    """Share of the charge that is found again as stripped metal.

    The mass on the scale, over the mass Faraday's law gives for the same charge.
    A result above 1 is returned as it is: it says that a weight, a cathode count
    or an ammeter is wrong, and clipping it would hide that.

    Parameters
    ----------
    stripped_kg : array_like, shape S
        Metal stripped from the cathodes, without starter sheets, kg; not negative.
    charge_c : array_like, broadcast with S
        Charge through those cathodes while that metal grew, C; not negative.
    metal : Metal
        The metal deposited.

    Returns
    -------
    ndarray, broadcast shape
        Fraction, not percent. NaN where an input is NaN or no charge passed.

    Raises
    ------
    OutOfRange
        If any mass or charge is negative or infinite.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, DOI 10.1098/rstl.1834.0008.

    Example
    -------
    A cell takes 20 kA for seven days; 3705 kg of copper is stripped from it.

    >>> from server.science.constants import COPPER
    >>> f"{current_efficiency(3705, 20e3 * 7 * 86_400, COPPER):.3f}"
    '0.930'
    """
    stripped = not_negative("stripped_kg", stripped_kg)
    ideal_kg = deposited_kg(charge_c, metal)
    return np.asarray(stripped / np.where(ideal_kg > 0.0, ideal_kg, np.nan))


def specific_energy_j_kg(energy_j: ArrayLike, mass_kg: ArrayLike) -> Numbers:
    """Energy spent per mass of metal made.

    Whether it is DC or AC, of the cells or of the string, is what `energy_j` was measured at;
    figures of different points must not be compared.

    Parameters
    ----------
    energy_j : array_like, shape S
        Energy spent, J; not negative.
    mass_kg : array_like, broadcast with S
        Metal made with it, kg; not negative.

    Returns
    -------
    ndarray, broadcast shape
        J/kg. NaN where an input is NaN or no metal was made.

    Raises
    ------
    OutOfRange
        If any energy or mass is negative or infinite.

    Source
    ------
    Definition; the metric tonne is meant wherever a plant says "per tonne".

    Example
    -------
    A day of 60 cells at 2.05 V and 30 kA makes 47.6 t; in kWh/t.

    >>> f"{specific_energy_j_kg(60 * 2.05 * 30e3 * 86_400, 47_600) / 3600:.0f}"
    '1861'
    """
    made_kg = not_negative("mass_kg", mass_kg)
    return np.asarray(not_negative("energy_j", energy_j) / np.where(made_kg > 0.0, made_kg, np.nan))


def specific_energy_from_volts_j_kg(
    volts: ArrayLike, current_efficiency: ArrayLike, metal: Metal
) -> Numbers:
    """Energy per mass of metal, from a constant voltage and the current efficiency.

    w = V / (k CE). Exact only while the voltage is constant or does not move together with the
    current; otherwise integrate V I and use `specific_energy_j_kg`.

    Parameters
    ----------
    volts : array_like, shape S
        Voltage of one cell, V; not negative.
    current_efficiency : array_like, broadcast with S
        Fraction, not percent; not negative. Above 1 is taken as it comes.
    metal : Metal
        The metal deposited.

    Returns
    -------
    ndarray, broadcast shape
        J/kg; in kWh/t, divided by 3600. NaN where an input is NaN or the efficiency is 0.

    Raises
    ------
    OutOfRange
        If any voltage or efficiency is negative or infinite.

    Source
    ------
    M. Faraday, Phil. Trans. R. Soc. 124 (1834) 77, with energy = V Q.

    Example
    -------
    Copper at 2.00 V and 92 %, in kWh/t.

    >>> from server.science.constants import COPPER
    >>> f"{specific_energy_from_volts_j_kg(2.00, 0.92, COPPER) / 3600:.2f}"
    '1833.76'
    """
    efficiency = not_negative("current_efficiency", current_efficiency)
    efficiency = np.where(efficiency > 0.0, efficiency, np.nan)
    return np.asarray(not_negative("volts", volts) / (equivalent_kg_c(metal) * efficiency))


def deposit_thickness_m(mass_kg: ArrayLike, area_m2: ArrayLike, metal: Metal) -> Numbers:
    """Mean thickness of a deposit, from its mass and the area it grew on.

    s = m / (rho A), with the density of the cast metal: an even and dense deposit. A rough or
    porous one is thicker, edges more so. Counting both faces in the area gives the thickness
    on one face.

    Parameters
    ----------
    mass_kg : array_like, shape S
        Metal on the cathodes, kg; not negative.
    area_m2 : array_like, broadcast with S
        Immersed area of all faces it grew on, m2; above zero.
    metal : Metal
        The metal deposited.

    Returns
    -------
    ndarray, broadcast shape
        Thickness on one face, m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If any mass is negative or any area is not above zero.

    Source
    ------
    Definition of density; densities as in `server.science.constants`.

    Example
    -------
    55 kg of copper on every square metre, in millimetres.

    >>> from server.science.constants import COPPER
    >>> f"{deposit_thickness_m(55.0, 1.0, COPPER) * 1000:.2f}"
    '6.14'
    """
    volume_m3 = not_negative("mass_kg", mass_kg) / metal.density_kg_m3
    return np.asarray(volume_m3 / above_zero("area_m2", area_m2))


def current_density_a_m2(amps: ArrayLike, area_m2: ArrayLike) -> Numbers:
    """Current per immersed cathode area, both faces counted.

    The mean over the cell. Single cathodes scatter about it, by 8.5 % in one measured house
    (Wiechmann et al., IEEE Trans. Ind. Appl. 46 (2010) 1264).

    Parameters
    ----------
    amps : array_like, shape S
        Current through the cell, A; not negative.
    area_m2 : array_like, broadcast with S
        Immersed area of all its cathodes, both faces, m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If any current is negative or any area is not above zero.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 72: j = I / A.

    Example
    -------
    33.8 kA over 55 cathodes of 2.319 m2.

    >>> f"{current_density_a_m2(33_800, 55 * 2.319):.1f}"
    '265.0'
    """
    return np.asarray(not_negative("amps", amps) / above_zero("area_m2", area_m2))
