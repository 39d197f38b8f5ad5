"""What would be held of records that somebody is typing, told before anything is stored."""

from collections.abc import Mapping, Sequence

from sqlalchemy.orm import Session

from server.intake.results import HeldPreview
from server.intake.sheets import records_chunk
from server.intake.sitting import IntakeSettings, Sitting, given_of
from server.storage.plant import House


def faults_of_records(
    session: Session,
    house: House,
    kind: str,
    records: Sequence[Mapping[str, object]],
    sender: str,
    now_ms: int,
    settings: IntakeSettings,
) -> list[HeldPreview]:
    """The records that cannot be taken in, each with its line, its column and the reason.

    The line of a record is its place in the list, from 1.
    """
    sitting = Sitting(kind, given_of(house, now_ms, settings, "", sender), settings)
    chunk = records_chunk(kind, records)
    judged = sitting.judge(session, chunk, sitting.read(chunk))
    held = sorted((*judged.holding.new, *judged.holding.again), key=lambda row: row.line)
    return [
        HeldPreview(row.line, row.column, row.found, row.expected, row.reason, row.raw)
        for row in held
    ]
