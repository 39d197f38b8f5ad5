"""Files of sheets, to be looked at first or taken in at once."""

from typing import Annotated

from fastapi import Query
from starlette.datastructures import UploadFile

from server.intake.results import FilePreview, FileResult
from server.intake.take_in import preview_file, take_in_file
from server.web.api.resource import problems, resource
from server.web.api.schemas_plant import (
    FilePreviewed,
    FileTaken,
    HeldInPreview,
    Imports,
    SheetPreviewed,
    SheetTaken,
    SuspectInPreview,
)
from server.web.dependencies import (
    DbSession,
    Now,
    Operator,
    ThisHouse,
    ThisSite,
    Who,
    follow_in_own_session,
)
from server.web.errors import NotAllowed
from server.web.i18n import gettext as _
from server.web.refusals import Refused, fault
from server.web.uploads import Uploads

router = resource("records")

_BODY = {
    "requestBody": {
        "required": True,
        "content": {
            "multipart/form-data": {
                "schema": {
                    "type": "object",
                    "required": ["file"],
                    "properties": {
                        "file": {
                            "type": "array",
                            "items": {"type": "string", "contentMediaType": "text/csv"},
                            "description": "CSV or XLSX, one or several.",
                        }
                    },
                }
            }
        },
    }
}

IsPreview = Annotated[
    bool, Query(alias="preview", description="Only tell what the files would bring.")
]
Reason = Annotated[
    str,
    Query(
        max_length=2000,
        description="Given, the files are a correction: rows whose key is stored with other values"
        " become new revisions. Takes the role superintendent.",
    ),
]


@router.post(
    "/imports",
    summary="Send files of sheets",
    openapi_extra=_BODY,
    responses=problems(413),
)
def post_imports(
    who: Operator,
    uploads: Uploads,
    db: DbSession,
    house: ThisHouse,
    site: ThisSite,
    now_ms: Now,
    is_preview: IsPreview = False,
    reason: Reason = "",
) -> Imports:
    """Take files in, or tell what they would bring; which sheet each is shows by its columns."""
    _may_be_sent(who, uploads, reason)
    if is_preview:
        previews = [
            preview_file(db, house, upload.file, upload.filename or "", now_ms, site.settings)
            for upload in uploads
        ]
        return Imports(is_preview=True, files=[_previewed(preview) for preview in previews])
    results = [
        take_in_file(
            site.database,
            house,
            upload.file,
            upload.filename or "",
            who.sender,
            now_ms,
            site.settings,
            reason,
        )
        for upload in uploads
    ]
    follow_in_own_session(site)
    return Imports(is_preview=False, files=[_taken(result) for result in results])


def _may_be_sent(who: Who, uploads: list[UploadFile], reason: str) -> None:
    if reason and not who.may("superintendent"):
        raise NotAllowed(who.role, "superintendent")
    if not uploads:
        raise Refused([fault("file", _("No file was sent."), expected=_("CSV or XLSX"))])


def _taken(result: FileResult) -> FileTaken:
    return FileTaken(
        name=result.name,
        sheets=[
            SheetTaken(
                delivery=delivery.delivery_id,
                sheet=delivery.sheet,
                worksheet=delivery.worksheet,
                dialect=delivery.dialect,
                rows=delivery.rows,
                stored=delivery.stored,
                duplicates=delivery.duplicates,
                held=delivery.held,
                suspect=delivery.suspect,
                unknown_columns=list(delivery.unknown_columns),
            )
            for delivery in result.deliveries
        ],
        notes=list(result.notes),
    )


def _previewed(preview: FilePreview) -> FilePreviewed:
    return FilePreviewed(
        name=preview.name,
        sheets=[
            SheetPreviewed(
                sheet=sheet.sheet,
                worksheet=sheet.worksheet,
                dialect=sheet.dialect,
                rows=sheet.rows,
                new=sheet.new,
                duplicates=sheet.duplicates,
                held=sheet.held,
                suspect=sheet.suspect,
                first_at=sheet.first_ms,
                last_at=sheet.last_ms,
                first_held=[
                    HeldInPreview(
                        line=row.line,
                        column=row.column or None,
                        found=row.found,
                        expected=row.expected,
                        reason=row.reason,
                        raw=row.raw,
                    )
                    for row in sheet.first_held
                ],
                first_suspect=[
                    SuspectInPreview(
                        line=row.line,
                        section=row.section,
                        cell=row.cell,
                        at=row.at_ms,
                        found=row.found,
                        expected=row.expected,
                        suggested=row.suggested,
                        reason=row.reason,
                    )
                    for row in sheet.first_suspect
                ],
                unknown_columns=list(sheet.unknown_columns),
            )
            for sheet in preview.sheets
        ],
        notes=list(preview.notes),
    )
