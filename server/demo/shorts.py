"""Shorts: which cells grow them, how fast, and what ends them."""

import numpy as np

from server.demo.crops import Crop, crop_steps
from server.demo.recipe import STEP_MS, STEPS_PER_HOUR, PlannedShort, SectionRecipe
from server.demo.truth import ShortTruth
from server.science.arrays import Numbers

# The crew with the gaussmeter finds somewhat more than half of what is left long enough.
FOUND_SHARE = 0.6
FOUND_AFTER_H = 6.0
FOUND_WITHIN_H = 30.0
# A quarter of the shorts are there at once: a sheet that bent, a nodule that broke through.
SUDDEN_SHARE = 0.25
GROWTH_H = 9.0
# However many shorts a cell has, more than this share of its current still plates.
MOST_SHARE = 0.45


def grow_shorts(
    recipe: SectionRecipe, crops: list[Crop], start_ms: int, rng: np.random.Generator
) -> list[ShortTruth]:
    """Shorts that chance brings: their hazard grows with the square of the deposit's age."""
    begun = np.array([crop.from_step for crop in crops])
    lived = np.array([crop.to_step for crop in crops]) - begun
    expected = recipe.crop.shorts_per_crop * (lived / crop_steps(recipe)) ** 3
    shorts: list[ShortTruth] = []
    for nth in np.repeat(np.arange(len(crops)), rng.poisson(expected)).tolist():
        crop = crops[nth]
        onset = int(begun[nth] + lived[nth] * rng.random() ** (1.0 / 3.0))
        share = recipe.crop.short_share * rng.lognormal(0.0, 0.5)
        is_sudden = rng.random() < SUDDEN_SHARE
        growth_h = 0.0 if is_sudden else GROWTH_H * rng.lognormal(0.0, 0.6)
        found_h = FOUND_AFTER_H + rng.exponential(FOUND_WITHIN_H)
        is_findable = rng.random() < FOUND_SHARE
        found_step = onset + int(found_h * STEPS_PER_HOUR) if is_findable else crop.to_step
        if onset < crop.to_step:
            shorts.append(_short(recipe, crop, onset, found_step, growth_h, share, start_ms))
    return shorts


def open_shorts(
    recipe: SectionRecipe, crops: list[Crop], spared: set[int], start_ms: int, steps: int
) -> list[ShortTruth]:
    """Planned shorts that nobody has found yet, in the oldest deposits that hang at the end."""
    hanging = [crop for crop in crops if not crop.is_pulled and crop.cell not in spared]
    oldest_first = sorted(hanging, key=lambda crop: (crop.from_step, crop.cell))
    return [
        _short(
            recipe,
            crop,
            _onset(planned, crop, steps),
            crop.to_step,
            planned.growth_h,
            planned.share,
            start_ms,
        )
        for planned in recipe.planned.shorts
        for crop in [oldest_first[planned.oldest]]
    ]


def short_shares(shorts: list[ShortTruth], shape: tuple[int, int], start_ms: int) -> Numbers:
    """Share of each cell's current that its shorts take, by quarters and cells."""
    shares = np.zeros(shape)
    for short in shorts:
        onset = (short.from_ms - start_ms) // STEP_MS
        end = shape[0] if short.to_ms is None else (short.to_ms - start_ms) // STEP_MS
        grown = _grown(np.arange(end - onset), short.growth_h)
        final = grown[-1]
        shares[onset:end, short.cell - 1] += short.final_share * grown / final
    np.minimum(shares, MOST_SHARE, out=shares)
    return shares


def _onset(planned: PlannedShort, crop: Crop, steps: int) -> int:
    wanted = steps - int(planned.hours_before_end * STEPS_PER_HOUR)
    return min(max(wanted, crop.from_step + STEPS_PER_HOUR), steps - 1)


def _short(
    recipe: SectionRecipe,
    crop: Crop,
    onset: int,
    found_step: int,
    growth_h: float,
    share: float,
    start_ms: int,
) -> ShortTruth:
    end = min(found_step, crop.to_step)
    is_found = found_step < crop.to_step
    is_open = not is_found and not crop.is_pulled
    final_share = share * float(_grown(np.arange(end - onset), growth_h)[-1])
    return ShortTruth(
        cell=crop.cell,
        from_ms=start_ms + onset * STEP_MS,
        to_ms=None if is_open else start_ms + end * STEP_MS,
        ended_by="" if is_open else "find" if is_found else "pull",
        growth_h=growth_h,
        final_share=final_share,
        final_amps=final_share * recipe.rated_amps,
    )


def _grown(quarters: np.ndarray[tuple[int], np.dtype[np.int64]], growth_h: float) -> Numbers:
    """How far a short has grown after so many quarters, 0 to 1."""
    if growth_h == 0.0:
        return np.ones(quarters.size)
    grown: Numbers = 1.0 - np.exp(-(quarters + 0.5) / (STEPS_PER_HOUR * growth_h))
    return grown
