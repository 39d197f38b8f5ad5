"""How rates and diffusivities rise with temperature, by Arrhenius."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite
from server.science.constants import GAS_CONSTANT_J_MOL_K
from server.science.errors import OutOfRange


def arrhenius_ratio(activation_j_mol: ArrayLike, from_k: ArrayLike, to_k: ArrayLike) -> Numbers:
    """Factor by which a quantity grows between two temperatures.

    exp(-(E / R) (1/T2 - 1/T1)), with an activation energy that is the same at both. Over the few
    tens of degrees of a tankhouse that is fair; far beyond the measured range it is a guess.

    Parameters
    ----------
    activation_j_mol : array_like, shape S
        Activation energy E, J/mol; negative for a quantity that falls as it warms.
    from_k : array_like, broadcast with S
        Temperature at which the quantity is known, K; above zero.
    to_k : array_like, broadcast with S
        Temperature at which it is wanted, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        The quantity at the second temperature over that at the first. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero, or the ratio exceeds the largest float.

    Source
    ------
    S. Arrhenius, Z. Phys. Chem. 4 (1889) 226.

    Example
    -------
    Copper's diffusion in a refinery's electrolyte, 40 to 65 degC.

    >>> f"{arrhenius_ratio(19_200.0, 313.15, 338.15):.4f}"
    '1.7249'
    """
    energy = finite("activation_j_mol", activation_j_mol) / GAS_CONSTANT_J_MOL_K
    inverse = 1.0 / above_zero("from_k", from_k) - 1.0 / above_zero("to_k", to_k)
    # A ratio beyond the largest float is refused below, by name, instead of warned of here.
    with np.errstate(over="ignore"):
        ratio = np.exp(energy * inverse)
    return finite("arrhenius_ratio", ratio)


def arrhenius_at(
    value: ArrayLike, activation_j_mol: ArrayLike, from_k: ArrayLike, to_k: ArrayLike
) -> Numbers:
    """A rate, diffusivity or exchange current at another temperature.

    The known value times `arrhenius_ratio`, with its limits.

    Parameters
    ----------
    value : array_like, shape S
        The quantity at the first temperature, any unit.
    activation_j_mol : array_like, broadcast with S
        Activation energy, J/mol.
    from_k : array_like, broadcast with S
        Temperature at which the value is known, K; above zero.
    to_k : array_like, broadcast with S
        Temperature at which it is wanted, K; above zero.

    Returns
    -------
    ndarray, broadcast shape
        The quantity at the second temperature, same unit. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero, or the result exceeds the largest float.

    Source
    ------
    S. Arrhenius, Z. Phys. Chem. 4 (1889) 226.

    Example
    -------
    >>> f"{arrhenius_at(7.0e-10, 19_200.0, 313.15, 333.15):.2e}"
    '1.09e-09'
    """
    with np.errstate(over="ignore"):
        result = finite("value", value) * arrhenius_ratio(activation_j_mol, from_k, to_k)
    return finite("arrhenius_at", result)


def activation_j_mol(ratio: ArrayLike, from_k: ArrayLike, to_k: ArrayLike) -> Numbers:
    """Activation energy behind the change of a quantity between two temperatures.

    E = R ln(k2 / k1) / (1/T1 - 1/T2). Two temperatures close together make it very unsure: a
    relative error of the ratio is divided by the small difference of the inverses.

    Parameters
    ----------
    ratio : array_like, shape S
        The quantity at the second temperature over that at the first; above zero.
    from_k : array_like, broadcast with S
        First temperature, K; above zero.
    to_k : array_like, broadcast with S
        Second temperature, K; above zero and not the first.

    Returns
    -------
    ndarray, broadcast shape
        Activation energy, J/mol. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero, or both temperatures are the same.

    Source
    ------
    S. Arrhenius, Z. Phys. Chem. 4 (1889) 226.

    Example
    -------
    >>> f"{activation_j_mol(2.0, 298.15, 308.15):.0f}"
    '52949'
    """
    inverse = 1.0 / above_zero("from_k", from_k) - 1.0 / above_zero("to_k", to_k)
    if (inverse == 0.0).any():
        raise OutOfRange("to_k less from_k", found=0.0, allowed="two different temperatures")
    return np.asarray(GAS_CONSTANT_J_MOL_K * np.log(above_zero("ratio", ratio)) / inverse)
