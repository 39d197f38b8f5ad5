"""The processes of the trade: which metal, how many electrons, and what is usual for them."""

import math
from dataclasses import dataclass
from typing import Literal

from server.science.constants import (
    ALUMINIUM,
    CADMIUM,
    COBALT,
    COPPER,
    GOLD,
    LEAD,
    MANGANESE,
    NICKEL,
    SILVER,
    TIN,
    ZINC,
    Metal,
    metal,
)
from server.science.errors import ScienceError, UnknownName

Kind = Literal["electrowinning", "electrorefining", "molten salt electrolysis", "other"]

# Common practice: half-width of the band in which the copper shares below are believed.
WELL_KNOWN_SHARE_HALF_WIDTH = 0.10
# Common practice: half-width for processes whose share was taken over from a kindred one.
BORROWED_SHARE_HALF_WIDTH = 0.20


@dataclass(frozen=True)
class Process:
    """One process, with the values that stand in until the plant's own data give better ones.

    `typical_volts` is the usual band of one cell's voltage, V; it is for plausibility, not for
    passing or failing a cell. `resistive_share` is R_d I / V, the share of the cell voltage that
    follows the current at rated current, and `resistive_share_half_width` the half-width of the
    rectangular distribution in which it is believed. `typical_efficiency` is the middle of
    `efficiency_band`. `crop_days` is the usual growth time of a cathode, a starting value only.
    For process "other" nothing is usual: the bands are NaN, and so is the typical efficiency.
    """

    name: str
    metal: Metal
    kind: Kind
    typical_volts: tuple[float, float]
    resistive_share: float
    typical_efficiency: float
    crop_days: float
    efficiency_band: tuple[float, float]
    resistive_share_half_width: float = BORROWED_SHARE_HALF_WIDTH

    @property
    def has_reversible_voltage(self) -> bool:
        """Tell whether the cell must pay for a reaction, not only for resistance and rates."""
        return self.kind in ("electrowinning", "molten salt electrolysis")


# Volts, efficiency 85-95 %, crops 4-8 d: textbooks and world surveys of 2013 and 2018 (from
# memory; one plant's 4-5 d and about 90 % looked up). Share about 0.2: common practice.
COPPER_ELECTROWINNING = Process(
    "copper electrowinning", COPPER, "electrowinning", (1.8, 2.2), 0.20, 0.90, 6.0, (0.85, 0.95),
    WELL_KNOWN_SHARE_HALF_WIDTH,
)  # fmt: skip
# Volts and efficiency 92-98 %: textbooks (from memory; 0.35 V and 96 % in Aalto University
# ELEC-E8174 homework 3, looked up). Crops 6-14 d: refinery pages (looked up). Share: practice.
COPPER_ELECTROREFINING = Process(
    "copper electrorefining", COPPER, "electrorefining", (0.25, 0.40), 0.90, 0.95, 10.0,
    (0.92, 0.98), WELL_KNOWN_SHARE_HALF_WIDTH,
)  # fmt: skip
# Volts 3.3-3.5, efficiency 89-92 %: the 2008 zinc plant survey (Moats, Guerra, Gonzalez), as
# quoted in an open article of 2021 (looked up). Crops 24-72 h and the share: common practice.
ZINC_ELECTROWINNING = Process(
    "zinc electrowinning", ZINC, "electrowinning", (3.3, 3.5), 0.25, 0.905, 2.0, (0.89, 0.92),
    WELL_KNOWN_SHARE_HALF_WIDTH,
)  # fmt: skip
# Volts 3.2-4.0, efficiency 92-98 %: bagged sulfate cells, the trade (from memory). Crop of a
# week and the share, between copper and zinc with a bag added: common practice.
NICKEL_ELECTROWINNING = Process(
    "nickel electrowinning", NICKEL, "electrowinning", (3.2, 4.0), 0.30, 0.95, 7.0, (0.92, 0.98)
)
# Volts 1.6-3.0 for impure metal anodes behind diaphragms, efficiency 94-98 %, ten-day crops:
# the trade (from memory). Matte anodes run higher, up to 5 V. Share: common practice.
NICKEL_ELECTROREFINING = Process(
    "nickel electrorefining", NICKEL, "electrorefining", (1.6, 3.0), 0.70, 0.96, 10.0, (0.94, 0.98)
)
# Volts 3.5-5.0, efficiency 85-95 %: the trade (from memory); 94-97 % in the laboratory,
# J. Appl. Electrochem. 33 (2003) 43 (looked up). Crop and share: common practice.
COBALT_ELECTROWINNING = Process(
    "cobalt electrowinning", COBALT, "electrowinning", (3.5, 5.0), 0.30, 0.90, 5.0, (0.85, 0.95)
)
# Volts 4.2-5.2, efficiency 60-70 %: the trade (from memory); 82 % at best in the laboratory,
# Ilea et al., Hydrometallurgy 46 (1997) 149 (looked up). Crop and share: common practice.
MANGANESE_ELECTROWINNING = Process(
    "manganese electrowinning", MANGANESE, "electrowinning", (4.2, 5.2), 0.30, 0.65, 1.5,
    (0.60, 0.70),
)  # fmt: skip
# Efficiency 85-95 %: the trade (from memory, weak). Volts 2.5-3.2, daily strip: from memory.
# Share: taken over from zinc, whose bath it resembles.
CADMIUM_ELECTROWINNING = Process(
    "cadmium electrowinning", CADMIUM, "electrowinning", (2.5, 3.2), 0.25, 0.90, 1.0, (0.85, 0.95)
)
# Fluosilicate cells at 0.35-0.65 V, five-day cathodes: encyclopaedia article and a refinery tour
# page (looked up). Efficiency 93-97 %: from memory. Share: taken over from copper.
LEAD_ELECTROREFINING = Process(
    "lead electrorefining", LEAD, "electrorefining", (0.35, 0.65), 0.90, 0.95, 5.0, (0.93, 0.97)
)
# Efficiency 85-95 %: the trade (from memory, weak). Volts 0.3-0.6 (slime grows on the anode),
# six-day cathodes: from memory. Share: taken over from lead, less for the slime.
TIN_ELECTROREFINING = Process(
    "tin electrorefining", TIN, "electrorefining", (0.3, 0.6), 0.85, 0.90, 6.0, (0.85, 0.95)
)
# Volts 1.5-2.8 in conventional cells: Metals 10 (2020) 1596, abstract (looked up). Efficiency
# 92-98 %, crystals scraped through the day: common practice. Share: from copper, less for bags.
SILVER_ELECTROREFINING = Process(
    "silver electrorefining", SILVER, "electrorefining", (1.5, 2.8), 0.80, 0.95, 1.0, (0.92, 0.98)
)
# Chloride (Wohlwill) cells at 0.5-2.8 V: the trade (from memory). Efficiency 90-99 %, two-day
# cathodes, share: common practice. A bath with aurous gold reads above 1; use "other" for it.
GOLD_ELECTROREFINING = Process(
    "gold electrorefining", GOLD, "electrorefining", (0.5, 2.8), 0.80, 0.945, 2.0, (0.90, 0.99)
)
# Volts 4.0-4.5: public engineering notes quoting a thesis (looked up). Efficiency 90-96 %: the
# trade (from memory). Tapped daily; share of bath, lining and anodes: common practice.
ALUMINIUM_ELECTROLYSIS = Process(
    "aluminium electrolysis", ALUMINIUM, "molten salt electrolysis", (4.0, 4.5), 0.55, 0.93, 1.0,
    (0.90, 0.96),
)  # fmt: skip

