"""Plant units of mass, time and length to SI and back, one function each."""

from typing import TypeVar

from server.science.arrays import Numbers

# A function gives back what it is given: a float for a float, an array for an array.
Value = TypeVar("Value", float, Numbers)

# SI Brochure, 9th ed. (2019), table 8: 60 min of 60 s.
SECONDS_PER_HOUR = 3600.0


def kg_from_tonnes(tonnes: Value) -> Value:
    """Mass in kilograms, from tonnes.

    Parameters
    ----------
    tonnes : float or ndarray, any shape
        Mass, metric tonnes.

    Returns
    -------
    float or ndarray, same shape
        Mass, kg. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 t is 1000 kg.

    Example
    -------
    >>> kg_from_tonnes(2.5)
    2500.0
    """
    return tonnes * 1000.0


def tonnes_from_kg(mass_kg: Value) -> Value:
    """Mass in tonnes, from kilograms.

    Parameters
    ----------
    mass_kg : float or ndarray, any shape
        Mass, kg.

    Returns
    -------
    float or ndarray, same shape
        Mass, metric tonnes. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 t is 1000 kg.

    Example
    -------
    >>> tonnes_from_kg(2500.0)
    2.5
    """
    return mass_kg / 1000.0


def seconds_from_hours(duration_h: Value) -> Value:
    """Duration in seconds, from hours.

    Parameters
    ----------
    duration_h : float or ndarray, any shape
        Duration, h.

    Returns
    -------
    float or ndarray, same shape
        Duration, s. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 h is 3600 s.

    Example
    -------
    >>> seconds_from_hours(6.5)
    23400.0
    """
    return duration_h * SECONDS_PER_HOUR


def hours_from_seconds(duration_s: Value) -> Value:
    """Duration in hours, from seconds.

    Parameters
    ----------
    duration_s : float or ndarray, any shape
        Duration, s.

    Returns
    -------
    float or ndarray, same shape
        Duration, h. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 8: 1 h is 3600 s.

    Example
    -------
    >>> hours_from_seconds(23400.0)
    6.5
    """
    return duration_s / SECONDS_PER_HOUR


def metres_from_millimetres(length_mm: Value) -> Value:
    """Length in metres, from millimetres.

    Parameters
    ----------
    length_mm : float or ndarray, any shape
        Length, mm.

    Returns
    -------
    float or ndarray, same shape
        Length, m. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> metres_from_millimetres(250.0)
    0.25
    """
    return length_mm / 1000.0


def millimetres_from_metres(length_m: Value) -> Value:
    """Length in millimetres, from metres.

    Parameters
    ----------
    length_m : float or ndarray, any shape
        Length, m.

    Returns
    -------
    float or ndarray, same shape
        Length, mm. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> millimetres_from_metres(0.25)
    250.0
    """
    return length_m * 1000.0
