"""Works off, while the server runs, what deliveries left to be worked out."""

import threading

import structlog
from sqlalchemy.exc import SQLAlchemyError

from server.storage.condition import readiness
from server.storage.errors import NoPlant
from server.web.dependencies import follow_in_own_session
from server.web.site import Site

_LOOK_EVERY_S = 5.0
_AFTER_A_FAULT_S = 60.0
_BREATHE_S = 0.05
"""Between two pieces of work, so that whoever waits to write a round comes first."""

log = structlog.get_logger()


class Background:
    """A thread that brings figures up to date, piece by piece, whenever some lag behind."""

    def __init__(self, site: Site) -> None:
        self._site = site
        self._over = threading.Event()
        self._thread = threading.Thread(target=self._work, name="catch-up", daemon=True)

    def start(self) -> None:
        """Begin."""
        self._thread.start()

    def stop(self) -> None:
        """End after the piece of work at hand."""
        self._over.set()
        self._thread.join()

    def _work(self) -> None:
        while not self._over.wait(self._worked_off()):
            pass

    def _worked_off(self) -> float:
        """Do one piece of work, if there is one; answers how long to wait after it, in seconds."""
        if not readiness(self._site.database, self._site.newest_revision).stale_stretches:
            return _LOOK_EVERY_S
        try:
            left = follow_in_own_session(self._site)
        except (NoPlant, SQLAlchemyError) as error:
            log.error("figures could not follow", exc_info=error)
            return _AFTER_A_FAULT_S
        if left is None:
            return _AFTER_A_FAULT_S
        return _BREATHE_S if left else _LOOK_EVERY_S
