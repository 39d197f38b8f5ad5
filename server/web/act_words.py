"""What is wrong with an act on a flag, as a sentence and field by field."""

from collections.abc import Iterator
from contextlib import contextmanager

from server.watch.acts import ActRefused
from server.web.i18n import gettext as _
from server.web.refusals import Refused, fault


def act_fault(error: ActRefused) -> str:
    """What is missing or too much, in the reader's language."""
    if error.what == "reason":
        return _("Say why.")
    if error.what == "act":
        return _("Nothing was changed: the form did not say what to do.")
    return _("A flag is shelved for a time that lies ahead, seven days at most.")


@contextmanager
def refused() -> Iterator[None]:
    """Tell a program what is wrong with its act, at the place where it stands."""
    try:
        yield
    except ActRefused as error:
        what = act_fault(error)
        raise Refused([fault(f"body.{error.what}", what, error.found)]) from None
