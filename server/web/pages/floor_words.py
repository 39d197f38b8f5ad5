"""What a floor shows, in words: for whoever points at a cell or does not see the drawing."""

from server.accounts.floor import FloorCell
from server.web.filters import flag_words, millivolts, number
from server.web.i18n import gettext as _
from server.web.pages.words import state_words


def floor_sentence(cells: list[FloorCell]) -> str:
    """What the floor shows in one sentence, for whoever does not see it."""
    flagged = [f"{cell.cell}" for cell in cells if cell.flag_kind]
    counted = _("Needles of %(count)s cells") % {"count": number(len(cells))}
    if not flagged:
        return _("%(needles)s; none is flagged.") % {"needles": counted}
    return _("%(needles)s; flagged: %(cells)s.") % {
        "needles": counted,
        "cells": ", ".join(flagged),
    }


def needle_words(cell: FloorCell) -> str:
    """One cell of the floor in words."""
    told = [_("Cell %(number)s") % {"number": cell.cell}]
    if cell.state != "in service":
        told.append(state_words(cell.state))
    elif cell.deviation_v is None:
        told.append(_("no recent reading"))
    else:
        told += [number(cell.volts, 3, "V"), millivolts(cell.deviation_v, 0, "mV")]
    if cell.flag_kind:
        told.append(flag_words(cell.flag_kind))
    return " · ".join(told)
