"""The kinds of sheets as people read them, and who or what brought a delivery."""

from server.web.i18n import gettext as _


def sheet_name(sheet: str) -> str:
    """What a kind of sheet holds, in the reader's language."""
    names = {
        "current": _("section current"),
        "counter": _("ampere-hour counter"),
        "volts": _("cell voltages"),
        "lots": _("weighed lots"),
        "outages": _("outages"),
        "electrolyte": _("electrolyte"),
        "finds": _("finds at cells"),
    }
    return names.get(sheet, sheet)


def source_name(source: str) -> str:
    """Where a delivery came from: the name of the file, or the way it was sent."""
    names = {
        "form": _("the form"),
        "API": _("the API"),
        "confirmed": _("a confirmation"),
        "corrected": _("a correction"),
        "withdrawn": _("a withdrawal"),
    }
    return names.get(source, source)
