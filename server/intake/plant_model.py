"""What a plant file holds, key by key, in the units in which people write it."""

import re
from collections.abc import Sequence
from difflib import get_close_matches
from functools import lru_cache
from typing import Annotated
from zoneinfo import available_timezones

from babel import Locale
from pydantic import (
    AfterValidator,
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    model_validator,
)

from server.intake.plant_faults import WrongTogether
from server.science.equilibrium.tables import DEFAULT_TABLE, TABLES, potential_table
from server.science.errors import ScienceError, UnknownName
from server.science.processes import Process, process
from server.storage.walk import read_walk_order


class _Strict(BaseModel):
    model_config = ConfigDict(
        strict=True, extra="forbid", frozen=True, allow_inf_nan=False, str_strip_whitespace=True
    )


_MINUTES = re.compile(r"([01]?\d|2[0-3]):([0-5]\d)")


def _zone(name: str) -> str:
    if name not in available_timezones():
        near = get_close_matches(name, sorted(available_timezones()), n=1)
        meant = f"; is “{near[0]}” meant?" if near else ""
        raise ValueError(f"a time zone of the IANA list{meant}")
    return name


def _currency(code: str) -> str:
    if code not in _currencies():
        raise ValueError("a currency code of ISO 4217 such as USD")
    return code


@lru_cache
def _currencies() -> frozenset[str]:
    return frozenset(Locale("en").currencies)


def _potentials(key: str | None) -> str | None:
    if not key:
        return None
    try:
        return potential_table(key).key
    except UnknownName:
        raise ValueError(f"one of {', '.join(TABLES)}") from None


def _starts(text: str) -> str:
    if not _MINUTES.fullmatch(text):
        raise ValueError('a time of day such as "07:30"')
    return text


def _name(text: str) -> str:
    if not text or len(text) > 200 or not text.isprintable():
        raise ValueError("a name")
    return text


def _listed_walk(value: object) -> object:
    """A list of cell numbers means the same as their text."""
    if isinstance(value, list) and all(isinstance(number, int) for number in value):
        return ";".join(map(str, value))
    return value


Name = Annotated[str, AfterValidator(_name), Field(description="a name in quotation marks")]
Percent = Annotated[float, Field(gt=0, le=100, description="a percentage above 0, up to 100")]


class PlantShift(_Strict):
    """A shift of the day."""

    name: Name
    starts: Annotated[
        str, AfterValidator(_starts), Field(description='a time of day such as "07:30"')
    ]

    @property
    def starts_minute(self) -> int:
        """Minutes after local midnight."""
        hours, minutes = self.starts.split(":")
        return int(hours) * 60 + int(minutes)


class PlantTankhouse(_Strict):
    """The building and its books."""

    name: Name
    time_zone: Annotated[
        str,
        AfterValidator(_zone),
        Field(description='a time zone of the IANA list such as "America/Santiago"'),
    ]
    currency: Annotated[
        str, AfterValidator(_currency), Field(description='a currency code such as "USD"')
    ]
    energy_price_per_kwh: Annotated[
        float, Field(ge=0, le=1e6, description="a price of zero or more")
    ]
    standard_potentials: Annotated[
        str | None,
        AfterValidator(_potentials),
        Field(description="a table of standard potentials such as " + DEFAULT_TABLE.key),
    ] = None


class PlantTargets(_Strict):
    """What a section is meant to reach."""

    current_efficiency_pct: Percent
    specific_energy_kwh_t: Annotated[
        float, Field(gt=0, le=1e6, description="kilowatt-hours per tonne, above 0")
    ]
    cell_volts: Annotated[
        tuple[float, float],
        BeforeValidator(lambda value: tuple(value) if isinstance(value, list) else value),
        Field(description="two voltages, the lower one first: [low, high]"),
    ]

    @model_validator(mode="after")
    def _in_order(self) -> "PlantTargets":
        low, high = self.cell_volts
        if not 0 < low < high <= 100:
            raise WrongTogether(
                "cell_volts", list(self.cell_volts), "two voltages, the lower one first"
            )
        return self


