"""Where files wait between being looked at and being taken in."""

import tempfile
from pathlib import Path

from server.intake.spool import Spool
from server.web.site import Site


def spool_of(site: Site) -> Spool:
    """The folder of a site's waiting files.

    The one of the settings; else beside the books' file, or in the system's temporary folder
    where the books lie in another server.
    """
    if site.settings.upload_folder is not None:
        return Spool(site.settings.upload_folder)
    name = site.database.url.database or "ampledger"
    if site.database.is_sqlite:
        return Spool(Path(f"{name}-uploads"))
    return Spool(Path(tempfile.gettempdir()) / f"ampledger-{name}-uploads")
