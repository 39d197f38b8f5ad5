"""Words of the work list and of the watch's record, in the reader's language."""

from server.web.filters import flag_words, percent
from server.web.i18n import gettext as _

_CERTAIN = 0.995
"""A stated probability that would be rounded to all of it."""

FOUND = ("short", "contact", "anode", "insulator", "nothing")


def state_of_flag(state: str) -> str:
    """Where a flag stands."""
    words = {
        "raised": _("not seen yet"),
        "seen": _("seen"),
        "working": _("worked on"),
        "shelved": _("shelved"),
        "ended": _("ended"),
    }
    return words.get(state, state)


def tier_words(tier: str) -> str:
    """How sure the watch is: enough to send someone, or only to watch."""
    words = {"act": _("to act on"), "look": _("watched")}
    return words.get(tier, tier)


def found_words(found: str) -> str:
    """What somebody found at a cell."""
    words = {
        "short": _("a short"),
        "contact": _("a bad contact"),
        "anode": _("a bad anode"),
        "insulator": _("an insulator"),
        "nothing": _("nothing"),
    }
    return words.get(found, found)


def section_choices(names: list[str]) -> list[tuple[str, str]]:
    """Every section, for a field of choices."""
    return [("", _("all sections")), *((name, name) for name in names)]


def kind_choices() -> list[tuple[str, str]]:
    """Every kind of flag, for a field of choices."""
    kinds = ("short", "drift high", "drift low", "suspect reading", "no reading")
    return [("", _("all kinds")), *((kind, flag_words(kind)) for kind in kinds)]


def state_choices() -> list[tuple[str, str]]:
    """Every state of an open flag, for a field of choices."""
    states = ("raised", "seen", "working", "shelved")
    told = [(state, state_of_flag(state)) for state in states]
    return [("", _("all but shelved")), *told, ("all", _("all"))]


def sure_words(probability: float | None) -> str:
    """How sure the watch is of a flag; nothing where it does not say."""
    if probability is None:
        return ""
    if probability >= _CERTAIN:
        return _("over 99 %% sure") % {}
    return _("%(share)s sure") % {"share": percent(probability, 0, "%")}


def done_words(done: str, where: str) -> str:
    """What was done last, as the address tells it."""
    words = {
        "seen": _("%(where)s: marked as seen."),
        "working": _("%(where)s: given out to be worked on."),
        "shelved": _("%(where)s: shelved; it comes back by itself."),
        "unshelved": _("%(where)s: off the shelf."),
        "closed": _("%(where)s: closed."),
        "found": _("%(where)s: the find is recorded, and the flag is closed."),
    }
    return words[done] % {"where": where} if done in words and where else ""


def load_words(name: str) -> str:
    """A figure of the alarm load."""
    words = {
        "per_day": _("flags a day"),
        "per_hour": _("flags an hour"),
        "per_ten_minutes": _("flags in ten minutes"),
        "most_in_ten_minutes": _("most in ten minutes"),
        "flood_share": _("share of ten-minute periods in flood (more than 10)"),
        "act_share": _("share to act on"),
        "standing_at_the_end": _("standing for more than 24 h, at the end"),
        "standing_on_average": _("standing for more than 24 h, on average"),
        "chattering": _("chattering: raised again within 24 h of their end"),
        "worst_cells_share": _("share of the ten cells flagged most often"),
    }
    return words.get(name, name)


def status_words(status: str) -> str:
    """Where a published target is from."""
    words = {
        "looked up": _("public notes that quote the standard"),
        "from memory": _("from memory of the standard"),
    }
    return words.get(status, status)
