"""Samples of current and of counters as they were written down, with every revision."""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from sqlalchemy.orm import Session

from server.storage.direct import fetch_rows, insert_rows

SampleTable = Literal["current_sample", "counter_sample"]

_VALUE: dict[SampleTable, str] = {"current_sample": "amps", "counter_sample": "counter_c"}


@dataclass(frozen=True, slots=True)
class SampleRevision:
    """One revision of a sample; a value of None says that it is withdrawn."""

    revision: int
    value: float | None
    delivery_id: int


def sample_revisions(
    session: Session, table: SampleTable, section_id: int, from_ms: int, to_ms: int
) -> dict[int, list[SampleRevision]]:
    """Every revision of the samples with from_ms <= at < to_ms, oldest first, by moment."""
    found: dict[int, list[SampleRevision]] = {}
    for at_ms, revision, value, delivery_id in fetch_rows(
        session,
        f"SELECT at_ms, revision, {_VALUE[table]}, delivery_id FROM {table}"
        " WHERE section_id = ? AND at_ms >= ? AND at_ms < ? ORDER BY at_ms, revision",
        (section_id, from_ms, to_ms),
    ):
        found.setdefault(int(at_ms), []).append(
            SampleRevision(int(revision), value, int(delivery_id))
        )
    return found


def newest_sample_ms(session: Session, table: SampleTable, section_id: int) -> int | None:
    """Moment of a section's newest sample."""
    newest = fetch_rows(
        session, f"SELECT MAX(at_ms) FROM {table} WHERE section_id = ?", (section_id,)
    )[0][0]
    return None if newest is None else int(newest)


def add_samples(
    session: Session,
    table: SampleTable,
    rows: Iterable[tuple[int, int, int, float | None]],
    delivery_id: int,
) -> None:
    """Write samples, each (section_id, at_ms, revision, value)."""
    insert_rows(
        session,
        f"INSERT INTO {table} (section_id, at_ms, revision, {_VALUE[table]}, delivery_id)"
        f" VALUES (?, ?, ?, ?, {int(delivery_id)})",
        rows,
    )
