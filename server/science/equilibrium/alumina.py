"""Voltage that alumina asks for in molten cryolite, by what its oxygen becomes."""

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero
from server.science.equilibrium.gibbs import volts_from_gibbs
from server.science.errors import UnknownName
from server.science.ranges import Range

AnodeGas = Literal["CO2", "CO", "O2"]

# Gibbs energies of formation as a straight line in temperature, J/mol and J/(mol K): dG = a + b T.
# Fitted here to values at 1100 to 1400 K worked out from the coefficients of B. J. McBride, S.
# Gordon and M. A. Reno, NASA TM-4513 (1993), looked up as a public library ships them; within 0.1
# kJ/mol.
FORMATION_LINES: dict[str, tuple[float, float]] = {
    "Al2O3": (-1_691_136.0, 330.087),
    "CO2": (-395_130.0, -0.777),
    "CO": (-113_502.0, -86.926),
    "O2": (0.0, 0.0),
}
# Moles of gas and electrons for one mole of alumina, 6 F: stoichiometry of 2 Al2O3 + 3 C = 4 Al +
# 3 CO2, Al2O3 + 3 C = 2 Al + 3 CO and 2 Al2O3 = 4 Al + 3 O2.
MOLES_OF_GAS: dict[str, float] = {"CO2": 1.5, "CO": 3.0, "O2": 1.5}
# Temperatures to which the lines were fitted.
ALUMINA_RANGE = Range("temperature_k", 1100.0, 1400.0)


def alumina_volts(temperature_k: ArrayLike, anode_gas: AnodeGas = "CO2") -> Numbers:
    """Reversible voltage of aluminium from alumina, for one product at the anode.

    With a carbon anode that burns to carbon dioxide the reaction asks for 1.19 V at 960 degC,
    about 1 V less than with oxygen on an inert anode, because the burning carbon pays the rest.
    Liquid aluminium and gases at 1 bar, bath saturated with solid alumina; a bath below
    saturation asks for a few hundredths of a volt more. Straight lines in temperature, see
    `ALUMINA_RANGE`.

    Parameters
    ----------
    temperature_k : array_like, any shape
        Temperature, K; above zero.
    anode_gas : {"CO2", "CO", "O2"}
        What the oxygen of the alumina becomes.

    Returns
    -------
    ndarray, same shape
        Reversible voltage, V. NaN where the temperature is NaN.

    Raises
    ------
    OutOfRange
        If a temperature is not above zero.
    UnknownName
        If the gas is none of the three.

    Source
    ------
    B. J. McBride, S. Gordon and M. A. Reno, NASA TM-4513 (1993); see `FORMATION_LINES`.

    Example
    -------
    At 960 degC, on carbon and on an inert anode.

    >>> f"{alumina_volts(1233.15):.2f}"
    '1.19'
    >>> f"{alumina_volts(1233.15, anode_gas='O2'):.2f}"
    '2.22'
    """
    if anode_gas not in MOLES_OF_GAS:
        raise UnknownName("anode_gas", anode_gas, MOLES_OF_GAS)
    kelvin = above_zero("temperature_k", temperature_k)
    alumina, gas = FORMATION_LINES["Al2O3"], FORMATION_LINES[anode_gas]
    moles = MOLES_OF_GAS[anode_gas]
    energy = moles * (gas[0] + gas[1] * kelvin) - (alumina[0] + alumina[1] * kelvin)
    return np.asarray(-volts_from_gibbs(energy, electrons=6))
