"""Metal that hangs in the cells: charge since it was hung, times what the evidence says of it."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.accounts.charge import charges_at
from server.accounts.crops import LOOK_BACK, hanging
from server.accounts.doubt import STOCK_MODEL, STOCK_SHAPE
from server.accounts.periods import DAY_MS
from server.science.constants import Metal
from server.science.faraday import equivalent_kg_c
from server.storage.current import bypasses_of
from server.storage.lots import crops_pulled, last_crop_of_each, last_crops_of_cell
from server.storage.plant import FROM_THE_START_MS, SectionPlan

Numbers = NDArray[np.float64]

_RECENT_MS = 45 * DAY_MS
"""How far back a cell's crops say something about its efficiency now."""

_RECENT_CROPS = 5

_LONGEST_CROP_MS = 90 * DAY_MS
"""How far ahead a lot is looked for whose cathodes hung already."""


@dataclass(frozen=True)
class Stock:
    """Metal still hanging in the cells of a section at a moment, per cell.

    What is pulled at that very moment hangs still.
    """

    at_ms: int
    kg: Numbers
    started_ms: NDArray[np.int64]
    """When the oldest cathodes of each cell were hung; 0: before its first lot."""
    shown_efficiency: Numbers
    """What each cell's recent crops showed; NaN where it had none."""
    doubts_kg: Mapping[tuple[int, int], float]
    """Standard uncertainty, from the judgement alone, of each (cell's place, moment hung)."""

    @property
    def u_kg(self) -> float:
        """Standard uncertainty of the sum from the judgement alone, without scale and current.

        What is judged alike errs alike: the parts' uncertainties are added up.
        """
        return sum(self.doubts_kg.values())

    @property
    def total_kg(self) -> float:
        """Summed over the cells."""
        return float(self.kg.sum())


@dataclass(frozen=True)
class _Parts:
    """Cathodes that were hung together, one entry for each moment and cell."""

    place: NDArray[np.int64]
    started_ms: NDArray[np.int64]
    kg_per_c: Numbers
    """Metal per coulomb through the cell."""
    relative_u: Numbers


