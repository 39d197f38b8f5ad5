"""Lots on the scale: what hung, what the scale showed, when it showed it."""

import numpy as np

from server.demo.crops import Pull
from server.demo.recipe import STEP_MS, SectionRecipe
from server.demo.truth import LotTruth, ScaleFault, SectionTruth

# A lot is on the scale 30 minutes to 3 hours after it was pulled, when it is washed and stripped.
WEIGHED_AFTER_STEPS = (2, 13)
STARTER_SPREAD_SHARE = 0.01


def weigh_lots(
    truth: SectionTruth, recipe: SectionRecipe, pulls: tuple[Pull, ...], rng: np.random.Generator
) -> tuple[LotTruth, ...]:
    """Every lot pulled, also those that are not yet on the scale when the record ends."""
    hung_at_ms = [truth.start_ms] * recipe.cells
    lots: list[LotTruth] = []
    for pull in pulls:
        started_at_ms = hung_at_ms[pull.cells[0] - 1]
        metal_kg = truth.made_kg(started_at_ms, pull.pulled_at_ms)[np.array(pull.cells) - 1].sum()
        cathodes = recipe.cathodes_per_cell * len(pull.cells)
        starter = recipe.crop.starter_kg_per_cathode * rng.normal(1.0, STARTER_SPREAD_SHARE)
        starter_kg = round(starter * cathodes, 1)
        weighed_at_ms = pull.pulled_at_ms + int(rng.integers(*WEIGHED_AFTER_STEPS)) * STEP_MS
        reads = 1.0 + scale_error(truth.events.scale_faults, weighed_at_ms)
        reads *= rng.normal(1.0, recipe.pen.scale_noise_share)
        step_kg = recipe.pen.scale_step_kg
        lots.append(
            LotTruth(
                lot=pull.lot,
                cells=pull.cells,
                cathodes=cathodes,
                started_at_ms=started_at_ms,
                pulled_at_ms=pull.pulled_at_ms,
                weighed_at_ms=weighed_at_ms,
                metal_kg=float(metal_kg),
                starter_kg=starter_kg,
                net_kg=round(float((metal_kg + starter_kg) * reads) / step_kg) * step_kg,
            )
        )
        for cell in pull.cells:
            hung_at_ms[cell - 1] = pull.pulled_at_ms
    return tuple(lots)


def scale_error(faults: tuple[ScaleFault, ...], at_ms: int) -> float:
    """Share by which the scale reads wrong at a moment: that of the last fault begun."""
    begun = [fault for fault in faults if fault.from_ms <= at_ms]
    return max(begun, key=lambda fault: fault.from_ms).share if begun else 0.0
