"""Cells of the trade: what electrodes, contacts and gaps usually cost, and how sure that is."""

from dataclasses import replace

from server.science.electrode.parameters import (
    COPPER_IN_SULFATE,
    OXYGEN_ON_COATED_TITANIUM,
    OXYGEN_ON_LEAD_CALCIUM,
    OXYGEN_ON_LEAD_SILVER,
    ZINC_IN_SULFATE,
    KineticParameters,
    TafelParameters,
)
from server.science.errors import UnknownName
from server.science.voltage.models import CellModel, UsualConditions
from server.science.voltage.overpotentials import (
    StatedValue,
    Status,
    TafelElectrode,
    TwoWayElectrode,
    UsualPoint,
    stated_between,
)

# Ours: no source at hand gives how an overpotential moves with temperature. On the lines below,
# activation energies of 20 to 60 kJ/mol let it change by +0.1 to -0.2 % per kelvin.
LINE_UNMOVED_BY_HEAT = StatedValue(0.0, 0.002, "chosen", "no source; zero, with a wide doubt")
# Ours: near equilibrium the same energies let it fall by 2 % per kelvin and more.
CURVE_UNMOVED_BY_HEAT = StatedValue(0.0, 0.02, "chosen", "no source; zero, with a wide doubt")
# Nothing lies in the gap.
NO_SEPARATOR = StatedValue(0.0, 0.0, "common practice", "no bag or diaphragm")
# Ours: a rate constant is held so loosely that transfer coefficients may be a tenth off.
TRANSFER_U_SHARE = 0.1


# Ours: the bands below are what the trade puts down, and every point is chosen so that the
# overpotential lies in the middle of its band at usual conditions: no exchange current here is a
# published one.
TEXTBOOK = "textbooks and the trade, at usual conditions"
# Said where only the sum is a figure of the trade.
WHOLE = "chosen so that the whole falls into the trade's band"
# One electron limits, as for hydrogen; only the coefficients are used (from memory).
NICKEL_KIND = KineticParameters(
    "nickel and cobalt in sulfate", 1.0, 0.1, 10.0, 0.5, 0.5, "from memory",
    "iron-group metals, 0.13 V per decade near 60 degC, from memory",
)  # fmt: skip


def _line(
    name: str, amps_m2: float, kelvin: float, cost: StatedValue, slope: TafelParameters
) -> TafelElectrode:
    """An electrode on a Tafel line of a known slope, through a known cost."""
    status: Status = "looked up" if slope.status == "looked up" else "from memory"
    return TafelElectrode(
        name,
        UsualPoint(amps_m2, kelvin, cost, LINE_UNMOVED_BY_HEAT),
        stated_between(slope.low_v, slope.high_v, status, slope.source),
    )


def _curve(
    name: str,
    amps_m2: float,
    kelvin: float,
    cost: StatedValue,
    kinetics: KineticParameters,
    anodic: bool = False,
) -> TwoWayElectrode:
    """An electrode on a Butler-Volmer curve of known coefficients, through a known cost."""
    coefficients = [kinetics.cathodic_transfer, kinetics.anodic_transfer]
    driven, reverse = (
        StatedValue(known, known * TRANSFER_U_SHARE, "from memory", kinetics.source)
        for known in (reversed(coefficients) if anodic else coefficients)
    )
    point = UsualPoint(amps_m2, kelvin, cost, CURVE_UNMOVED_BY_HEAT)
    return TwoWayElectrode(name, point, driven, reverse)


def _recalled(low: float, high: float, source: str = TEXTBOOK) -> StatedValue:
    """The middle of a band from memory."""
    return stated_between(low, high, "from memory", source)


def _ours(low: float, high: float, source: str) -> StatedValue:
    """The middle of a band that is nobody's but ours."""
    return stated_between(low, high, "chosen", source)


def _drop(low_v: float, high_v: float, amps_m2: float) -> StatedValue:
    """A resistance of contacts, ohm m2, from the band of its drop at a current density."""
    return stated_between(low_v / amps_m2, high_v / amps_m2, "from memory", TEXTBOOK)


def _shift(u_v: float, why: str) -> StatedValue:
    """No shift of the reversible voltage, with a doubt."""
    return StatedValue(0.0, u_v, "chosen", why)


# Common practice: a few per cent of oxygen between the plates.
OXYGEN_IN_GAP = stated_between(0.0, 0.10, "common practice", "a few per cent of oxygen in the gap")
# No electrode of a refinery gives off gas.
NO_GAS = StatedValue(0.0, 0.0, "common practice", "no gas is evolved")

