"""Plant units of shares, temperatures, solutions and flows to SI and back, one function each."""

from typing import TypeVar

from server.science.arrays import Numbers
from server.science.constants import ZERO_CELSIUS_K
from server.science.size_units import SECONDS_PER_HOUR

# A function gives back what it is given: a float for a float, an array for an array.
Value = TypeVar("Value", float, Numbers)


def share_from_percent(percent: Value) -> Value:
    """A share from 0 to 1, from per cent.

    Values beyond 100 % pass: they are shown and flagged, not hidden.

    Parameters
    ----------
    percent : float or ndarray, any shape
        Per cent.

    Returns
    -------
    float or ndarray, same shape
        Share. NaN where the input is NaN.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 97: 1 % is 0.01.

    Example
    -------
    >>> share_from_percent(92.5)
    0.925
    """
    return percent / 100.0


def percent_from_share(share: Value) -> Value:
    """Per cent, from a share.

    Parameters
    ----------
    share : float or ndarray, any shape
        Share, 1 for all of it.

    Returns
    -------
    float or ndarray, same shape
        Per cent. NaN where the input is NaN.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 97: 1 % is 0.01.

    Example
    -------
    >>> percent_from_share(0.925)
    92.5
    """
    return share * 100.0


def kelvin_from_degc(degc: Value) -> Value:
    """Thermodynamic temperature, from degrees Celsius.

    Parameters
    ----------
    degc : float or ndarray, any shape
        Temperature, degC.

    Returns
    -------
    float or ndarray, same shape
        Temperature, K. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), section 2.3.1: 0 degC is 273.15 K.

    Example
    -------
    >>> kelvin_from_degc(45.0)
    318.15
    """
    return degc + ZERO_CELSIUS_K


def degc_from_kelvin(temperature_k: Value) -> Value:
    """Temperature in degrees Celsius, from kelvin.

    Parameters
    ----------
    temperature_k : float or ndarray, any shape
        Temperature, K.

    Returns
    -------
    float or ndarray, same shape
        Temperature, degC. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), section 2.3.1: 0 degC is 273.15 K.

    Example
    -------
    >>> degc_from_kelvin(318.15)
    45.0
    """
    return temperature_k - ZERO_CELSIUS_K


def mol_m3_from_g_l(g_l: Value, molar_mass_kg_mol: float) -> Value:
    """Amount concentration, from grams per litre.

    Parameters
    ----------
    g_l : float or ndarray, any shape
        Concentration, g/L.
    molar_mass_kg_mol : float
        Molar mass of what the grams are of, kg/mol.

    Returns
    -------
    float or ndarray, same shape
        Concentration, mol/m3. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 L is 1 dm3; c = rho / M.

    Example
    -------
    >>> mol_m3_from_g_l(75.0, 0.0625)
    1200.0
    """
    return g_l / molar_mass_kg_mol


def g_l_from_mol_m3(mol_m3: Value, molar_mass_kg_mol: float) -> Value:
    """Grams per litre, from amount concentration.

    Parameters
    ----------
    mol_m3 : float or ndarray, any shape
        Concentration, mol/m3.
    molar_mass_kg_mol : float
        Molar mass of what the grams are of, kg/mol.

    Returns
    -------
    float or ndarray, same shape
        Concentration, g/L. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 L is 1 dm3; rho = c M.

    Example
    -------
    >>> g_l_from_mol_m3(1200.0, 0.0625)
    75.0
    """
    return mol_m3 * molar_mass_kg_mol


def g_l_from_mg_l(mg_l: Value) -> Value:
    """Grams per litre, from milligrams per litre.

    Parameters
    ----------
    mg_l : float or ndarray, any shape
        Concentration, mg/L.

    Returns
    -------
    float or ndarray, same shape
        Concentration, g/L, the same number in kg/m3. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> g_l_from_mg_l(150.0)
    0.15
    """
    return mg_l / 1000.0


def mg_l_from_g_l(g_l: Value) -> Value:
    """Milligrams per litre, from grams per litre.

    Parameters
    ----------
    g_l : float or ndarray, any shape
        Concentration, g/L.

    Returns
    -------
    float or ndarray, same shape
        Concentration, mg/L. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> mg_l_from_g_l(0.25)
    250.0
    """
    return g_l * 1000.0


def m3_s_from_m3_h(m3_h: Value) -> Value:
    """Flow in cubic metres per second, from cubic metres per hour.

    Parameters
    ----------
    m3_h : float or ndarray, any shape
        Flow, m3/h.

    Returns
    -------
    float or ndarray, same shape
        Flow, m3/s. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 h is 3600 s.

    Example
    -------
    >>> m3_s_from_m3_h(400.0)
    0.1111111111111111
    """
    return m3_h / SECONDS_PER_HOUR


def m3_h_from_m3_s(m3_s: Value) -> Value:
    """Flow in cubic metres per hour, from cubic metres per second.

    Parameters
    ----------
    m3_s : float or ndarray, any shape
        Flow, m3/s.

    Returns
    -------
    float or ndarray, same shape
        Flow, m3/h. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 h is 3600 s.

    Example
    -------
    >>> m3_h_from_m3_s(0.125)
    450.0
    """
    return m3_s * SECONDS_PER_HOUR
