"""What the terms of a cell's voltage need to know of a kind of cell, each value with its doubt."""

from collections.abc import Iterator
from dataclasses import dataclass, fields, is_dataclass, replace
from typing import Any

from server.science.errors import UnknownName
from server.science.voltage.overpotentials import Electrode, StatedValue, TwoWayElectrode


@dataclass(frozen=True)
class UsualConditions:
    """Conditions in the middle of what plants run, to try a model at.

    `acid_g_l` is that of the solution at the anode; behind a bag the cathode's is almost neutral.
    """

    current_density_a_m2: float
    temperature_k: float
    metal_g_l: float
    acid_g_l: float
    gap_m: float


@dataclass(frozen=True)
class CellModel:
    """One kind of cell, as the terms of its voltage need it, each value with its doubt.

    `process` is a name of the processes, `conductivity_of` and `activities_of` the metals whose
    electrolyte and sulfate stand in. `reversible_shift_v` is what the activities leave open.
    `separator_ohm_m2` is that of a bag or diaphragm, part of the electrolyte's term; both
    resistances are for a square metre of cathode. `gas_share` is the volume of gas in the gap.
    """

    title: str
    process: str
    anode: Electrode
    cathode: TwoWayElectrode
    contact_ohm_m2: StatedValue
    separator_ohm_m2: StatedValue
    gas_share: StatedValue
    reversible_shift_v: StatedValue
    conductivity_of: str
    activities_of: str
    usual: UsualConditions
    water_kg_m3: float = 910.0


def stated_values(model: object, below: str = "") -> Iterator[tuple[str, StatedValue]]:
    """Every value of a model that has a doubt and a source, under the way to it.

    Parameters
    ----------
    model : object
        A `CellModel`, or a part of one.
    below : str
        Put before the names; for parts of parts.

    Returns
    -------
    iterator of pairs of str and StatedValue
        Names such as ``anode.point.overpotential_v``, in the order of the model.

    Source
    ------
    Each value names its own.

    Example
    -------
    >>> from server.science.voltage.cells import cell_model
    >>> model = cell_model("copper electrowinning")
    >>> [name for name, _ in stated_values(model)][:3]
    ['anode.point.overpotential_v', 'anode.point.per_kelvin', 'anode.slope_v']
    """
    if not is_dataclass(model):
        return
    for field in fields(model):
        part = getattr(model, field.name)
        if isinstance(part, StatedValue):
            yield below + field.name, part
        else:
            yield from stated_values(part, f"{below}{field.name}.")


def with_stated(model: CellModel, name: str, stated: StatedValue) -> CellModel:
    """A model with one of its values put in another's place, such as the plant's own.

    Parameters
    ----------
    model : CellModel
        The model to start from; it stays as it is.
    name : str
        Name of the value, as `stated_values` gives it.
    stated : StatedValue
        What stands there instead.

    Returns
    -------
    CellModel
        The new model.

    Raises
    ------
    UnknownName
        If the model has no value of that name; it offers the near ones.

    Source
    ------
    The new value names its own.

    Example
    -------
    >>> from server.science.voltage.cells import cell_model
    >>> measured = StatedValue(0.2e-3, 0.02e-3, "plant", "millivolts over hangers, May")
    >>> with_stated(cell_model("zinc electrowinning"), "contact_ohm_m2", measured).title
    'zinc electrowinning'
    """
    known = [value for value, _ in stated_values(model)]
    if name not in known:
        raise UnknownName(f"value of the model {model.title!r}", name, known)
    changed: CellModel = _replaced(model, name.split("."), stated)
    return changed


def _replaced(holder: Any, way: list[str], stated: StatedValue) -> Any:
    """A copy of nested dataclasses with the value at the end of the way replaced."""
    # Any: the parts on the way are dataclasses of several kinds.
    first, *further = way
    part = _replaced(getattr(holder, first), further, stated) if further else stated
    return replace(holder, **{first: part})