# Cost: textbooks (from memory). Slope: looked up, see the parameters of electrodes.
LEAD_CALCIUM_ANODE = _line(
    "oxygen on lead-calcium-tin", 300.0, 318.15, _recalled(0.45, 0.70), OXYGEN_ON_LEAD_CALCIUM
)
# 0.35 V below lead: an abstract of 2011 (Morimitsu and others) puts a new anode 0.5 V below lead
# and 0.15 V below commercial coatings; 0.37 to 0.42 V in J. Appl. Electrochem. 27 (1997) 579,
# abstract. Both looked up; that they hold in copper cells, and the half-width, is ours.
COATED_TITANIUM_ANODE = _line(
    "oxygen on coated titanium", 300.0, 318.15,
    _ours(0.125, 0.325, "0.35 V below lead, as abstracts of 1997 and 2011 have it"),
    OXYGEN_ON_COATED_TITANIUM,
)  # fmt: skip
# Cost: textbooks (from memory). Slope: looked up, see the parameters of electrodes.
LEAD_SILVER_ANODE = _line(
    "oxygen on lead-silver", 500.0, 311.15, _recalled(0.75, 0.95), OXYGEN_ON_LEAD_SILVER
)

# Bands of textbooks (from memory); their sums, 1.8 to 2.2 V, too.
_COPPER_WINNING = CellModel(
    title="copper electrowinning, lead anodes",
    process="copper electrowinning",
    anode=LEAD_CALCIUM_ANODE,
    cathode=_curve(
        "copper in acid sulfate", 300.0, 318.15, _recalled(0.03, 0.10), COPPER_IN_SULFATE
    ),
    contact_ohm_m2=_drop(0.05, 0.30, 300.0),
    separator_ohm_m2=NO_SEPARATOR,
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.010, "activities are good to about 10 mV"),
    conductivity_of="Cu",
    activities_of="Cu",
    usual=UsualConditions(300.0, 318.15, 40.0, 180.0, 0.040),
)
_COPPER_WINNING_COATED = replace(
    _COPPER_WINNING, title="copper electrowinning, coated anodes", anode=COATED_TITANIUM_ANODE
)
# Bands of textbooks (from memory); their sums, 0.25 to 0.40 V, too. The gap is a mean over the life
# of an anode, which grows thinner.
_COPPER_REFINING = CellModel(
    title="copper electrorefining",
    process="copper electrorefining",
    anode=_curve(
        "copper anode dissolving", 250.0, 333.15, _recalled(0.02, 0.06), COPPER_IN_SULFATE,
        anodic=True,
    ),
    cathode=_curve(
        "copper in acid sulfate", 250.0, 333.15, _recalled(0.05, 0.10), COPPER_IN_SULFATE
    ),
    contact_ohm_m2=_drop(0.03, 0.08, 250.0),
    separator_ohm_m2=NO_SEPARATOR,
    gas_share=NO_GAS,
    reversible_shift_v=_shift(0.0, "the same couple on both sides"),
    conductivity_of="Cu",
    activities_of="Cu",
    usual=UsualConditions(250.0, 333.15, 45.0, 180.0, 0.035),
)  # fmt: skip
# The sum, 3.3 to 3.5 V at 400 to 600 A/m2, is the plant survey of 2008 as an article of 2021 quotes
# it (looked up); the parts are from memory.
_ZINC_WINNING = CellModel(
    title="zinc electrowinning",
    process="zinc electrowinning",
    anode=LEAD_SILVER_ANODE,
    cathode=_curve("zinc in acid sulfate", 500.0, 311.15, _recalled(0.06, 0.12), ZINC_IN_SULFATE),
    contact_ohm_m2=_drop(0.05, 0.10, 500.0),
    separator_ohm_m2=NO_SEPARATOR,
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.010, "activities are good to about 10 mV"),
    conductivity_of="Zn",
    activities_of="Zn",
    usual=UsualConditions(500.0, 311.15, 60.0, 170.0, 0.035),
)
# Only the sum, 3.2 to 4.0 V, is a figure of the trade (from memory). The bag's share is chosen so
# that the sum falls there: 25 mm of nearly neutral solution in it cost about 1.3 mohm m2 more than
# the same of anolyte, and the cloth something.
_NICKEL_WINNING = CellModel(
    title="nickel electrowinning, bagged cathodes",
    process="nickel electrowinning",
    anode=_line("oxygen on lead", 220.0, 333.15, _ours(0.50, 0.70, WHOLE), OXYGEN_ON_LEAD_CALCIUM),
    cathode=_curve("nickel in sulfate", 220.0, 333.15, _recalled(0.20, 0.35), NICKEL_KIND),
    contact_ohm_m2=_drop(0.05, 0.15, 220.0),
    separator_ohm_m2=_ours(0.5e-3, 2.5e-3, WHOLE),
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.030, "anolyte and catholyte differ, and tables do"),
    conductivity_of="Ni",
    activities_of="Ni",
    usual=UsualConditions(220.0, 333.15, 75.0, 40.0, 0.060),
)
# Only the sum, 3.5 to 5.0 V, is a figure of the trade (from memory); nickel's electrolyte and
# activities stand in, mole for mole.
_COBALT_WINNING = CellModel(
    title="cobalt electrowinning",
    process="cobalt electrowinning",
    anode=_line("oxygen on lead", 250.0, 333.15, _ours(0.50, 0.80, WHOLE), OXYGEN_ON_LEAD_CALCIUM),
    cathode=_curve("cobalt in sulfate", 250.0, 333.15, _recalled(0.20, 0.40), NICKEL_KIND),
    contact_ohm_m2=_drop(0.05, 0.20, 250.0),
    separator_ohm_m2=_ours(0.0, 4.0e-3, WHOLE),
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.030, "activities are those of nickel"),
    conductivity_of="Ni",
    activities_of="Ni",
    usual=UsualConditions(250.0, 333.15, 50.0, 10.0, 0.050),
)
# Only the sum, 4.2 to 5.2 V, is a figure of the trade (from memory). Nickel's electrolyte stands in
# for manganese with ammonium sulfate; a plant had better measure its own.
_MANGANESE_WINNING = CellModel(
    title="manganese electrowinning, diaphragm",
    process="manganese electrowinning",
    anode=_line(
        "oxygen on lead-silver", 450.0, 311.15, _ours(0.60, 0.90, WHOLE), OXYGEN_ON_LEAD_SILVER
    ),
    cathode=_curve("manganese in sulfate", 450.0, 311.15, _ours(0.20, 0.40, WHOLE), NICKEL_KIND),
    contact_ohm_m2=_drop(0.05, 0.15, 450.0),
    separator_ohm_m2=_ours(0.0, 1.0e-3, WHOLE),
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.050, "ammonium sulfate is not counted"),
    conductivity_of="Ni",
    activities_of="Mn",
    usual=UsualConditions(450.0, 311.15, 33.0, 35.0, 0.035),
)
# Only the sum, 2.5 to 3.2 V, is a figure of the trade (from memory, weak); zinc's electrolyte
# stands in, mole for mole.
_CADMIUM_WINNING = CellModel(
    title="cadmium electrowinning",
    process="cadmium electrowinning",
    anode=_line(
        "oxygen on lead-silver", 100.0, 308.15, _ours(0.60, 0.85, WHOLE), OXYGEN_ON_LEAD_SILVER
    ),
    cathode=_curve("cadmium in sulfate", 100.0, 308.15, _ours(0.03, 0.10, WHOLE), ZINC_IN_SULFATE),
    contact_ohm_m2=_drop(0.03, 0.10, 100.0),
    separator_ohm_m2=NO_SEPARATOR,
    gas_share=OXYGEN_IN_GAP,
    reversible_shift_v=_shift(0.015, "activities are good to about 10 mV"),
    conductivity_of="Zn",
    activities_of="Cd",
    usual=UsualConditions(100.0, 308.15, 100.0, 100.0, 0.040),
)

