"""Where the ampere-hours and the kilowatt-hours went, as far as the books can tell yet."""

from server.accounts.results import Energy, LedgerItem, Made, WaterfallItem
from server.science.constants import Metal
from server.science.faraday import charge_for_c, specific_energy_from_volts_j_kg


def ledger(cell_c: float, made: Made, metal: Metal) -> tuple[LedgerItem, ...]:
    """Parts of the cells' charge; they add up to all of it.

    Metal that cannot be right (more than the charge could make) leaves a negative rest: it is
    shown as it is.
    """
    if cell_c <= 0:
        return ()
    metal_c = float(charge_for_c(abs(made.made_kg), metal)) * (1 if made.made_kg >= 0 else -1)
    share = metal_c / cell_c
    return (
        LedgerItem(
            "metal",
            metal_c,
            share,
            made.u_current_efficiency,
            "harvested and change of stock, by Faraday's law",
        ),
        LedgerItem(
            "not explained",
            cell_c - metal_c,
            1.0 - share,
            made.u_current_efficiency,
            "what is left of the cells' charge",
        ),
    )


def waterfall(energy: Energy, made: Made, metal: Metal) -> tuple[WaterfallItem, ...]:
    """Parts of the energy of each kilogram made; they add up to what the meters say.

    The measured voltage at full efficiency, then what the lost current took, then the
    rectifier's conversion where its efficiency is known.
    """
    if energy.specific_energy_j_kg is None or energy.mean_cell_volts is None:
        return ()
    ideal = float(specific_energy_from_volts_j_kg(energy.mean_cell_volts, 1.0, metal))
    items = [
        WaterfallItem("measured voltage", ideal),
        WaterfallItem("current lost", energy.specific_energy_j_kg - ideal),
    ]
    if energy.ac_j is not None and energy.dc_j:
        items.append(
            WaterfallItem(
                "conversion", energy.specific_energy_j_kg * (energy.ac_j / energy.dc_j - 1.0)
            )
        )
    return tuple(items)
