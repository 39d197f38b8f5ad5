"""How each figure of an account was worked out, as the page and the API show it."""

from server.accounts.doubt import ESTIMATED_CURRENT, STOCK_MODEL
from server.accounts.results import Charge, Crops, Energy, Input, Made, Shorts, Working
from server.accounts.short_charge import BETWEEN_ROUNDS
from server.science.constants import FARADAY_C_MOL, Metal
from server.science.faraday import equivalent_kg_c
from server.science.units import kah_from_coulombs, kwh_from_joules, kwh_t_from_j_kg
from server.storage.plant import SectionTerms


def _kah(charge_c: float) -> float:
    return float(kah_from_coulombs(charge_c))


def _percent(share: float | None) -> float | None:
    return None if share is None else share * 100


def workings(
    charge: Charge,
    crops: Crops,
    made: Made,
    energy: Energy,
    metal: Metal,
    terms: SectionTerms,
    shorts: Shorts | None = None,
) -> tuple[Working, ...]:
    """One working for each figure, with its formula, inputs and their sources."""
    per_kah = float(equivalent_kg_c(metal)) * 3.6e6
    equivalent = Input("K", per_kah, "kg/kAh", f"M({metal.symbol}) / ({metal.electrons} F)")
    cell_kah = Input("Q", _kah(charge.cell_c), "kAh", "current log, bypassed cells taken out")
    made_kg = Input("made", made.made_kg, "kg", "lots and stock")
    dc_kwh = None if energy.dc_j is None else float(kwh_from_joules(energy.dc_j))
    scale = Input("scale accuracy", terms.scale_accuracy * 100, "%", "plant set-up, a limit")
    ammeter = Input("current accuracy", terms.current_accuracy * 100, "%", "plant set-up, a limit")
    guess = Input("estimated current", ESTIMATED_CURRENT * 100, "%", "common practice")
    specific = (
        None
        if energy.specific_energy_j_kg is None
        else float(kwh_t_from_j_kg(energy.specific_energy_j_kg))
    )
    return (
        Working(
            "kg_per_kah",
            "K = M / (z F)",
            (
                Input("M", metal.molar_mass_kg_mol * 1e3, "g/mol", "IUPAC standard atomic weight"),
                Input("z", float(metal.electrons), "", "process of the section"),
                Input("F", FARADAY_C_MOL, "C/mol", "CODATA 2022"),
            ),
            per_kah,
            "kg/kAh",
        ),
        Working(
            "charge.cell_kah",
            "Q = sum over cells of the integral of I dt while in service",
            (
                Input("section charge", _kah(charge.section_c), "kAh", "current log"),
                Input("estimated", charge.estimated_share * 100, "%", "gaps of the log"),
            ),
            _kah(charge.cell_c),
            "kAh",
        ),
        Working(
            "crops.current_efficiency_pct",
            "weighed / (K x charge of the lots' own cathodes)",
            (
                Input("weighed", crops.weighed_kg, "kg", f"{crops.lots} lots, net less starters"),
                Input("theoretical", crops.theoretical_kg, "kg", "Faraday's law"),
                equivalent,
            ),
            _percent(crops.current_efficiency),
            "%",
        ),
        Working(
            "crops.u_current_efficiency_pct",
            "efficiency x root of (scale/sqrt 3)^2 + (current/sqrt 3)^2 + (gap part)^2",
            (scale, ammeter, guess),
            _percent(crops.u_current_efficiency),
            "%",
        ),
        Working(
            "period.made_kg",
            "made = harvested + stock at the end - stock at the start",
            (
                Input("harvested", made.harvested_kg, "kg", "lots pulled in the period"),
                Input("stock at the start", made.stock_start_kg, "kg", "charge since hung"),
                Input("stock at the end", made.stock_end_kg, "kg", "charge since hung"),
                Input("stock model", STOCK_MODEL * 100, "%", "common practice"),
            ),
            made.made_kg,
            "kg",
        ),
        Working(
            "period.current_efficiency_pct",
            "made / (K Q)",
            (made_kg, equivalent, cell_kah),
            _percent(made.current_efficiency),
            "%",
        ),
        Working(
            "energy.dc_kwh",
            "integral of V I dt, V(t) = V_ref(t) + R_d (I(t) - I_ref), summed over cells",
            (
                Input("read share", energy.read_share * 100, "%", "charge with a reading at hand"),
                Input("mean voltage", energy.mean_cell_volts, "V", "energy / charge"),
            ),
            dc_kwh,
            "kWh",
        ),
        Working(
            "energy.specific_energy_kwh_t",
            "DC energy / made",
            (Input("DC energy", dc_kwh, "kWh", "voltages and current log"), made_kg),
            specific,
            "kWh/t",
        ),
        *_of_shorts(shorts, cell_kah),
    )


def _of_shorts(shorts: Shorts | None, cell_kah: Input) -> tuple[Working, ...]:
    """The working of the charge through shorts; none where no readings speak for it."""
    if shorts is None:
        return ()
    return (
        Working(
            "ledger.shorts.kah",
            "sum over cells of the integral of (I_s / I) dQ, I_s = -deviation / R_d, each held to"
            " the cell's next round",
            (
                Input("watched charge", _kah(shorts.watched_c), "kAh", "charge after a reading"),
                cell_kah,
                Input(
                    "uncertainty of R_d",
                    shorts.relative_u_resistance * 100,
                    "%",
                    "rounds at different currents, or the plant set-up",
                ),
                Input("what passes between rounds", BETWEEN_ROUNDS * 100, "%", "common practice"),
                Input(
                    "uncertainty",
                    _kah(shorts.u_charge_c),
                    "kAh",
                    "each cell's own, R_d, between rounds",
                ),
            ),
            _kah(shorts.charge_c),
            "kAh",
        ),
    )