# By name of the process; a second kind of anode adds its own words to the name.
CELL_MODELS: dict[str, CellModel] = {
    "copper electrowinning": _COPPER_WINNING,
    "copper electrowinning, coated anodes": _COPPER_WINNING_COATED,
    "copper electrorefining": _COPPER_REFINING,
    "zinc electrowinning": _ZINC_WINNING,
    "nickel electrowinning": _NICKEL_WINNING,
    "cobalt electrowinning": _COBALT_WINNING,
    "manganese electrowinning": _MANGANESE_WINNING,
    "cadmium electrowinning": _CADMIUM_WINNING,
}


def cell_model(name: str) -> CellModel:
    """The model of a kind of cell, capitals or not.

    Refining of other metals than copper, molten salts and "other" have none: too little is known
    of their electrodes. `terms_without_model` gives the little that is.

    Parameters
    ----------
    name : str
        Name of a process, or one of the further names in `CELL_MODELS`.

    Returns
    -------
    CellModel
        The model.

    Raises
    ------
    UnknownName
        If there is no model of that name; it offers the near ones.

    Source
    ------
    Each value names its own.

    Example
    -------
    >>> cell_model("Zinc electrowinning").anode.name
    'oxygen on lead-silver'
    """
    wanted = " ".join(name.lower().split())
    if wanted not in CELL_MODELS:
        raise UnknownName("model of a cell", name, CELL_MODELS)
    return CELL_MODELS[wanted]
