"""Where files wait between being looked at and being taken in: beside the books."""

from pathlib import Path

from server.intake.spool import Spool
from server.web.site import Site


def spool_of(site: Site) -> Spool:
    """The folder of a site's waiting files, named after its database."""
    name = site.database.url.database or "ampledger"
    return Spool(Path(f"{name}-uploads"))
