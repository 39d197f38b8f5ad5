"""The roles as people read them: their names, and what each may do."""

from server.storage.people import ROLES
from server.web.i18n import gettext as _


def role_name(role: str) -> str:
    """The name of a role in the reader's language."""
    names = {
        "reader": _("reader"),
        "operator": _("operator"),
        "planner": _("planner"),
        "superintendent": _("superintendent"),
    }
    return names.get(role, role)


def role_meaning(role: str) -> str:
    """What a role may do, as one sentence."""
    meanings = {
        "reader": _("Reads every page and asks the API; writes nothing."),
        "operator": _("Reads everything, logs rounds and takes readings in."),
        "planner": _("As an operator, and works the list of cells."),
        "superintendent": _("All of it: corrections, set-up, people and tokens."),
    }
    return meanings.get(role, "")


def role_choices() -> list[tuple[str, str]]:
    """Every role with its name, the least first, as a field of choices takes them."""
    return [(role, role_name(role)) for role in ROLES]
