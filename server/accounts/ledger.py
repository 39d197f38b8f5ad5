"""Where the ampere-hours and the kilowatt-hours went, as far as the books can tell yet."""

from server.accounts.doubt import root_sum
from server.accounts.results import Energy, LedgerItem, Made, Shorts, WaterfallItem
from server.science.constants import Metal
from server.science.faraday import charge_for_c, specific_energy_from_volts_j_kg

UNREAD_REST = "what is left of the cells' charge, shorts among it: no cell was read"


def ledger(
    cell_c: float, made: Made, metal: Metal, shorts: Shorts | None = None
) -> tuple[LedgerItem, ...]:
    """Parts of the cells' charge; they add up to all of it.

    Shorts are an item only where readings speak for the period. More metal and shorts than there
    was charge leave a negative rest: it is shown as it is.
    """
    if cell_c <= 0:
        return ()
    metal_c = float(charge_for_c(abs(made.made_kg), metal)) * (1 if made.made_kg >= 0 else -1)
    items = [
        LedgerItem(
            "metal",
            metal_c,
            metal_c / cell_c,
            made.u_current_efficiency,
            "harvested and change of stock, by Faraday's law",
        )
    ]
    u_rest = made.u_current_efficiency
    if shorts is not None:
        u_shorts = shorts.u_charge_c / cell_c
        watched_pct = min(shorts.watched_c / cell_c, 1.0) * 100
        items.append(
            LedgerItem(
                "shorts",
                shorts.charge_c,
                shorts.charge_c / cell_c,
                u_shorts,
                f"expected by the watch, from readings for {watched_pct:.0f} % of the charge",
            )
        )
        u_rest = None if u_rest is None else root_sum(u_rest, u_shorts)
    rest_c = cell_c - sum(item.charge_c for item in items)
    items.append(
        LedgerItem(
            "not explained",
            rest_c,
            1.0 - sum(item.share or 0.0 for item in items),
            u_rest,
            UNREAD_REST if shorts is None else "what is left of the cells' charge",
        )
    )
    return tuple(items)


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