# Every process that a plant file may name, "other" apart, in the order of the contract.
PROCESSES: dict[str, Process] = {
    known.name: known
    for known in (
        COPPER_ELECTROWINNING, COPPER_ELECTROREFINING, ZINC_ELECTROWINNING,
        NICKEL_ELECTROWINNING, NICKEL_ELECTROREFINING, COBALT_ELECTROWINNING,
        MANGANESE_ELECTROWINNING, CADMIUM_ELECTROWINNING, LEAD_ELECTROREFINING,
        TIN_ELECTROREFINING, SILVER_ELECTROREFINING, GOLD_ELECTROREFINING,
        ALUMINIUM_ELECTROLYSIS,
    )
}  # fmt: skip


def process(name: str, symbol: str | None = None, electrons: int | None = None) -> Process:
    """The process of a name, or "other" with the metal and electrons stated.

    For a named process the metal and electrons are known; stating them again is allowed when
    they agree. For "other" nothing is usual: volts and efficiency are NaN, the resistive share
    is the middle of what electrolytic cells show (0.1 to 0.9) with that whole width of doubt,
    and a week is put down for the crop until lots say otherwise.

    Parameters
    ----------
    name : str
        Name as in the plant file, capitals or not.
    symbol : str, optional
        Chemical symbol of the metal; required with "other".
    electrons : int, optional
        Electrons that deposit one atom; required with "other".

    Returns
    -------
    Process
        The process; for "other" with the metal at the stated valency.

    Raises
    ------
    UnknownName
        If the process or metal is not known; it offers the near ones.
    ScienceError
        If "other" lacks its metal or electrons, or a named process is given different ones.

    Source
    ------
    Names: the plant file's format. Values: see the line above each process.

    Example
    -------
    >>> process("Zinc electrowinning").metal.symbol
    'Zn'
    >>> process("other", symbol="Cr", electrons=3).metal.name
    'chromium'
    >>> process("copper electrowining")
    Traceback (most recent call last):
    server.science.errors.UnknownName: process: 'copper electrowining' is not known; near it: ...
    """
    wanted = " ".join(name.lower().split())
    if wanted == "other":
        if symbol is None:
            raise ScienceError("metal", found=None, allowed="a metal's symbol with process 'other'")
        if electrons is None:
            raise ScienceError("electrons", found=None, allowed="1 to 8 with process 'other'")
        return Process(
            "other", metal(symbol, electrons), "other", (math.nan, math.nan), 0.50, math.nan, 7.0,
            (math.nan, math.nan), 0.40,
        )  # fmt: skip
    if wanted not in PROCESSES:
        raise UnknownName("process", name, (*PROCESSES, "other"))
    known = PROCESSES[wanted]
    if symbol is not None and metal(symbol).symbol != known.metal.symbol:
        raise ScienceError("metal", found=symbol, allowed=f"{known.metal.symbol} in {known.name}")
    if electrons is not None and electrons != known.metal.electrons:
        allowed = f"{known.metal.electrons} in {known.name}; name the process 'other' to change it"
        raise ScienceError("electrons", found=electrons, allowed=allowed)
    return known
