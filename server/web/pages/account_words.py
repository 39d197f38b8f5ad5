"""Texts of the accounts in the reader's language: bases, formulas, inputs and where they are from.

The accounts hold them in English, as the API gives them.
"""

import re

from server.web.i18n import gettext as _
from server.web.i18n import ngettext

_OF_LOTS = re.compile(r"(\d+) lots, net less starters")

_OF_SHORTS = re.compile(r"expected by the watch, from readings for (\d+) % of the charge")


def account_words(text: str) -> str:
    """A text of an account; symbols and whatever has no words of ours stay as they are."""
    of_lots = _OF_LOTS.fullmatch(text)
    if of_lots:
        lots = int(of_lots[1])
        return ngettext(
            "%(num)s lot, net less starters", "%(num)s lots, net less starters", lots
        ) % {"num": lots}
    of_shorts = _OF_SHORTS.fullmatch(text)
    if of_shorts:
        return _("expected by the watch, from readings for %(pct)s %% of the charge") % {
            "pct": of_shorts[1]
        }
    return {**_formulas(), **_inputs(), **_sources()}.get(text, text)


def _formulas() -> dict[str, str]:
    return {
        "Q = sum over cells of the integral of I dt while in service": _(
            "Q = sum over cells of the integral of I dt while in service"
        ),
        "weighed / (K x charge of the lots' own cathodes)": _(
            "weighed / (K x charge of the lots' own cathodes)"
        ),
        "efficiency x root of (scale/sqrt 3)^2 + (current/sqrt 3)^2 + (gap part)^2": _(
            "efficiency x root of (scale/sqrt 3)^2 + (current/sqrt 3)^2 + (gap part)^2"
        ),
        "made = harvested + stock at the end - stock at the start": _(
            "made = harvested + stock at the end - stock at the start"
        ),
        "made / (K Q)": _("made / (K Q)"),
        "integral of V I dt, V(t) = V_ref(t) + R_d (I(t) - I_ref), summed over cells": _(
            "integral of V I dt, V(t) = V_ref(t) + R_d (I(t) - I_ref), summed over cells"
        ),
        "DC energy / made": _("DC energy / made"),
        "sum over cells of the integral of (I_s / I) dQ, I_s = -deviation / R_d, each held to"
        " the cell's next round": _(
            "sum over cells of the integral of (I_s / I) dQ, I_s = -deviation / R_d, each held to"
            " the cell's next round"
        ),
    }


def _inputs() -> dict[str, str]:
    return {
        "section charge": _("section charge"),
        "estimated": _("estimated"),
        "weighed": _("weighed"),
        "theoretical": _("theoretical"),
        "harvested": _("harvested"),
        "stock at the start": _("stock at the start"),
        "stock at the end": _("stock at the end"),
        "stock model": _("stock model"),
        "read share": _("read share"),
        "mean voltage": _("mean voltage"),
        "DC energy": _("DC energy"),
        "made": _("made"),
        "scale accuracy": _("scale accuracy"),
        "current accuracy": _("current accuracy"),
        "estimated current": _("estimated current"),
        "watched charge": _("watched charge"),
        "uncertainty of R_d": _("uncertainty of R_d"),
        "what passes between rounds": _("what passes between rounds"),
        "uncertainty": _("uncertainty"),
    }


def _sources() -> dict[str, str]:
    return {
        "IUPAC standard atomic weight": _("IUPAC standard atomic weight"),
        "process of the section": _("process of the section"),
        "current log": _("current log"),
        "current log, bypassed cells taken out": _("current log, bypassed cells taken out"),
        "gaps of the log": _("gaps of the log"),
        "Faraday's law": _("Faraday's law"),
        "lots pulled in the period": _("lots pulled in the period"),
        "lots and stock": _("lots and stock"),
        "charge since hung": _("charge since hung"),
        "charge with a reading at hand": _("charge with a reading at hand"),
        "common practice": _("common practice"),
        "energy / charge": _("energy / charge"),
        "plant set-up, a limit": _("plant set-up, a limit"),
        "voltages and current log": _("voltages and current log"),
        "harvested and change of stock, by Faraday's law": _(
            "harvested and change of stock, by Faraday's law"
        ),
        "what is left of the cells' charge": _("what is left of the cells' charge"),
        "what is left of the cells' charge, shorts among it: no cell was read": _(
            "what is left of the cells' charge, shorts among it: no cell was read"
        ),
        "charge after a reading": _("charge after a reading"),
        "rounds at different currents, or the plant set-up": _(
            "rounds at different currents, or the plant set-up"
        ),
        "each cell's own, R_d, between rounds": _("each cell's own, R_d, between rounds"),
    }
