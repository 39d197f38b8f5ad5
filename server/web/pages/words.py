"""Words of the books in the reader's language: processes, states, items, events."""

from server.science.units import millimetres_from_metres
from server.web.filters import number
from server.web.i18n import gettext as _


def process_words(process: str) -> str:
    """A process, as a sentence begins with it."""
    words = {
        "copper electrowinning": _("Copper electrowinning"),
        "copper electrorefining": _("Copper electrorefining"),
        "zinc electrowinning": _("Zinc electrowinning"),
        "nickel electrowinning": _("Nickel electrowinning"),
        "nickel electrorefining": _("Nickel electrorefining"),
        "cobalt electrowinning": _("Cobalt electrowinning"),
        "manganese electrowinning": _("Manganese electrowinning"),
        "cadmium electrowinning": _("Cadmium electrowinning"),
        "lead electrorefining": _("Lead electrorefining"),
        "tin electrorefining": _("Tin electrorefining"),
        "silver electrorefining": _("Silver electrorefining"),
        "gold electrorefining": _("Gold electrorefining"),
        "aluminium electrolysis": _("Aluminium electrolysis"),
        "other": _("Electrolysis"),
    }
    return words.get(process, process)


def metal_words(symbol: str) -> str:
    """A metal by its symbol; the symbol itself where we have no word."""
    words = {
        "Ag": _("silver"),
        "Al": _("aluminium"),
        "Au": _("gold"),
        "Cd": _("cadmium"),
        "Co": _("cobalt"),
        "Cu": _("copper"),
        "Mn": _("manganese"),
        "Ni": _("nickel"),
        "Pb": _("lead"),
        "Sn": _("tin"),
        "Zn": _("zinc"),
    }
    return words.get(symbol, symbol)


def state_words(state: str) -> str:
    """How a cell or a section stands."""
    words = {
        "in service": _("in service"),
        "bypassed": _("bypassed"),
        "off": _("off"),
        "section off": _("section off"),
    }
    return words.get(state, state)


def item_words(item: str) -> str:
    """An item of the ledger or of the waterfall."""
    words = {
        "metal": _("metal"),
        "shorts": _("shorts"),
        "ferric reduction": _("ferric reduction"),
        "hydrogen": _("hydrogen"),
        "leakage": _("leakage"),
        "not explained": _("not explained"),
        "measured voltage": _("measured voltage at full efficiency"),
        "thermodynamic minimum": _("thermodynamic minimum"),
        "anode overpotential": _("anode overpotential"),
        "cathode overpotential": _("cathode overpotential"),
        "electrolyte resistance": _("electrolyte resistance"),
        "contacts and bars": _("contacts and bars"),
        "current lost": _("current lost"),
        "conversion": _("conversion in the rectifier"),
    }
    return words.get(item, item)


def event_words(kind: str) -> str:
    """What kind of thing happened to a cell."""
    words = {
        "outage": _("outage"),
        "find": _("find"),
        "correction": _("correction"),
        "lot": _("pulled"),
        "flag": _("flag"),
    }
    return words.get(kind, kind)


def figure_words(figure: str) -> str:
    """A figure of the account, by the name that the API gives it."""
    words = {
        "kg_per_kah": _("Metal for each kiloampere-hour, K"),
        "charge.cell_kah": _("Charge through the cells"),
        "crops.current_efficiency_pct": _("Current efficiency of the lots"),
        "crops.u_current_efficiency_pct": _("Its standard uncertainty"),
        "period.made_kg": _("Metal made"),
        "period.current_efficiency_pct": _("Current efficiency of the period"),
        "energy.dc_kwh": _("DC energy"),
        "energy.specific_energy_kwh_t": _("Specific energy"),
        "ledger.shorts.kah": _("Charge through shorts"),
    }
    return words.get(figure, figure)


def mm(thickness_m: float | None) -> str:
    """The thickness of a deposit in millimetres."""
    return number(None if thickness_m is None else float(millimetres_from_metres(thickness_m)), 1)
