"""Inputs that several sums ask for, each defined once."""

from server.calculator.inputs import Input
from server.calculator.texts import N_

CURRENT_KA = Input("current_ka", N_("Current"), "kA", 0, 1000, is_above=True)
HOURS = Input("hours", N_("Time"), "h", 0, 20_000, is_above=True)
CHARGE_KAH = Input(
    "charge_kah",
    N_("Charge of one cell"),
    "kAh",
    0,
    1e7,
    is_above=True,
    is_needed=False,
    hint=N_("in place of current and time, where the current changed or a counter was read"),
    replaces=("current_ka", "hours"),
)
CELLS = Input("cells", N_("Cells in series"), "", 0, 10_000, is_above=True, has_doubt=False)
CATHODES = Input("cathodes", N_("Cathodes in a cell"), "", 0, 1000, is_above=True, has_doubt=False)
CATHODE_AREA_M2 = Input(
    "cathode_area_m2", N_("Area of a cathode, both faces"), "m²", 0, 100, is_above=True
)
EFFICIENCY_PCT = Input(
    "current_efficiency_pct", N_("Current efficiency"), "%", 0, 200, is_above=True
)
VOLTS = Input("volts", N_("Cell voltage"), "V", 0, 20, is_above=True)
CURRENT_DENSITY_A_M2 = Input(
    "current_density_a_m2",
    N_("Current density"),
    "A/m²",
    0,
    20_000,
    is_above=True,
    is_needed=False,
    hint=N_("in place of current, cathodes and their area"),
    replaces=("current_ka", "cathodes", "cathode_area_m2"),
)
METAL_G_L = Input("metal_g_l", N_("Metal in the electrolyte"), "g/L", 0, 500, is_above=True)
ACID_G_L = Input("acid_g_l", N_("Sulfuric acid in the electrolyte"), "g/L", 0, 500)
TEMPERATURE_DEGC = Input("temperature_degc", N_("Temperature of the electrolyte"), "°C", 0, 100)
RESISTANCE_UOHM = Input(
    "differential_resistance_uohm",
    N_("Differential resistance of a cell"),
    "µΩ",
    0,
    10_000,
    is_above=True,
)
ENERGY_PRICE = Input(
    "energy_price_per_kwh", N_("Price of energy"), "¤/kWh", 0, 1e6, has_doubt=False
)
METAL_VALUE = Input(
    "metal_value_per_kg", N_("Value of the metal"), "¤/kg", 0, 1e9, is_needed=False, has_doubt=False
)
