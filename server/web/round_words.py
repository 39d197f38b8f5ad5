"""What is wrong with a typed round, in the reader's language."""

import re

from server.intake.rounds import MIXED, NO_NUMBER, NOTHING
from server.web.i18n import gettext as _

_NO_NUMBER = re.compile(re.escape(NO_NUMBER).replace(re.escape("{typed}"), "(.*)"), re.DOTALL)


def fault_words(sentence: str) -> str:
    """A fault of the form; those of the intake's own checks stay as they are."""
    if sentence == MIXED:
        return _(
            "Decimal points and decimal commas are both typed in this form; use one of them"
            " throughout."
        )
    if sentence == NOTHING:
        return _("Nothing was typed.")
    if found := _NO_NUMBER.fullmatch(sentence):
        return _("“%(typed)s” is not a number.") % {"typed": found.group(1)}
    return sentence
