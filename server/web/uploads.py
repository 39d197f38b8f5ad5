"""Forms and files that are read only once it is known that whoever sends them may."""

from collections.abc import AsyncIterator
from typing import Annotated

from fastapi import Depends, Request
from starlette.datastructures import FormData, UploadFile

from server.web.dependencies import Requires, Standing, sent_form, standing


async def form_fields(
    request: Request, here: Annotated[Standing, Depends(standing)]
) -> AsyncIterator[FormData]:
    """The form that was sent; whoever sends it may write, which the route's own role refines."""
    await Requires("operator")(request, here)
    form = await sent_form(request)
    try:
        yield form
    finally:
        await form.close()


def _uploads(form: Annotated[FormData, Depends(form_fields)]) -> list[UploadFile]:
    return [
        value
        for _name, value in form.multi_items()
        if isinstance(value, UploadFile) and value.filename
    ]


FormFields = Annotated[FormData, Depends(form_fields)]
"""Every field of the form, for forms whose fields vary, such as one for each cell."""

Uploads = Annotated[list[UploadFile], Depends(_uploads)]
"""The files that were sent, in their order."""
