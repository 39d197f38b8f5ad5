"""Rounds with the voltmeter: walked, read, rounded, written, and sometimes written wrong."""

from dataclasses import dataclass
from zoneinfo import ZoneInfo

import numpy as np

from server.demo.chance import local_days, moment_of_day_ms
from server.demo.recipe import DAY_MS, MINUTE_MS, SectionRecipe
from server.demo.truth import SectionTruth, SlipTruth
from server.science.arrays import Moments, Numbers

SLIP_KINDS = ("unit", "swapped digits", "row")
# Nobody reads a section that is off: below this share of the rated current there is no round.
LEAST_CURRENT_SHARE = 0.05
ROW_SLIP_CELLS = (5, 12)
# One slip is always recent enough to be met on the first pages.
RECENT_ROUNDS = 6


@dataclass(frozen=True)
class Rounds:
    """Readings as written, by rounds and cells; NaN where none was written."""

    at_ms: Moments
    volts: Numbers


def walk_rounds(
    truth: SectionTruth,
    recipe: SectionRecipe,
    shift_minutes: tuple[int, ...],
    zone: ZoneInfo,
    rng: np.random.Generator,
) -> tuple[Rounds, tuple[SlipTruth, ...]]:
    """Every round up to the end of the record; one under way ends with the last cell read."""
    pen = recipe.pen
    starts_ms = np.array(
        [
            moment_of_day_ms(day, starts, zone) + pen.round_minutes * MINUTE_MS
            for day in local_days(truth.start_ms, truth.end_ms, zone)
            for starts in shift_minutes
        ],
        dtype=np.int64,
    )
    starts_ms += rng.integers(0, 11, starts_ms.size) * MINUTE_MS
    starts_ms = starts_ms[(starts_ms >= truth.start_ms) & (starts_ms <= truth.end_ms)]
    cells = np.arange(1, recipe.cells + 1)
    at_ms = starts_ms[:, np.newaxis] + (cells - 1) * pen.walk_seconds * 1000
    is_past = at_ms <= truth.end_ms
    seen_ms = np.where(is_past, at_ms, truth.start_ms)
    is_read = is_past & truth.in_service_at(seen_ms, cells)
    is_read &= truth.amps_at(seen_ms) > LEAST_CURRENT_SHARE * recipe.rated_amps
    is_read &= rng.random(at_ms.shape) >= pen.missing_share
    is_read &= rng.random((starts_ms.size, 1)) >= pen.missed_round_share
    volts = truth.volts_at(seen_ms, cells)
    volts += rng.normal(0.0, pen.reader_spread_v, (starts_ms.size, 1))
    volts += rng.normal(0.0, pen.meter_noise_v, at_ms.shape)
    volts[~is_read] = np.nan
    written: Numbers = np.round(volts, pen.decimals)
    slips = _slip(written, at_ms, recipe, truth.end_ms - truth.start_ms, rng)
    return Rounds(at_ms, written), slips


def _slip(
    written: Numbers,
    at_ms: Moments,
    recipe: SectionRecipe,
    lasting_ms: int,
    rng: np.random.Generator,
) -> tuple[SlipTruth, ...]:
    """Spoil a few readings, kind after kind, and say which."""
    wanted = round(recipe.pen.slips_per_month * lasting_ms / (30 * DAY_MS))
    slips: list[SlipTruth] = []
    used_rounds: set[int] = set()
    while len(slips) < wanted:
        earliest = max(len(written) - RECENT_ROUNDS, 0) if not slips else 0
        in_round = int(rng.integers(earliest, len(written)))
        first = int(rng.integers(0, recipe.cells - ROW_SLIP_CELLS[1]))
        kind = SLIP_KINDS[len(slips) % len(SLIP_KINDS)]
        last = first + (int(rng.integers(*ROW_SLIP_CELLS)) if kind == "row" else 1)
        meant = written[in_round, first : last + 1].copy()
        if in_round in used_rounds or np.isnan(meant).any():
            continue
        used_rounds.add(in_round)
        if kind == "row":
            slipped = meant[1:]
        elif kind == "unit":
            slipped = np.round(meant[:1] * 1000.0)
        else:
            slipped = np.array([swapped_digits(float(meant[0]), recipe.pen.decimals)])
        written[in_round, first:last] = slipped
        slips.append(
            SlipTruth(
                kind=kind,
                at_ms=int(at_ms[in_round, first]),
                cells=tuple(range(first + 1, last + 1)),
                meant_volts=tuple(meant[:-1].tolist()),
                written_volts=tuple(slipped.tolist()),
            )
        )
    return tuple(sorted(slips, key=lambda slip: slip.at_ms))


def swapped_digits(volts: float, decimals: int) -> float:
    """The reading with two neighbouring digits the wrong way round, the first two that differ.

    >>> swapped_digits(2.035, 3)
    2.305
    >>> swapped_digits(3.332, 3)
    3.323
    """
    digits = list(f"{volts:.{decimals}f}")
    places = [i for i in range(2, len(digits) - 1) if digits[i] != digits[i + 1]] or [0]
    first = places[0]
    second = first + 1 if first else 2
    digits[first], digits[second] = digits[second], digits[first]
    return float("".join(digits))