class StockBook:
    """What hung in a section's cells at any moment of a time: crops and current, loaded once."""

    def __init__(
        self, session: Session, section: SectionPlan, metal: Metal, from_ms: int, to_ms: int
    ) -> None:
        self._session = session
        self._section = section
        self._kg_per_c = float(equivalent_kg_c(metal))
        crops = crops_pulled(session, section.id, from_ms - _RECENT_MS, to_ms + _LONGEST_CROP_MS)
        # Of a cell that was not pulled lately, the last pull says since when its cathodes hang.
        lately = set(crops["cell_id"][crops["pulled_ms"] < from_ms].tolist())
        others = [cell_id for cell_id in section.cell_ids if cell_id not in lately]
        former = last_crop_of_each(session, others, from_ms - _RECENT_MS)
        self._never_before = set(others) - set(former["cell_id"].tolist())
        """Cells of which no crop was pulled before those at hand."""
        self._crops = np.concatenate((former, crops))
        self._place = np.searchsorted(section.cell_ids, self._crops["cell_id"])
        charge_c = self._crops["charge_c"]
        with np.errstate(divide="ignore", invalid="ignore"):
            self._kg_per_crop_c = np.where(charge_c > 0, self._crops["metal_kg"] / charge_c, np.nan)
        self._from_ms = from_ms - _RECENT_MS
        self._kept: dict[int, Stock] = {}
        self._charge_at: dict[int, float] = {}
        self._bypasses = bypasses_of(session, section.cell_ids, self._from_ms, to_ms)

    def at(self, at_ms: int) -> Stock:
        """Metal that hangs in each cell at a moment; each moment is worked out once."""
        if at_ms not in self._kept:
            self._kept[at_ms] = self._at(at_ms)
        return self._kept[at_ms]

    def _at(self, at_ms: int) -> Stock:
        """Metal that hangs in each cell at a moment.

        Cathodes whose lot has been weighed since carry the part of its metal that their charge
        up to the moment is of their whole charge. The others carry the charge since they were
        hung, times the efficiency that the cell's recent crops showed (the median of its last
        five within 45 days; else the section's over that time; else the section's target). The
        median, since a short takes metal from few crops and mostly late in their growth: the
        mean of finished crops would judge young deposits too low.
        """
        terms = self._section.terms_at(at_ms)
        cells, there = len(self._section.cell_ids), terms.cells
        pulled_ms, started_ms = self._crops["pulled_ms"], self._crops["started_ms"]
        recent = np.arange(*np.searchsorted(pulled_ms, [at_ms - _RECENT_MS, at_ms]))
        later = np.flatnonzero((pulled_ms >= at_ms) & (started_ms < at_ms))
        shown_efficiency, efficiency = np.full(cells, np.nan), np.full(cells, np.nan)
        shown_efficiency[:there], centre = self._efficiencies(recent, there)
        judged = terms.target_current_efficiency if np.isnan(centre) else centre
        efficiency[:there] = np.where(
            np.isnan(shown_efficiency[:there]), judged, shown_efficiency[:there]
        )
        # Place -1 is that of no crop.
        pulled_ms, started_ms = np.append(pulled_ms, 0), np.append(started_ms, 0)
        cathodes = np.append(self._crops["cathodes"], 0)
        kg_per_crop_c = np.append(self._kg_per_crop_c, np.nan)
        last = np.full(cells, -1)
        before = np.arange(np.searchsorted(pulled_ms[:-1], at_ms))
        last[self._place[before]] = before
        ahead = np.full(cells, -1)
        ahead[self._place[later]] = later
        count = np.bincount(self._place[later], minlength=cells)
        # The usual cell: all of its cathodes are pulled together.
        is_usual = (last >= 0) & (cathodes[last] == terms.cathodes_per_cell) & (count <= 1)
        is_usual &= (count == 0) | (cathodes[ahead] == terms.cathodes_per_cell)
        is_usual[there:] = False
        is_known = is_usual & (count == 1) & np.isfinite(kg_per_crop_c[ahead])
        started = np.where(is_usual, pulled_ms[last], 0)
        started = np.where(is_usual & (count == 1), started_ms[ahead], started)
        shown = np.where(is_known, kg_per_crop_c[ahead], self._kg_per_c * np.nan_to_num(efficiency))
        usual = np.flatnonzero(is_usual)
        parts = [
            _Parts(
                usual,
                started[usual],
                shown[usual],
                np.where(is_known[usual], STOCK_SHAPE, STOCK_MODEL),
            )
        ]
        for place in np.flatnonzero(~is_usual[:there]).tolist():
            own = before[self._place[before] == place]
            own_later = later[self._place[later] == place]
            kg_per_c = self._kg_per_c * float(efficiency[place])
            cell = self._unusual(place, own, own_later, terms.cathodes_per_cell, kg_per_c, at_ms)
            parts.append(cell)
            started[place] = cell.started_ms.min() if len(cell.started_ms) else 0
        kg, doubts_kg = self._filled(at_ms, parts)
        return Stock(
            at_ms=at_ms,
            kg=kg,
            started_ms=started,
            shown_efficiency=shown_efficiency,
            doubts_kg=doubts_kg,
        )

    def _efficiencies(self, recent: NDArray[np.int64], there: int) -> tuple[Numbers, float]:
        """What each cell's recent crops showed, and all of them together; NaN without any."""
        shown = self._kg_per_crop_c[recent] / self._kg_per_c
        place, shown = self._place[recent][np.isfinite(shown)], shown[np.isfinite(shown)]
        centre = float(np.median(shown)) if len(shown) else float("nan")
        order = np.argsort(place, kind="stable")
        place, shown = place[order], shown[order]
        from_end = np.searchsorted(place, place, side="right") - 1 - np.arange(len(place))
        last = (from_end < _RECENT_CROPS) & (place < there)
        table = np.full((there, _RECENT_CROPS), np.nan)
        table[place[last], from_end[last]] = shown[last]
        table.sort(axis=1)
        count = np.isfinite(table).sum(axis=1)
        rows = np.arange(there)
        middle = (table[rows, np.maximum(count - 1, 0) // 2] + table[rows, count // 2]) / 2
        return middle, centre

    def _unusual(
        self,
        place: int,
        own: NDArray[np.int64],
        later: NDArray[np.int64],
        cathodes: int,
        judged_kg_per_c: float,
        at_ms: int,
    ) -> _Parts:
        """Parts of a cell whose cathodes are not all pulled together, or not lately."""
        groups = {h.started_ms: h.cathodes for h in hanging(cathodes, self._crops[own])}
        cell_id = self._section.cell_ids[place]
        if FROM_THE_START_MS in groups and cell_id not in self._never_before:
            # Some cathodes hang since before these crops: look further back for their pull.
            former = last_crops_of_cell(self._session, cell_id, at_ms, LOOK_BACK)
            groups = {h.started_ms: h.cathodes for h in hanging(cathodes, former)}
        found: list[tuple[int, float, float]] = []
        for number in later.tolist():
            crop = self._crops[number]
            start = int(crop["started_ms"])
            taken_from = start if start in groups else min(groups, default=start)
            groups[taken_from] = max(groups.get(taken_from, 0) - int(crop["cathodes"]), 0)
            if np.isfinite(self._kg_per_crop_c[number]):
                kg_per_c = float(self._kg_per_crop_c[number]) * float(crop["share"])
                found.append((start, kg_per_c, STOCK_SHAPE))
        found.extend(
            (start, judged_kg_per_c * count / cathodes, STOCK_MODEL)
            for start, count in groups.items()
            if count > 0
        )
        return _Parts(
            np.full(len(found), place),
            np.array([f[0] for f in found], np.int64),
            np.array([f[1] for f in found]),
            np.array([f[2] for f in found]),
        )

    def _filled(
        self, at_ms: int, parts: list[_Parts]
    ) -> tuple[Numbers, dict[tuple[int, int], float]]:
        """Metal of each cell, and how sure each part of it is, from the parts' charge."""
        place = np.concatenate([p.place for p in parts])
        start = np.concatenate([p.started_ms for p in parts])
        kg_per_c = np.concatenate([p.kg_per_c for p in parts])
        charge_c = self._charges(at_ms, start)
        bypasses = self._bypasses
        if len(start) and start.min() < self._from_ms:
            ids = self._section.cell_ids
            bypasses = bypasses_of(self._session, ids, int(start.min()), at_ms)
        for cell_id, out_ms, back_ms in bypasses:
            if out_ms >= at_ms:
                continue
            own = place == self._section.number_of(cell_id) - 1
            hit = np.flatnonzero(own & (start < back_ms))
            back_c = self._charges(at_ms, np.array([min(back_ms, at_ms)]))
            charge_c[hit] -= self._charges(at_ms, np.maximum(start[hit], out_ms)) - back_c
        metal_kg = charge_c * kg_per_c
        relative_u = np.concatenate([p.relative_u for p in parts])
        kg = np.zeros(len(self._section.cell_ids))
        np.add.at(kg, place, metal_kg)
        keys = zip(place.tolist(), start.tolist(), strict=True)
        return kg, dict(zip(keys, (metal_kg * relative_u).tolist(), strict=True))

    def _charges(self, at_ms: int, start: NDArray[np.int64]) -> Numbers:
        """Charge of the section from each start to a moment, C: look-ups, kept for the next."""
        moments, place = np.unique(start, return_inverse=True)
        wanted = [m for m in (*moments.tolist(), at_ms) if m not in self._charge_at]
        found = charges_at(self._session, self._section.id, wanted)
        self._charge_at.update((m, c) for m, (c, _) in zip(wanted, found, strict=True))
        known = np.array([self._charge_at[m] for m in moments.tolist()])
        return np.asarray(self._charge_at[at_ms] - known[place])


def stock_at(session: Session, section: SectionPlan, metal: Metal, at_ms: int) -> Stock:
    """Metal that hangs in each cell of a section at one moment; see StockBook.at."""
    return StockBook(session, section, metal, at_ms, at_ms).at(at_ms)
