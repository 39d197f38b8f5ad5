"""One delivery in: rows to records, held rows and doubts, written down with who, when and why."""

import hashlib
import tempfile
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import BinaryIO, cast

from sqlalchemy.orm import Session

from server.intake import delimited
from server.intake.chunks import MEBIBYTE, Sheet
from server.intake.kinds import ORDER
from server.intake.preview import Progress, preview_file
from server.intake.results import DeliveryResult, FileResult, RecordResult
from server.intake.sheets import Limits, open_sheets, records_chunk
from server.intake.sitting import (
    IntakeSettings,
    Judged,
    Sitting,
    given_of,
    limits_of,
    sitting_of,
    source_of,
)
from server.intake.verdicts import Outcome
from server.storage.database import Database
from server.storage.deliveries import Delivery
from server.storage.delivery_rows import (
    add_delivery,
    ids_sent_before,
    keep_counts,
    keep_sent_ids,
)
from server.storage.plant import House
from server.storage.turns import take_turn

__all__ = [
    "Progress",
    "answers_of",
    "mend_record",
    "preview_file",
    "take_in_file",
    "take_in_records",
]


def take_in_file(
    database: Database,
    house: House,
    source: Path | BinaryIO,
    name: str,
    sender: str,
    now_ms: int,
    settings: IntakeSettings,
    reason: str = "",
    progress: Progress | None = None,
) -> FileResult:
    """Take in a file, some ten thousand rows a transaction.

    Every transaction leaves the books whole and is marked for the figures that rest on it, so
    what is in stays in when the machine stops, and taking the file in again adds the rest.
    With a `reason` it is a correction: rows whose key is stored with other values go in as
    new revisions.

    Raises
    ------
    FileRefused
        When it cannot be read as a sheet; nothing of it is stored then.
    """
    limits = limits_of(settings)
    with (
        _rewindable(source, limits) as whole,
        open_sheets(whole, name, limits=limits) as file,
    ):
        with _bytes_of(whole) as stream:
            for sheet in file.sheets:
                _look_through(stream, sheet, limits)
            digest = _sha256(stream)
        taken = []
        for sheet in sorted(file.sheets, key=lambda sheet: ORDER.index(sheet.kind)):
            delivery = Delivery(
                sheet=sheet.kind,
                source=source_of(name, sheet),
                sender=sender,
                received_ms=now_ms,
                reason=given_of(house, now_ms, settings, reason).reason,
                sha256=digest,
                dialect=sheet.dialect.sentence,
            )
            taken.append(_take_sheet(database, house, sheet, delivery, settings, progress))
        return FileResult(name, tuple(taken), file.ignored)


def _take_sheet(
    database: Database,
    house: House,
    sheet: Sheet,
    delivery: Delivery,
    settings: IntakeSettings,
    progress: Progress | None,
) -> DeliveryResult:
    sitting = sitting_of(
        sheet, house, delivery.received_ms, settings, delivery.reason, delivery.sender
    )
    with database.write() as session:
        delivery_id = add_delivery(session, delivery)
    for chunk in sheet.chunks():
        rows = sitting.read(chunk)
        with database.write() as session:
            take_turn(session)
            sitting.taker.begin()
            sitting.write(session, sitting.judge(session, chunk, rows), delivery_id)
            keep_counts(session, delivery_id, sitting.counts.as_columns())
        if progress is not None:
            progress(chunk.bytes_read, sheet.size_bytes)
    counts = sitting.counts
    return DeliveryResult(
        delivery_id=delivery_id,
        sheet=sheet.kind,
        worksheet=sheet.worksheet,
        dialect=sheet.dialect.sentence,
        rows=counts.rows,
        stored=counts.stored,
        duplicates=counts.duplicates,
        held=counts.held,
        suspect=counts.suspect,
        unknown_columns=sheet.unknown_columns,
    )


def take_in_records(
    session: Session,
    house: House,
    kind: str,
    records: Sequence[Mapping[str, object]],
    sender: str,
    now_ms: int,
    settings: IntakeSettings,
    source: str = "API",
    reason: str = "",
) -> list[RecordResult]:
    """Take in records that came as a call or as a form; answers for each, in their order.

    A record has the columns of its sheet, and may have the sender's `id`: what was taken in
    under an id is not taken in again.
    """
    take_turn(session)
    ids = [_sent_id(record) for record in records]
    known = ids_sent_before(session, [sent_id for sent_id in ids if sent_id])
    places = []
    for place, sent_id in enumerate(ids):
        if sent_id and sent_id in known:
            continue
        places.append(place)
        if sent_id:
            known.add(sent_id)
    answers = [
        RecordResult(sent_id, "duplicate", "A record with this id was taken in before.")
        for sent_id in ids
    ]
    if not places:
        return answers
    judged = _take_records(
        session,
        house,
        kind,
        [{name: records[i][name] for name in records[i] if name != "id"} for i in places],
        [ids[i] for i in places],
        Delivery(
            sheet=kind, source=source, sender=sender, received_ms=now_ms, reason=reason.strip()
        ),
        settings,
    )
    for place, answer in zip(places, judged, strict=True):
        answers[place] = answer
    return answers


