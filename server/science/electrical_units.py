"""Plant units of current, charge and voltage to SI and back, one function each."""

from typing import Any, TypeVar, overload

import numpy as np
from numpy.typing import NDArray

from server.science.arrays import Moments, Numbers
from server.science.errors import OutOfRange

# A function gives back what it is given: a float for a float, an array for an array.
Value = TypeVar("Value", float, Numbers)

# SI Brochure, 9th ed. (2019), tables 7 and 8: 1000 A times 3600 s.
COULOMBS_PER_KAH = 3.6e6


def amps_from_ka(ka: Value) -> Value:
    """Current in amperes, from kiloamperes.

    Parameters
    ----------
    ka : float or ndarray, any shape
        Current, kA.

    Returns
    -------
    float or ndarray, same shape
        Current, A. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: kilo is 1000.

    Example
    -------
    >>> amps_from_ka(28.5)
    28500.0
    """
    return ka * 1000.0


def ka_from_amps(amps: Value) -> Value:
    """Current in kiloamperes, from amperes.

    Parameters
    ----------
    amps : float or ndarray, any shape
        Current, A.

    Returns
    -------
    float or ndarray, same shape
        Current, kA. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: kilo is 1000.

    Example
    -------
    >>> ka_from_amps(28500.0)
    28.5
    """
    return amps / 1000.0


def coulombs_from_kah(kah: Value) -> Value:
    """Charge in coulombs, from kiloampere-hours.

    Parameters
    ----------
    kah : float or ndarray, any shape
        Charge, kAh.

    Returns
    -------
    float or ndarray, same shape
        Charge, C. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kAh is 3.6 MC.

    Example
    -------
    >>> coulombs_from_kah(2.0)
    7200000.0
    """
    return kah * COULOMBS_PER_KAH


def kah_from_coulombs(charge_c: Value) -> Value:
    """Charge in kiloampere-hours, from coulombs.

    Parameters
    ----------
    charge_c : float or ndarray, any shape
        Charge, C.

    Returns
    -------
    float or ndarray, same shape
        Charge, kAh. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), tables 7 and 8: 1 kAh is 3.6 MC.

    Example
    -------
    >>> kah_from_coulombs(7.2e6)
    2.0
    """
    return charge_c / COULOMBS_PER_KAH


def volts_from_millivolts(millivolts: Value) -> Value:
    """Voltage in volts, from millivolts.

    Parameters
    ----------
    millivolts : float or ndarray, any shape
        Voltage, mV.

    Returns
    -------
    float or ndarray, same shape
        Voltage, V. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> volts_from_millivolts(2031.0)
    2.031
    """
    return millivolts / 1000.0


def millivolts_from_volts(volts: Value) -> Value:
    """Voltage in millivolts, from volts.

    Parameters
    ----------
    volts : float or ndarray, any shape
        Voltage, V.

    Returns
    -------
    float or ndarray, same shape
        Voltage, mV. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: milli is 1/1000.

    Example
    -------
    >>> millivolts_from_volts(2.25)
    2250.0
    """
    return volts * 1000.0


def ohm_from_microohm(microohm: Value) -> Value:
    """Resistance in ohms, from microohms.

    Parameters
    ----------
    microohm : float or ndarray, any shape
        Resistance, microohm.

    Returns
    -------
    float or ndarray, same shape
        Resistance, ohm. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: micro is 1/1 000 000.

    Example
    -------
    >>> ohm_from_microohm(20.0)
    2e-05
    """
    return microohm / 1.0e6


def microohm_from_ohm(resistance_ohm: Value) -> Value:
    """Resistance in microohms, from ohms.

    Parameters
    ----------
    resistance_ohm : float or ndarray, any shape
        Resistance, ohm.

    Returns
    -------
    float or ndarray, same shape
        Resistance, microohm. NaN where the input is NaN.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: micro is 1/1 000 000.

    Example
    -------
    >>> microohm_from_ohm(2e-5)
    20.0
    """
    return resistance_ohm * 1.0e6


@overload
def volts_from_microvolts(microvolts: float) -> float: ...
@overload
def volts_from_microvolts(microvolts: NDArray[Any]) -> Numbers: ...
def volts_from_microvolts(microvolts: float | NDArray[Any]) -> float | Numbers:
    """Voltage in volts, from stored microvolts.

    Parameters
    ----------
    microvolts : int or ndarray, any shape
        Voltage, whole microvolts.

    Returns
    -------
    float or ndarray, same shape
        Voltage, V.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: micro is 1/1 000 000.

    Example
    -------
    >>> volts_from_microvolts(2_031_400)
    2.0314
    """
    return microvolts / 1.0e6


@overload
def microvolts_from_volts(volts: float) -> int: ...
@overload
def microvolts_from_volts(volts: NDArray[Any]) -> Moments: ...
def microvolts_from_volts(volts: float | NDArray[Any]) -> int | Moments:
    """Voltage in whole microvolts, as it is stored.

    Rounded to the nearest microvolt, a thousandth of what a plant's meter shows. There is no
    whole number for a missing voltage, so NaN is refused: a missing reading is not stored.

    Parameters
    ----------
    volts : float or ndarray, any shape
        Voltage, V; finite.

    Returns
    -------
    int or int64 ndarray, same shape
        Voltage, whole microvolts.

    Raises
    ------
    OutOfRange
        If any voltage is NaN or infinite.

    Source
    ------
    SI Brochure, 9th ed. (2019), table 7: micro is 1/1 000 000.

    Example
    -------
    >>> microvolts_from_volts(2.0314)
    2031400
    """
    numbers = np.asarray(volts, dtype=np.float64)
    wrong = ~np.isfinite(numbers)
    if wrong.any():
        raise OutOfRange("volts", found=float(numbers[wrong].flat[0]), allowed="a finite voltage")
    whole = np.rint(numbers * 1.0e6).astype(np.int64)
    return int(whole) if whole.ndim == 0 else whole
