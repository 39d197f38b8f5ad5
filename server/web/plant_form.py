"""What plant.toml holds as a form: its fields in groups, what was typed, and what is wrong."""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal

from server.accounts.periods import day_of
from server.intake.plant_faults import PlantFault
from server.storage.plant import HouseTerms, SectionTerms
from server.web.filters import number_typed
from server.web.i18n import gettext as _

_WHOLE = re.compile(r"[+-]?\d{1,12}", re.ASCII)
_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)", re.ASCII)

LIMITS = ("low_volts", "high_volts")
"""The two fields of the form that the plant file keeps as `cell_volts`."""


@dataclass(frozen=True)
class PlantField:
    """One field of a section."""

    key: str
    """As in the plant file."""
    label: str
    unit: str = ""
    kind: Literal["whole", "number", "text"] = "number"
    is_required: bool = True
    hint: str = ""


@dataclass(frozen=True)
class Group:
    """Fields that belong together."""

    heading: str
    fields: tuple[PlantField, ...]


def section_groups(currency: str = "") -> tuple[Group, ...]:
    """Every field of a section that may change, in the reader's language."""
    return (
        Group(
            _("Cells"),
            (
                PlantField("cells", _("Cells"), kind="whole"),
                PlantField("rows", _("Rows"), kind="whole"),
                PlantField(
                    "walk_order",
                    _("Order of the round"),
                    kind="text",
                    is_required=False,
                    hint=_("blank: by number; snake: every second row backwards; or 1-24;48-25"),
                ),
                PlantField("cathodes_per_cell", _("Cathodes in a cell"), kind="whole"),
                PlantField("cathode_area_m2", _("Area of a cathode, both faces"), "m²"),
            ),
        ),
        Group(
            _("Current and voltage"),
            (
                PlantField("rated_current_ka", _("Rated current"), "kA"),
                PlantField("bus_volts", _("Voltage of the whole section"), "V", is_required=False),
                PlantField(
                    "differential_resistance_uohm",
                    _("Differential resistance of a cell"),
                    "µΩ",
                    is_required=False,
                    hint=_("blank: from the process"),
                ),
                PlantField(
                    "rectifier_efficiency_pct", _("Rectifier efficiency"), "%", is_required=False
                ),
            ),
        ),
        Group(
            _("Electrolyte"),
            (
                PlantField(
                    "electrode_gap_mm",
                    _("Gap from anode to cathode, face to face"),
                    "mm",
                    is_required=False,
                ),
                PlantField(
                    "conductivity_s_m",
                    _("Conductivity, measured"),
                    "S/m",
                    is_required=False,
                    hint=_("blank: from the literature's correlation for the process"),
                ),
                PlantField("conductivity_at_c", _("at"), "°C", is_required=False),
                PlantField(
                    "conductivity_per_c", _("and for each degree more"), "S/m", is_required=False
                ),
                PlantField(
                    "conductivity_per_metal_g_l",
                    _("for each g/L of metal"),
                    "S/m",
                    is_required=False,
                    hint=_(
                        "only for a correlation; the conductivity is then that of no metal and acid"
                    ),
                ),
                PlantField(
                    "conductivity_per_acid_g_l",
                    _("for each g/L of acid"),
                    "S/m",
                    is_required=False,
                ),
                PlantField(
                    "conductivity_accuracy_pct",
                    _("Conductivity, ±"),
                    "%",
                    is_required=False,
                ),
            ),
        ),
        Group(
            _("Targets"),
            (
                PlantField("current_efficiency_pct", _("Current efficiency"), "%"),
                PlantField("specific_energy_kwh_t", _("Specific energy, DC"), "kWh/t"),
                PlantField("low_volts", _("Lowest cell voltage"), "V"),
                PlantField("high_volts", _("Highest cell voltage"), "V"),
            ),
        ),
        Group(
            _("Instruments"),
            (
                PlantField("meter_accuracy_mv", _("Voltmeter, ±"), "mV"),
                PlantField("current_accuracy_pct", _("Current, ±"), "%"),
                PlantField("scale_accuracy_pct", _("Scale, ±"), "%"),
            ),
        ),
        Group(
            _("Value"),
            (PlantField("metal_value_per_kg", _("Value of the metal"), f"{currency}/kg"),),
        ),
    )


def section_fields_flat() -> dict[str, PlantField]:
    """Every field by its key."""
    return {field.key: field for group in section_groups() for field in group.fields}


def as_typed(fields: Mapping[str, Any]) -> dict[str, str]:
    """What the plant file says of a section, as the fields of the form show it."""
    low_volts, high_volts = fields["cell_volts"]
    shown = {**fields, "low_volts": low_volts, "high_volts": high_volts}
    return {key: _shown(shown[key]) for key in section_fields_flat()}


def changes_of(typed: Mapping[str, str], shown: Mapping[str, str]) -> dict[str, Any]:
    """What differs from what the form showed, in the keys and units of the plant file."""
    fields = section_fields_flat()
    changed = [
        key for key in fields if key in typed and not _is_same(typed[key].strip(), shown[key])
    ]
    changes = {key: value_of(fields[key], typed[key]) for key in changed if key not in LIMITS}
    if any(key in LIMITS for key in changed):
        changes["cell_volts"] = limits_of(typed)
    return changes


def limits_of(typed: Mapping[str, str]) -> list[Any]:
    """The two limits of a cell voltage as the plant file keeps them."""
    fields = section_fields_flat()
    return [value_of(fields[key], typed.get(key, "")) for key in LIMITS]


def value_of(field: PlantField, text: str) -> Any:
    """The value of a field; the text itself where it is none, for the plant's rules to refuse."""
    text = text.strip()
    if not text:
        return "" if field.kind == "text" else None
    if field.kind == "whole" and _WHOLE.fullmatch(text):
        return int(text)
    if field.kind == "number" and _NUMBER.fullmatch(text):
        return float(text.replace(",", "."))
    return text


def faults_by_field(faults: Sequence[PlantFault], keys: Sequence[str]) -> dict[str, str]:
    """What is wrong, by the field of the form; what belongs to none stands under nothing."""
    found: dict[str, str] = {}
    for fault in faults:
        words = re.split(r"[\s.:]+", fault.key)
        key = "low_volts" if "cell_volts" in words else next((k for k in keys if k in words), "")
        found.setdefault(key, _("Expected %(expected)s.") % {"expected": fault.expected})
    return found


def from_suggested(
    now_ms: int, zone: str, terms: Sequence[SectionTerms] | Sequence[HouseTerms]
) -> int:
    """From when a change might hold: this day's start, or now where something changed then."""
    day_ms = day_of(now_ms, zone).from_ms
    is_taken = any(step.from_ms == day_ms for step in terms)
    return now_ms // 60_000 * 60_000 if is_taken else day_ms


def _shown(value: Any) -> str:
    if value is None or isinstance(value, str):
        return value or ""
    return number_typed(value)


def _is_same(typed: str, shown: str) -> bool:
    """Whether two texts mean the same, such as 2,0 and 2."""
    if _NUMBER.fullmatch(typed) and _NUMBER.fullmatch(shown):
        return float(typed.replace(",", ".")) == float(shown.replace(",", "."))
    return typed == shown
