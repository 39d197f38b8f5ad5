"""Named tables of standard potentials, of which a plant chooses one."""

from collections.abc import Mapping
from dataclasses import dataclass

from server.science.errors import UnknownName


@dataclass(frozen=True)
class PotentialTable:
    """One printed table of standard potentials at 25 degC, and what is known about its figures.

    `metals` holds simple ions over their metal by symbol and electrons, `couples` other couples by
    name, all in V against the standard hydrogen electrode. Tables of different generations differ,
    by 0.16 V for manganese, so figures of two of them are never mixed. `status` says how the
    figures came here: looked up, and where, or from memory.
    """

    key: str
    title: str
    citation: str
    status: str
    metals: Mapping[tuple[str, int], float]
    couples: Mapping[str, float]

    def metal_v(self, symbol: str, electrons: int) -> float:
        """Give the potential of a metal at a valency, or refuse and say what the table has."""
        if (symbol, electrons) not in self.metals:
            known = [f"{known} with {number}" for known, number in self.metals]
            found = f"{symbol} with {electrons}"
            raise UnknownName(f"standard potential in table {self.key!r}", found, known)
        return self.metals[symbol, electrons]

    def couple_v(self, couple: str) -> float:
        """Give the potential of a named couple, or refuse and say what the table has."""
        if couple not in self.couples:
            raise UnknownName(f"couple in table {self.key!r}", couple, self.couples)
        return self.couples[couple]


# CRC Handbook, Electrochemical Series (P. Vanysek), recent editions. Silver was looked up in the
# 92nd edition, copper(II) in a page quoting the handbook; all others in a public copy of a
# textbook's appendix L that follows the series, but bismuth, tellurium, PbO2 and MnO2 to their last
# digits (the appendix rounds these two to 1.69 and 1.23 V) and PbSO4, which are from memory.
CRC_RECENT = PotentialTable(
    key="crc recent",
    title="CRC Handbook, recent editions",
    citation="CRC Handbook of Chemistry and Physics, Electrochemical Series (P. Vanysek)",
    status="looked up in public copies; Bi, Te, PbSO4 and last digits of PbO2, MnO2 from memory",
    metals={
        ("Cu", 2): 0.3419,
        ("Cu", 1): 0.521,
        ("Zn", 2): -0.7618,
        ("Ni", 2): -0.257,
        ("Co", 2): -0.28,
        ("Ag", 1): 0.7996,
        ("Au", 3): 1.498,
        ("Au", 1): 1.692,
        ("Pb", 2): -0.1262,
        ("Sn", 2): -0.1375,
        ("Mn", 2): -1.185,
        ("Cd", 2): -0.403,
        ("Cr", 3): -0.744,
        ("Fe", 2): -0.447,
        ("In", 3): -0.3382,
        ("Ga", 3): -0.549,
        ("Al", 3): -1.662,
        ("Mg", 2): -2.372,
        ("Bi", 3): 0.308,
        ("Te", 4): 0.568,
    },
    couples={
        "H+/H2": 0.0,
        "O2/H2O": 1.229,
        "Fe3+/Fe2+": 0.771,
        "Cl2/Cl-": 1.35827,
        "PbO2/PbSO4": 1.6913,
        "PbSO4/Pb": -0.3588,
        "MnO2/Mn2+": 1.224,
        "MnO4-/Mn2+": 1.507,
        "Cu2+/Cu+": 0.153,
        "Sn4+/Sn2+": 0.151,
        "Co3+/Co2+": 1.83,
        "AgCl/Ag": 0.22233,
    },
)

# CRC Handbook, 54th edition, p. D-120, looked up in a public general-chemistry page that quotes it.
CRC_54TH = PotentialTable(
    key="crc 54th edition",
    title="CRC Handbook, 54th edition (older)",
    citation="CRC Handbook of Chemistry and Physics, 54th edition, p. D-120",
    status="looked up in a public general-chemistry page that quotes the handbook",
    metals={
        ("Cu", 2): 0.3419,
        ("Zn", 2): -0.7628,
        ("Ni", 2): -0.230,
        ("Ag", 1): 0.7996,
        ("Au", 1): 1.680,
        ("Pb", 2): -0.1263,
        ("Sn", 2): -0.1364,
        ("Mn", 2): -1.029,
        ("Cr", 3): -0.740,
        ("Fe", 2): -0.409,
        ("Al", 3): -1.706,
    },
    couples={
        "H+/H2": 0.0,
        "O2/H2O": 1.229,
        "Fe3+/Fe2+": 0.770,
        "Cl2/Cl-": 1.3583,
        "PbO2/PbSO4": 1.685,
        "PbSO4/Pb": -0.356,
        "MnO4-/Mn2+": 1.507,
        "Sn4+/Sn2+": 0.150,
    },
)

