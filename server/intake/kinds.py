"""Which taker takes in which kind of sheet, and in which order sheets go in."""

from server.intake.current import SampleTaker
from server.intake.electrolyte import ElectrolyteTaker
from server.intake.finds import FindTaker
from server.intake.lots import LotTaker
from server.intake.outages import OutageTaker
from server.intake.verdicts import Given, Taker
from server.intake.volts import VoltsTaker

ORDER = ("current", "counter", "outages", "lots", "electrolyte", "finds", "volts")
"""Voltages last: they are judged by the current and the outages of their time."""


def taker_for(sheet: str, given: Given, section_names: list[str]) -> Taker:
    """Give the taker of a kind of sheet."""
    match sheet:
        case "volts":
            return VoltsTaker(given, section_names)
        case "current" | "counter":
            return SampleTaker(given, section_names, sheet)
        case "lots":
            return LotTaker(given, section_names)
        case "outages":
            return OutageTaker(given, section_names)
        case "electrolyte":
            return ElectrolyteTaker(given, section_names)
        case "finds":
            return FindTaker(given, section_names)
        case _:
            raise ValueError(f"there is no sheet {sheet!r}; there are {', '.join(ORDER)}")
