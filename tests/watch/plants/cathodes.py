"""When cathodes are pulled and hung, and what hangs in each cell at any time."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from tests.watch.plants.plant import Bypass, Moments, Numbers, Pull
from tests.watch.plants.scenario import (
    DAY_MS,
    HOUR_MS,
    START_MS,
    STEP_MS,
    STEPS_A_DAY,
    Scenario,
)

LOAD = 6
"""Cells to a load of the crane."""
FIRST_LOAD_STEP = 30
"""Half past seven."""
STEPS_A_LOAD = 2


@dataclass(frozen=True)
class Hung:
    """Crops of a section. Arrays are steps by cells."""

    pulls: tuple[Pull, ...]
    bypasses: tuple[Bypass, ...]
    hung_step: NDArray[np.int32]
    """The step in which the cathodes now hanging were hung; below zero before the record."""
    crop_of: NDArray[np.int32]
    in_service: NDArray[np.bool_]

    @cached_property
    def age_days(self) -> Numbers:
        """How long the cathodes have hung."""
        steps = np.arange(self.hung_step.shape[0])[:, None]
        return (steps - self.hung_step) / STEPS_A_DAY


def hang(scenario: Scenario, rng: np.random.Generator) -> Hung:
    """Bay after bay is pulled, a bay a day, or all of them on one day."""
    cells, days, steps = scenario.cells, scenario.crop_days, scenario.steps
    number = np.arange(cells)
    bay = np.zeros(cells, np.int64) if scenario.crops.at_once else number * days // cells
    place = number - np.searchsorted(bay, bay)
    step_of_load = FIRST_LOAD_STEP + place // LOAD * STEPS_A_LOAD
    due = bay * STEPS_A_DAY + step_of_load
    first_hung = due - days * STEPS_A_DAY
    pulled: dict[int, list[int]] = {}
    for cell in range(cells):
        for step in range(int(due[cell]), steps, days * STEPS_A_DAY):
            late = int(rng.integers(16, 80)) if rng.random() < scenario.crops.late else 0
            early = -1
            if rng.random() < scenario.crops.rehung:
                early = step - int(rng.uniform(0.2, 0.8) * days * STEPS_A_DAY)
            for at in (early, step + late):
                if 24 <= at < steps:
                    pulled.setdefault(at, []).append(cell)
    bypasses, out = _bypass(scenario, rng)
    returned: dict[int, list[int]] = {}
    for bypass in bypasses:
        begin, end = ((at - START_MS) // STEP_MS for at in (bypass.from_ms, bypass.to_ms))
        for step in [s for s in pulled if begin <= s <= end]:
            pulled[step] = [cell for cell in pulled[step] if cell != bypass.cell - 1]
        pulled.setdefault(begin, []).append(bypass.cell - 1)
        returned.setdefault(end, []).append(bypass.cell - 1)
    return _hung(first_hung, pulled, returned, bypasses, out)


def _bypass(
    scenario: Scenario, rng: np.random.Generator
) -> tuple[tuple[Bypass, ...], NDArray[np.bool_]]:
    """Cells out of the circuit for one to five days; their cathodes are new thereafter."""
    out = np.zeros((scenario.steps, scenario.cells), bool)
    bypasses = []
    times = scenario.crops.bypasses
    for cell in rng.choice(scenario.cells, times, replace=False).tolist():
        begin = int(rng.integers(2 * STEPS_A_DAY, scenario.steps - 7 * STEPS_A_DAY))
        end = begin + int(rng.integers(STEPS_A_DAY, 5 * STEPS_A_DAY))
        out[begin:end, cell] = True
        bypasses.append(Bypass(cell + 1, START_MS + begin * STEP_MS, START_MS + end * STEP_MS))
    return tuple(bypasses), out


def _hung(
    first_hung: Moments,
    pulled: dict[int, list[int]],
    returned: dict[int, list[int]],
    bypasses: tuple[Bypass, ...],
    out: NDArray[np.bool_],
) -> Hung:
    hung = np.full(out.shape, np.iinfo(np.int32).min, np.int32)
    is_new = np.zeros(out.shape, bool)
    hung[0] = first_hung
    last = first_hung.copy()
    pulls = []
    for step in sorted({*pulled, *returned}):
        going = sorted(set(pulled.get(step, [])))
        for hung_step in sorted({int(last[cell]) for cell in going}):
            cells = tuple(cell + 1 for cell in going if last[cell] == hung_step)
            pulls.append(
                Pull(
                    f"{step}-{cells[0]}",
                    cells,
                    START_MS + step * STEP_MS,
                    START_MS + hung_step * STEP_MS,
                )
            )
        going += returned.get(step, [])
        hung[step, going] = step
        is_new[step, going] = True
        last[going] = step
    hung = np.maximum.accumulate(hung, axis=0)
    crop_of = np.cumsum(is_new, axis=0, dtype=np.int32)
    return Hung(tuple(pulls), bypasses, hung, crop_of, ~out)


def weighed_ms(pull: Pull) -> int:
    """When a load is on the scale: between half an hour and three hours later."""
    return (
        pull.pulled_ms
        + HOUR_MS // 2
        + (pull.pulled_ms // DAY_MS * 7 + pull.cells[0]) % 10 * (HOUR_MS // 4)
    )
