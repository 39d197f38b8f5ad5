"""Constants of nature and of the metals, each with its source on the line above."""

from dataclasses import dataclass, replace

from server.science.errors import OutOfRange, UnknownName

# SI Brochure, 9th ed. (2019), table 1: exact by definition of the ampere.
ELEMENTARY_CHARGE_C = 1.602176634e-19
# SI Brochure, 9th ed. (2019), table 1: exact by definition of the mole.
AVOGADRO_PER_MOL = 6.02214076e23
# CODATA 2018 and 2022, exact: product of the two constants above, to the digits of a float.
FARADAY_C_MOL = 96485.33212331001
# CODATA 2018 and 2022, exact: Avogadro times Boltzmann constant.
GAS_CONSTANT_J_MOL_K = 8.31446261815324
# SI Brochure, 9th ed. (2019), section 2.3.1: exact, definition of the degree Celsius.
ZERO_CELSIUS_K = 273.15
# IUPAC Green Book, 3rd ed. (2007), p. 61: 25 degC, at which standard potentials are tabulated.
STANDARD_TEMPERATURE_K = 298.15
# CODATA 2018 and 2022: molar volume of an ideal gas at 273.15 K and 101.325 kPa, exact R T / p.
IDEAL_GAS_M3_MOL = 0.022413969545014
# IUPAC abridged standard atomic weight (CIAAW 2021), conventional value within its interval.
HYDROGEN_KG_MOL = 1.008e-3
# IUPAC abridged standard atomic weight (CIAAW 2021), conventional value within its interval.
OXYGEN_KG_MOL = 15.999e-3
# IUPAC abridged standard atomic weight (CIAAW 2021), conventional value within its interval.
SULFUR_KG_MOL = 32.06e-3


@dataclass(frozen=True)
class Metal:
    """A metal as a bath deposits it: its weight, its valency there, its density.

    The molar masses are the full IUPAC standard atomic weights. The abridged ones, cut to five
    figures, agree within 2 parts in 100,000, but for silver (107.87 against 107.8682) that is
    more than the error of the silver coulometer, so the full figure is kept.
    """

    symbol: str
    name: str
    molar_mass_kg_mol: float
    electrons: int
    density_kg_m3: float


# Molar masses below: IUPAC standard atomic weights (CIAAW), as in periodictable 2.1.0.
# Densities below: solid at 20 degC, CRC Handbook "Physical constants of inorganic compounds"
# (from memory), within half a per cent of those in periodictable 2.1.0; cast metal, so a porous
# deposit is thicker.
# Copper from acid sulfate; IUPAC weight 63.546(3).
COPPER = Metal("Cu", "copper", 63.546e-3, 2, 8960.0)
# Copper from cuprous (chloride) baths; IUPAC weight 63.546(3).
CUPROUS_COPPER = replace(COPPER, electrons=1)
# IUPAC weight 65.38(2).
ZINC = Metal("Zn", "zinc", 65.38e-3, 2, 7134.0)
# IUPAC weight 58.6934(4).
NICKEL = Metal("Ni", "nickel", 58.6934e-3, 2, 8902.0)
# IUPAC weight 58.933194(3).
COBALT = Metal("Co", "cobalt", 58.933194e-3, 2, 8860.0)
# IUPAC weight 107.8682(2).
SILVER = Metal("Ag", "silver", 107.8682e-3, 1, 10500.0)
# Gold from chloride (Wohlwill) baths; IUPAC weight 196.966570(4).
GOLD = Metal("Au", "gold", 196.966570e-3, 3, 19300.0)
# Gold from cyanide or thiosulfate baths; IUPAC weight 196.966570(4).
AUROUS_GOLD = replace(GOLD, electrons=1)
# IUPAC interval 206.14 to 207.94, conventional weight 207.2: ore-dependent, see u of the account.
LEAD = Metal("Pb", "lead", 207.2e-3, 2, 11340.0)
# Tin from acid stannous baths; IUPAC weight 118.710(7).
TIN = Metal("Sn", "tin", 118.710e-3, 2, 7290.0)
# Tin from alkaline stannate baths; IUPAC weight 118.710(7).
STANNIC_TIN = replace(TIN, electrons=4)
# IUPAC weight 54.938043(2).
MANGANESE = Metal("Mn", "manganese", 54.938043e-3, 2, 7300.0)
# IUPAC weight 112.414(4).
CADMIUM = Metal("Cd", "cadmium", 112.414e-3, 2, 8650.0)
# IUPAC weight 51.9961(6).
CHROMIUM = Metal("Cr", "chromium", 51.9961e-3, 3, 7190.0)
# IUPAC weight 55.845(2).
IRON = Metal("Fe", "iron", 55.845e-3, 2, 7870.0)
# IUPAC weight 114.818(1).
INDIUM = Metal("In", "indium", 114.818e-3, 3, 7310.0)
# IUPAC weight 69.723(1).
GALLIUM = Metal("Ga", "gallium", 69.723e-3, 3, 5910.0)
# IUPAC weight 26.9815384(3).
ALUMINIUM = Metal("Al", "aluminium", 26.9815384e-3, 3, 2700.0)
# IUPAC interval 24.304 to 24.307, conventional weight 24.305.
MAGNESIUM = Metal("Mg", "magnesium", 24.305e-3, 2, 1740.0)
# IUPAC weight 208.98040(1).
BISMUTH = Metal("Bi", "bismuth", 208.98040e-3, 3, 9790.0)
# IUPAC weight 121.760(1).
ANTIMONY = Metal("Sb", "antimony", 121.760e-3, 3, 6690.0)
# IUPAC weight 127.60(3).
TELLURIUM = Metal("Te", "tellurium", 127.60e-3, 4, 6240.0)

# Every metal at its usual valency, by symbol; the order of the trade.
METALS: dict[str, Metal] = {
    known.symbol: known
    for known in (
        COPPER, ZINC, NICKEL, COBALT, SILVER, GOLD, LEAD, TIN, MANGANESE, CADMIUM, CHROMIUM,
        IRON, INDIUM, GALLIUM, ALUMINIUM, MAGNESIUM, BISMUTH, ANTIMONY, TELLURIUM,
    )
}  # fmt: skip


def metal(symbol: str, electrons: int | None = None) -> Metal:
    """The metal of a chemical symbol or English name, at a stated or its usual valency.

    The valency belongs to the bath, not to the metal: gold takes three electrons from chloride
    and one from cyanide, tin two from acid and four from stannate.

    Parameters
    ----------
    symbol : str
        Chemical symbol or English name, capitals or not.
    electrons : int, optional
        Electrons that deposit one atom, 1 to 8; the usual number when not given.

    Returns
    -------
    Metal
        The metal with that number of electrons.

    Raises
    ------
    UnknownName
        If no metal here has that symbol or name; it offers the near ones.
    OutOfRange
        If `electrons` is not a whole number from 1 to 8.

    Source
    ------
    IUPAC standard atomic weights (CIAAW), https://ciaaw.org; valencies: common practice.

    Example
    -------
    >>> metal("au", electrons=1).molar_mass_kg_mol
    0.19696657
    >>> metal("zinc").electrons
    2
    """
    wanted = symbol.strip().lower()
    for known in METALS.values():
        if wanted in (known.symbol.lower(), known.name):
            break
    else:
        names = [name for known in METALS.values() for name in (known.symbol, known.name)]
        raise UnknownName("metal", symbol, names)
    if electrons is None:
        return known
    if electrons != int(electrons) or not 1 <= electrons <= 8:
        raise OutOfRange("electrons", found=electrons, allowed="a whole number from 1 to 8")
    return replace(known, electrons=int(electrons))
