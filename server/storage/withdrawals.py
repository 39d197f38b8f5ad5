"""Takes back what one delivery brought: each record returns to what it was before."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from sqlalchemy.orm import Session

from server.storage.direct import execute, fetch_columns
from server.storage.samples import SampleTable


@dataclass(frozen=True, slots=True)
class TakenBack:
    """Whose records were taken back, and of when."""

    owner_id: NDArray[np.int64]
    """Cells of readings, sections of samples."""
    at_ms: NDArray[np.int64]

    def moments_of(self, owner_ids: Sequence[int]) -> NDArray[np.int64]:
        """Of when the records of these owners were."""
        return self.at_ms[np.isin(self.owner_id, owner_ids)]


_OWNER = {"reading": "cell_id", "current_sample": "section_id", "counter_sample": "section_id"}
_VALUE = {"reading": "microvolts", "current_sample": "amps", "counter_sample": "counter_c"}


def take_back_readings(session: Session, delivery_id: int, by_delivery_id: int) -> TakenBack:
    """Take back the readings of a delivery that nothing has replaced since."""
    return _take_back(session, "reading", delivery_id, by_delivery_id)


def take_back_samples(
    session: Session, table: SampleTable, delivery_id: int, by_delivery_id: int
) -> TakenBack:
    """Take back the samples of a delivery that nothing has replaced since."""
    return _take_back(session, table, delivery_id, by_delivery_id)


def _take_back(session: Session, table: str, delivery_id: int, by_delivery_id: int) -> TakenBack:
    owner, value = _OWNER[table], _VALUE[table]
    # Of two revisions by one delivery only the last counts, and it goes back past both.
    counts = (
        f"{table} r WHERE r.delivery_id = ? AND NOT EXISTS (SELECT 1 FROM {table} n WHERE"
        f" n.{owner} = r.{owner} AND n.at_ms = r.at_ms AND n.revision > r.revision)"
    )
    former = (
        f"(SELECT p.{{}} FROM {table} p WHERE p.{owner} = r.{owner} AND p.at_ms = r.at_ms"
        " AND p.delivery_id <> r.delivery_id ORDER BY p.revision DESC LIMIT 1)"
    )
    found = fetch_columns(
        session,
        f"SELECT r.{owner}, r.at_ms FROM {counts}",
        (delivery_id,),
        (("owner_id", "i8"), ("at_ms", "i8")),
    )
    columns, values = [owner, "at_ms", "revision", value], former.format(value)
    if table == "reading":
        columns.append("suspect")
        values += f", COALESCE({former.format('suspect')}, 0)"
    execute(
        session,
        f"INSERT INTO {table} ({', '.join(columns)}, delivery_id)"
        f" SELECT r.{owner}, r.at_ms, r.revision + 1, {values}, ? FROM {counts}",
        (by_delivery_id, delivery_id),
    )
    return TakenBack(np.ascontiguousarray(found["owner_id"]), np.ascontiguousarray(found["at_ms"]))
