"""A large made-up plant in the sheets that a plant has: as many cells and days as asked for."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

import numpy as np

DAY_S = 86_400
HOUR_S = 3_600
ROUND_HOURS = (6, 14, 22)
CROP_DAYS = 7
CELLS_A_LOT = 15

_TANKHOUSE = """\
[tankhouse]
name = "Bench House"
time_zone = "UTC"
currency = "USD"
energy_price_per_kwh = 0.09

[[shift]]
name = "night"
starts = "00:00"

[[shift]]
name = "day"
starts = "08:00"

[[shift]]
name = "evening"
starts = "16:00"
"""

_SECTION = """
[[section]]
name = "{name}"
process = "copper electrowinning"
cells = {cells}
rows = 2
cathodes_per_cell = 60
cathode_area_m2 = 2.0
rated_current_ka = 36.0
metal_value_per_kg = 9.2
differential_resistance_uohm = 11.0
[section.targets]
current_efficiency_pct = 93.0
specific_energy_kwh_t = 1950.0
cell_volts = [1.85, 2.15]
"""


@dataclass(frozen=True)
class Plant:
    """Sections of equal size, read three times a day up to a moment."""

    sections: int
    cells: int
    days: int
    end_s: int
    """Midnight after the last day, seconds since 1970."""
    seed: int = 20_261_201

    @property
    def names(self) -> list[str]:
        """The sections' names."""
        return [f"S{number + 1:02}" for number in range(self.sections)]

    @property
    def readings(self) -> int:
        """How many voltages the rounds bring."""
        return self.sections * self.cells * self.days * len(ROUND_HOURS)

    @property
    def start_s(self) -> int:
        """The first midnight, seconds since 1970."""
        return self.end_s - self.days * DAY_S

    def write(self, folder: Path) -> None:
        """Write plant.toml and every sheet into a folder."""
        folder.mkdir(parents=True, exist_ok=True)
        sections = "".join(_SECTION.format(name=name, cells=self.cells) for name in self.names)
        (folder / "plant.toml").write_text(_TANKHOUSE + sections)
        with (folder / "current.csv").open("w") as sheet:
            sheet.write("at,section,current_ka\n")
            sheet.writelines(self._current())
        with (folder / "volts.csv").open("w") as sheet:
            sheet.write("at,section,cell,volts\n")
            sheet.writelines(self._volts())
        with (folder / "lots.csv").open("w") as sheet:
            sheet.write(
                "weighed_at,lot,section,cells,pulled_at,started_at,cathodes_per_cell,net_kg,"
                "starter_kg\n"
            )
            sheet.writelines(self._lots())

    def _current(self) -> Iterator[str]:
        rng = np.random.default_rng(self.seed)
        for hour_s in range(self.start_s, self.end_s, HOUR_S):
            at = _written(hour_s)
            for name, ka in zip(self.names, rng.normal(36, 0.2, self.sections), strict=True):
                yield f"{at},{name},{ka:.3f}\n"

    def _volts(self) -> Iterator[str]:
        """Round by round, as the voltmeter was carried."""
        rng = np.random.default_rng(self.seed + 1)
        level = rng.normal(2.0, 0.015, (self.sections, self.cells))
        for day_s in range(self.start_s, self.end_s, DAY_S):
            for hour in ROUND_HOURS:
                at = _written(day_s + hour * HOUR_S)
                volts = level + rng.normal(0, 0.004, level.shape)
                for name, row in zip(self.names, volts.tolist(), strict=True):
                    yield "".join(
                        f"{at},{name},{cell},{v:.3f}\n" for cell, v in enumerate(row, start=1)
                    )

    def _lots(self) -> Iterator[str]:
        """Each day the cells whose turn it is, fifteen to a lot."""
        rng = np.random.default_rng(self.seed + 2)
        for day in range(CROP_DAYS, self.days):
            pulled_s = self.start_s + day * DAY_S + 10 * HOUR_S
            for name in self.names:
                for first in range(1 + day % CROP_DAYS * CELLS_A_LOT, self.cells + 1, 7 * 15):
                    last = min(first + CELLS_A_LOT - 1, self.cells)
                    kg = (last - first + 1) * 7171 * rng.normal(0.93, 0.004)
                    yield (
                        f"{_written(pulled_s + 2 * HOUR_S)},{name}-{day}-{first},{name},"
                        f"{first}-{last},{_written(pulled_s)},"
                        f"{_written(pulled_s - CROP_DAYS * DAY_S)},60,{kg:.1f},0\n"
                    )


def _written(moment_s: int) -> str:
    return datetime.fromtimestamp(moment_s, UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
