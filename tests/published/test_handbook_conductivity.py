"""CRC Handbook of Chemistry and Physics, "Electrical Conductivity of Aqueous Solutions", 20 degC.

Status: looked up, in a public copy of the table, in mS/cm; that a salt gains about 2 % of its
conductivity at 20 degC with every kelvin is from memory. Nickel sulfate is not in the table; its
neighbours say which size is right for the typical value of nickel baths, which is from memory.
"""

import pytest

from server.science.electrolyte.conductivity import CONDUCTIVITIES, conductivity_with_doubt


@pytest.mark.parametrize(
    ("salt", "percent", "ms_cm"),
    [
        ("CuSO4", 15, 42.3), ("MnSO4", 15, 43.7), ("MnSO4", 20, 47.6), ("MgSO4", 10, 42.7),
        ("MgSO4", 15, 54.2),
    ],
)  # fmt: skip
def test_a_neutral_nickel_bath_conducts_as_its_neighbours_do(salt, percent, ms_cm):
    at_60_degc_s_m = ms_cm / 10 * (1 + 0.02 * (60 - 20))

    value, doubt = conductivity_with_doubt(CONDUCTIVITIES["Ni"], 75.0, 0.0, 333.15)

    assert abs(value - at_60_degc_s_m) < doubt, (salt, percent)