# Bard, Parsons and Jordan (1985), from memory. Where a public text quoting Lange's Handbook, whose
# table follows theirs, has the couple, it was looked up there and agrees to the digits printed.
BARD_1985 = PotentialTable(
    key="bard 1985",
    title="Bard, Parsons and Jordan, 1985",
    citation=(
        "A. J. Bard, R. Parsons and J. Jordan, Standard Potentials in Aqueous Solution, Marcel "
        "Dekker, New York, 1985"
    ),
    status="from memory",
    metals={
        ("Cu", 2): 0.340,
        ("Cu", 1): 0.520,
        ("Zn", 2): -0.7626,
        ("Ni", 2): -0.257,
        ("Co", 2): -0.277,
        ("Ag", 1): 0.7991,
        ("Au", 3): 1.52,
        ("Pb", 2): -0.1251,
        ("Sn", 2): -0.136,
        ("Mn", 2): -1.18,
        ("Cd", 2): -0.4025,
        ("Cr", 3): -0.74,
        ("Fe", 2): -0.44,
        ("Al", 3): -1.676,
        ("Mg", 2): -2.356,
    },
    couples={
        "H+/H2": 0.0,
        "O2/H2O": 1.229,
        "Fe3+/Fe2+": 0.771,
        "Cl2/Cl-": 1.3583,
        "PbO2/PbSO4": 1.698,
        "MnO2/Mn2+": 1.23,
        "Cu2+/Cu+": 0.159,
        "Sn4+/Sn2+": 0.15,
    },
)

# "Corrosion Engineering Principles and Practice", table 4.2, looked up on a public page.
CORROSION_TEXTBOOK = PotentialTable(
    key="corrosion textbook",
    title="Corrosion engineering textbook",
    citation="P. R. Roberge, Corrosion Engineering: Principles and Practice, 2008, table 4.2",
    status="looked up on a public page; author and year from memory",
    metals={
        ("Cu", 2): 0.3402,
        ("Cu", 1): 0.522,
        ("Zn", 2): -0.7628,
        ("Ni", 2): -0.23,
        ("Co", 2): -0.28,
        ("Ag", 1): 0.7996,
        ("Au", 1): 1.68,
        ("Pb", 2): -0.1263,
        ("Sn", 2): -0.1364,
        ("Mn", 2): -1.04,
        ("Cr", 3): -0.74,
        ("Fe", 2): -0.409,
        ("Al", 3): -1.706,
        ("Mg", 2): -2.375,
    },
    couples={"H+/H2": 0.0, "O2/H2O": 1.229},
)

# The four tables above by key; the first is taken where a plant has not chosen.
TABLES: dict[str, PotentialTable] = {
    table.key: table for table in (CRC_RECENT, CRC_54TH, BARD_1985, CORROSION_TEXTBOOK)
}
# Recent editions of the handbook, because they have every metal of the trade.
DEFAULT_TABLE = CRC_RECENT


def potential_table(key: str) -> PotentialTable:
    """The table of standard potentials with a key, capitals or not.

    Tables are kept apart: none fills what another lacks. Figures within 5 mV agree for most
    metals; nickel, iron, aluminium and above all manganese moved between the generations.

    Parameters
    ----------
    key : str
        Key of a table, such as ``crc recent``.

    Returns
    -------
    PotentialTable
        The table, with its citation and the status of its figures.

    Raises
    ------
    UnknownName
        If no table has that key; it offers the near ones.

    Source
    ------
    Each table names its own.

    Example
    -------
    >>> potential_table("CRC 54th edition").metal_v("Mn", 2)
    -1.029
    """
    wanted = key.strip().lower()
    if wanted not in TABLES:
        raise UnknownName("table of standard potentials", key, TABLES)
    return TABLES[wanted]


def table_titles() -> dict[str, str]:
    """Keys and titles of the tables, in the order in which a form lists them.

    Returns
    -------
    dict of str to str
        Title by key; the default table first.

    Source
    ------
    Each table names its own.

    Example
    -------
    >>> table_titles()["bard 1985"]
    'Bard, Parsons and Jordan, 1985'
    """
    return {key: table.title for key, table in TABLES.items()}
