"""When cathodes are pulled, and what is then hanging in each cell at any time."""

from dataclasses import dataclass
from zoneinfo import ZoneInfo

import numpy as np
from numpy.typing import NDArray

from server.demo.chance import local_days, moment_of_day_ms
from server.demo.recipe import DAY_MS, HOUR_MS, STEP_MS, STEPS_PER_HOUR, SectionRecipe

# The crane begins at half past seven and takes a load every half hour.
FIRST_LOAD_MINUTES = 450
LOAD_EVERY_MINUTES = 30
# Nothing is worth pulling in the first hours of the record.
SHORTEST_CROP_MS = 6 * HOUR_MS


@dataclass(frozen=True)
class Pull:
    """One crane load: the cells, numbered from 1, whose cathodes were pulled together."""

    lot: str
    cells: tuple[int, ...]
    pulled_at_ms: int


@dataclass(frozen=True)
class Crop:
    """What grew in one cell between two pulls, in quarters since the start of the record."""

    cell: int
    from_step: int
    to_step: int
    is_pulled: bool


def plan_pulls(
    recipe: SectionRecipe, start_ms: int, end_ms: int, zone: ZoneInfo, rng: np.random.Generator
) -> tuple[Pull, ...]:
    """Every pull of a section: bay after bay, one bay a day, now and then a load comes late."""
    habits = recipe.crop
    cells = np.arange(recipe.cells)
    bay_of_cell = cells * habits.crop_days // recipe.cells
    pulls: list[Pull] = []
    for nth_day, day in enumerate(local_days(start_ms, end_ms, zone)):
        bay = (cells[bay_of_cell == nth_day % habits.crop_days] + 1).tolist()
        loads = [
            bay[i : i + habits.cells_per_lot] for i in range(0, len(bay), habits.cells_per_lot)
        ]
        for nth, load in enumerate(loads):
            minutes = FIRST_LOAD_MINUTES + nth * LOAD_EVERY_MINUTES
            late_hours = int(rng.integers(4, 20)) if rng.random() < habits.late_share else 0
            at_ms = moment_of_day_ms(day, minutes, zone) + late_hours * HOUR_MS
            at_ms = start_ms + (at_ms - start_ms) // STEP_MS * STEP_MS
            if start_ms + SHORTEST_CROP_MS <= at_ms < end_ms:
                pulls.append(Pull(f"{recipe.name}-{day:%y%m%d}-{nth + 1}", tuple(load), at_ms))
    return tuple(sorted(pulls, key=lambda pull: pull.pulled_at_ms))


def hung_steps(pulls: tuple[Pull, ...], cells: int, start_ms: int, steps: int) -> NDArray[np.int64]:
    """For each quarter and cell, the quarter in which the cathodes then hanging were hung."""
    hung = np.zeros((steps, cells), dtype=np.int64)
    for pull in pulls:
        step = (pull.pulled_at_ms - start_ms) // STEP_MS
        hung[step, np.array(pull.cells) - 1] = step
    np.maximum.accumulate(hung, axis=0, out=hung)
    return hung


def crops_of(pulls: tuple[Pull, ...], cells: int, start_ms: int, steps: int) -> list[Crop]:
    """All crops, cell by cell; the last of each cell is still hanging."""
    pulled: list[list[int]] = [[] for _ in range(cells)]
    for pull in pulls:
        for cell in pull.cells:
            pulled[cell - 1].append((pull.pulled_at_ms - start_ms) // STEP_MS)
    crops: list[Crop] = []
    for number, cell_pulls in enumerate(pulled, start=1):
        bounds = [0, *cell_pulls, steps]
        crops += [
            Crop(number, from_step, to_step, is_pulled=to_step < steps)
            for from_step, to_step in zip(bounds[:-1], bounds[1:], strict=True)
        ]
    return crops


def crop_steps(recipe: SectionRecipe) -> int:
    """Quarters of an hour in a full crop."""
    return recipe.crop.crop_days * DAY_MS // HOUR_MS * STEPS_PER_HOUR