def _take_records(
    session: Session,
    house: House,
    kind: str,
    records: Sequence[Mapping[str, object]],
    ids: Sequence[str | None],
    delivery: Delivery,
    settings: IntakeSettings,
) -> list[RecordResult]:
    given = given_of(house, delivery.received_ms, settings, delivery.reason, delivery.sender)
    sitting = Sitting(kind, given, settings, file=delivery.source)
    chunk = records_chunk(kind, records, file=delivery.source)
    judged = sitting.judge(session, chunk, sitting.read(chunk))
    answers = answers_of(judged, ids)
    if judged.is_to_be_written:
        delivery_id = add_delivery(session, delivery)
        sitting.write(session, judged, delivery_id)
        keep_counts(session, delivery_id, sitting.counts.as_columns())
        taken = [answer.id for answer in answers if answer.id and answer.status != "held"]
        keep_sent_ids(session, delivery_id, taken)
    return answers


def mend_record(
    session: Session,
    house: House,
    fields: Mapping[str, str],
    delivery: Delivery,
    settings: IntakeSettings,
) -> RecordResult:
    """Take in one record that stood in a held row; where it is still wrong, it is left there."""
    given = given_of(house, delivery.received_ms, settings, delivery.reason, delivery.sender)
    sitting = Sitting(delivery.sheet, given, settings, file=delivery.source)
    chunk = records_chunk(delivery.sheet, [fields], file=delivery.source)
    judged = sitting.judge(session, chunk, sitting.read(chunk), is_mended=True)
    if judged.is_to_be_written:
        delivery_id = add_delivery(session, delivery)
        sitting.write(session, judged, delivery_id)
        keep_counts(session, delivery_id, sitting.counts.as_columns())
    return answers_of(judged, [None])[0]


def answers_of(judged: Judged, ids: Sequence[str | None]) -> list[RecordResult]:
    """What became of each record of a call."""
    verdicts = judged.verdicts
    answers: list[RecordResult] = [RecordResult(sent_id, "stored", None) for sent_id in ids]
    for place, position in enumerate(judged.rows.index.tolist()):
        if verdicts.outcome[place] == Outcome.DUPLICATE:
            answers[position] = RecordResult(ids[position], "duplicate", verdicts.notes.get(place))
        elif place in verdicts.doubts:
            reason = verdicts.doubts[place].reason
            answers[position] = RecordResult(ids[position], "suspect", reason)
        elif verdicts.outcome[place] == Outcome.HELD:
            reason = verdicts.faults[place].reason
            answers[position] = RecordResult(ids[position], "held", reason)
    for error in judged.rows.errors:
        answers[error.line - 1] = RecordResult(ids[error.line - 1], "held", error.reason)
    for line, note in judged.holding.decided.items():
        answers[line - 1] = RecordResult(ids[line - 1], "duplicate", note)
    return answers


def _sent_id(record: Mapping[str, object]) -> str | None:
    sent_id = record.get("id")
    return str(sent_id).lower() if sent_id else None


def _look_through(stream: BinaryIO, sheet: Sheet, limits: Limits) -> None:
    """Meet whatever would refuse a long file half-way, before anything of it is stored."""
    if sheet.worksheet is None and sheet.size_bytes > delimited.BLOCK_BYTES:
        for _ in delimited.blocks(stream, file=sheet.file, limits=limits):
            pass


def _sha256(stream: BinaryIO) -> str:
    digest = hashlib.sha256()
    stream.seek(0)
    while piece := stream.read(MEBIBYTE):
        digest.update(piece)
    return digest.hexdigest()


@contextmanager
def _rewindable(source: Path | BinaryIO, limits: Limits) -> Iterator[Path | BinaryIO]:
    """Give what was sent as something that can be read more than once."""
    if isinstance(source, Path) or source.seekable():
        yield source
        return
    with tempfile.TemporaryFile() as copy:
        while copy.tell() <= limits.max_bytes and (piece := source.read(MEBIBYTE)):
            copy.write(piece)
        yield cast(BinaryIO, copy)


@contextmanager
def _bytes_of(source: Path | BinaryIO) -> Iterator[BinaryIO]:
    if isinstance(source, Path):
        with source.open("rb") as stream:
            yield stream
    else:
        yield source