class PlantSection(_Strict):
    """Cells in one electrical series."""

    name: Name
    process: Annotated[str, Field(description="a process such as copper electrowinning")]
    metal: Annotated[str | None, Field(description='the symbol of a metal such as "Cu"')] = None
    electrons: Annotated[
        int | None, Field(ge=1, le=8, description="electrons that deposit one atom, 1 to 8")
    ] = None
    cells: Annotated[int, Field(ge=1, le=100_000, description="a number of cells, 1 or more")]
    rows: Annotated[int, Field(ge=1, le=1000, description="a number of rows, 1 or more")]
    cathodes_per_cell: Annotated[
        int, Field(ge=1, le=10_000, description="a number of cathodes, 1 or more")
    ]
    cathode_area_m2: Annotated[
        float, Field(gt=0, le=1000, description="square metres, both faces, above 0")
    ]
    rated_current_ka: Annotated[float, Field(gt=0, le=1000, description="kiloamperes, above 0")]
    metal_value_per_kg: Annotated[float, Field(ge=0, le=1e9, description="a value of zero or more")]
    differential_resistance_uohm: Annotated[
        float | None, Field(gt=0, le=1e6, description="micro-ohms of one cell, above 0")
    ] = None
    rectifier_efficiency_pct: Annotated[
        float | None, Field(gt=0, le=100, description="a percentage above 0, up to 100")
    ] = None
    meter_accuracy_mv: Annotated[float, Field(gt=0, le=1000, description="millivolts, above 0")] = (
        2.0
    )
    current_accuracy_pct: Percent = 0.5
    scale_accuracy_pct: Percent = 0.2
    walk_order: Annotated[
        str,
        BeforeValidator(_listed_walk),
        Field(description='"snake", or cells in walking order such as "1-24;48-25"'),
    ] = ""
    bus_volts: Annotated[
        float | None, Field(gt=0, le=10_000, description="volts of the whole section, above 0")
    ] = None
    electrode_gap_mm: Annotated[
        float | None,
        Field(gt=0, le=1000, description="millimetres from anode face to cathode face, above 0"),
    ] = None
    conductivity_s_m: Annotated[
        float | None, Field(ge=-1000, le=1000, description="siemens per metre")
    ] = None
    conductivity_at_c: Annotated[
        float | None, Field(ge=-20, le=150, description="degrees Celsius, -20 to 150")
    ] = None
    conductivity_per_c: Annotated[
        float | None, Field(ge=-10, le=10, description="S/m by the degree, -10 to 10")
    ] = None
    conductivity_per_metal_g_l: Annotated[
        float | None, Field(ge=-10, le=10, description="S/m by the g/L of metal, -10 to 10")
    ] = None
    conductivity_per_acid_g_l: Annotated[
        float | None, Field(ge=-10, le=10, description="S/m by the g/L of acid, -10 to 10")
    ] = None
    conductivity_accuracy_pct: Annotated[
        float | None, Field(gt=0, le=100, description="a percentage above 0, up to 100")
    ] = None
    targets: Annotated[
        PlantTargets, Field(description="a table [section.targets] below its section")
    ]

    @model_validator(mode="after")
    def _makes_sense(self) -> "PlantSection":
        if self.rows > self.cells:
            raise WrongTogether("rows", self.rows, f"no more rows than cells, {self.cells}")
        try:
            self.chemistry()
        except UnknownName as error:
            near = f"{', '.join(error.near)}, if that is meant" if error.near else error.allowed
            raise WrongTogether(error.quantity, error.found, near) from None
        except ScienceError as error:
            key = error.quantity if error.quantity in ("metal", "electrons") else "process"
            raise WrongTogether(key, error.found, error.allowed) from None
        try:
            read_walk_order(self.walk_order, self.cells, self.rows)
        except ValueError as error:
            expected = f"each cell once, in walking order ({error})"
            raise WrongTogether("walk_order", self.walk_order, expected) from None
        self._conductivity_makes_sense()
        return self

    def _conductivity_makes_sense(self) -> None:
        """Refuse parts of a straight line without the others that it needs."""
        slopes = {
            key: getattr(self, key)
            for key in ("conductivity_per_metal_g_l", "conductivity_per_acid_g_l")
        }
        of_it = {
            "conductivity_at_c": self.conductivity_at_c,
            "conductivity_per_c": self.conductivity_per_c,
            "conductivity_accuracy_pct": self.conductivity_accuracy_pct,
            **slopes,
        }
        if self.conductivity_s_m is None:
            for key, value in of_it.items():
                if value is not None:
                    raise WrongTogether(key, value, "conductivity_s_m beside it")
            return
        if self.conductivity_at_c is None:
            raise WrongTogether("conductivity_at_c", None, "the temperature of conductivity_s_m")
        if self.conductivity_s_m <= 0 and not any(slopes.values()):
            raise WrongTogether("conductivity_s_m", self.conductivity_s_m, "S/m above 0")

    def chemistry(self) -> Process:
        """The process with its metal and electrons."""
        return process(self.process, self.metal, self.electrons)


class PlantFile(_Strict):
    """A whole plant file."""

    tankhouse: Annotated[PlantTankhouse, Field(description="a table [tankhouse]")]
    shift: Annotated[
        list[PlantShift], Field(min_length=1, description="at least one table [[shift]]")
    ]
    section: Annotated[
        list[PlantSection], Field(min_length=1, description="at least one table [[section]]")
    ]

    @model_validator(mode="after")
    def _once_each(self) -> "PlantFile":
        starts = [shift.starts_minute for shift in self.shift]
        for key, texts, is_twice in (
            ("shift.starts", [s.starts for s in self.shift], len(set(starts)) < len(starts)),
            ("shift.name", names := [s.name for s in self.shift], _repeats(names)),
            ("section.name", names := [s.name for s in self.section], _repeats(names)),
        ):
            if is_twice:
                raise WrongTogether(key, ", ".join(texts), "each of them once")
        return self


def _repeats(names: Sequence[str]) -> bool:
    return len({name.casefold() for name in names}) < len(names)
