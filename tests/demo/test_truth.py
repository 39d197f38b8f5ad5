import numpy as np
import pytest

from server.demo.house import truth_house
from server.demo.recipe import DAY_MS, MINUTE_MS
from server.demo.truth import account, lot_charge_c
from server.science.errors import OutOfRange

SECTIONS = ("EW1", "ER1", "ZN1")
# kg per kAh, as printed in the tables of the trade.
KG_PER_KAH = {"EW1": 1.18549, "ER1": 1.18549, "ZN1": 1.21971}


@pytest.fixture(scope="module")
def short_house():
    """Nine days, so that every minute can be looked at."""
    return truth_house(seed=7, days=9)


def minutes_of(truth, from_ms, to_ms):
    """The middle of every stretch within one minute, and how many seconds it lasts."""
    edges = np.unique(
        np.concatenate(
            ([from_ms, to_ms], np.arange(from_ms // MINUTE_MS + 1, to_ms // MINUTE_MS + 1) * 60_000)
        )
    )
    edges = edges[(edges >= from_ms) & (edges <= to_ms)]
    return (edges[:-1] + edges[1:]) // 2, np.diff(edges) / 1000


@pytest.mark.parametrize("name", SECTIONS)
def test_energy_is_what_adding_up_every_minute_of_every_cell_gives(short_house, name):
    truth = short_house.truth(name)
    from_ms, to_ms = truth.start_ms + 7_654_321, truth.end_ms - 12_345_678
    middle_ms, seconds = minutes_of(truth, from_ms, to_ms)
    cells = np.arange(1, truth.cells + 1)[:, np.newaxis]

    watts = truth.volts_at(middle_ms, cells) * truth.amps_at(middle_ms)
    joules = (watts * truth.in_service_at(middle_ms, cells) * seconds).sum(axis=1)

    assert truth.dc_energy_j(from_ms, to_ms) == pytest.approx(joules, rel=1e-10)


@pytest.mark.parametrize("name", SECTIONS)
def test_charge_and_metal_are_what_adding_up_every_minute_gives(short_house, name):
    truth = short_house.truth(name)
    from_ms, to_ms = truth.start_ms + 7_654_321, truth.end_ms - 12_345_678
    middle_ms, seconds = minutes_of(truth, from_ms, to_ms)
    cells = np.arange(1, truth.cells + 1)[:, np.newaxis]
    coulombs = truth.amps_at(middle_ms) * seconds
    in_cells = coulombs * truth.in_service_at(middle_ms, cells)
    shorted = (
        truth.short_amps_at(middle_ms, cells) * truth.in_service_at(middle_ms, cells) * seconds
    )
    section_yield = truth.section_yield[(middle_ms - truth.start_ms) // (15 * MINUTE_MS)]
    plated = (in_cells - shorted) * section_yield * truth.cell_yield[:, np.newaxis]

    assert truth.section_charge_c(from_ms, to_ms) == pytest.approx(coulombs.sum(), rel=1e-12)
    assert truth.cell_charge_c(from_ms, to_ms) == pytest.approx(in_cells.sum(axis=1), rel=1e-12)
    assert truth.short_charge_c(from_ms, to_ms) == pytest.approx(shorted.sum(axis=1), rel=1e-9)
    assert truth.made_kg(from_ms, to_ms) == pytest.approx(
        plated.sum(axis=1) / 3.6e6 * KG_PER_KAH[name], rel=1e-5
    )


@pytest.mark.parametrize("name", SECTIONS)
@pytest.mark.parametrize("cut_ms", [0, 1, 987_654_321, 30 * DAY_MS])
def test_the_parts_of_an_account_add_up_to_the_whole(known, name, cut_ms):
    truth = known.truth(name)
    cut_ms += truth.start_ms
    whole = account(truth, truth.start_ms, truth.end_ms)

    before = account(truth, truth.start_ms, cut_ms)
    after = account(truth, cut_ms, truth.end_ms)

    for figure in (
        "section_charge_c",
        "cell_charge_c",
        "short_charge_c",
        "lots",
        "weighed_kg",
        "harvested_kg",
        "crops_theoretical_kg",
        "made_kg",
        "dc_energy_j",
    ):
        parts = getattr(before, figure) + getattr(after, figure)
        assert parts == pytest.approx(getattr(whole, figure), rel=1e-11), figure
    assert before.stock_end_kg == after.stock_start_kg


@pytest.mark.parametrize("name", SECTIONS)
def test_metal_made_is_harvested_or_still_hanging(known, name):
    truth = known.truth(name)
    lot = truth.lots[40]
    from_ms, to_ms = truth.start_ms + 5 * DAY_MS, lot.pulled_at_ms

    found = account(truth, from_ms, to_ms)

    assert found.made_kg == pytest.approx(
        found.harvested_kg + found.stock_end_kg - found.stock_start_kg, rel=1e-10
    )


def test_cathodes_pulled_at_this_moment_hang_until_it_is_past(known):
    truth = known.truth("EW1")
    lot = truth.lots[30]
    cells = np.array(lot.cells) - 1

    hanging_kg = truth.stock_kg(lot.pulled_at_ms)[cells].sum()
    later_kg = truth.stock_kg(lot.pulled_at_ms + 60_000)[cells].sum()

    assert hanging_kg == pytest.approx(lot.metal_kg, rel=1e-10)
    assert later_kg < hanging_kg / 100


@pytest.mark.parametrize("name", SECTIONS)
def test_a_lot_is_the_metal_its_own_cells_made_while_it_grew(known, name):
    truth = known.truth(name)
    last_pull = {}

    for lot in truth.lots:
        cells = np.array(lot.cells) - 1
        metal_kg = truth.made_kg(lot.started_at_ms, lot.pulled_at_ms)[cells].sum()
        assert lot.metal_kg == pytest.approx(metal_kg, rel=1e-12)
        assert {last_pull.get(cell, truth.start_ms) for cell in lot.cells} == {lot.started_at_ms}
        last_pull.update(dict.fromkeys(lot.cells, lot.pulled_at_ms))


@pytest.mark.parametrize("name", SECTIONS)
def test_a_bypassed_cell_receives_nothing(known, name):
    truth = known.truth(name)

    for bypass in truth.events.bypasses:
        to_ms = truth.end_ms if bypass.to_ms is None else bypass.to_ms
        assert truth.cell_charge_c(bypass.from_ms, to_ms)[bypass.cell - 1] == 0.0
        assert truth.section_charge_c(bypass.from_ms, to_ms) > 0.0


@pytest.mark.parametrize("name", SECTIONS)
def test_nothing_flows_in_an_outage_or_a_trip(known, name):
    truth = known.truth(name)

    for span in (*truth.events.outages, *truth.events.trips):
        assert truth.section_charge_c(span.from_ms, span.to_ms) == 0.0
        assert truth.section_charge_c(span.to_ms, span.to_ms + 60_000) > 0.0


def test_a_short_makes_no_metal_and_lowers_the_voltage_by_its_share_of_the_resistance(known):
    truth = known.truth("EW1")
    short = max(truth.events.shorts, key=lambda short: short.final_share)
    at_ms = (truth.end_ms if short.to_ms is None else short.to_ms) - 1

    short_amps = float(truth.short_amps_at(at_ms, short.cell))
    amps = float(truth.amps_at(at_ms))
    healthy_ohm = known.section("EW1").recipe.resistance_ohm
    fall_v = float(truth.volts_at(at_ms - 3_600_000 * 24, short.cell)) - float(
        truth.volts_at(at_ms, short.cell)
    )

    assert short_amps == pytest.approx(short.final_share * amps, rel=0.05)
    assert fall_v == pytest.approx(healthy_ohm * short_amps, abs=0.03)


def test_no_charge_gives_no_efficiency(known):
    truth = known.truth("EW1")

    found = account(truth, truth.start_ms, truth.start_ms)

    assert np.isnan(found.period_current_efficiency)
    assert np.isnan(found.crops_current_efficiency)
    assert found.stock_end_kg == 0.0


@pytest.mark.parametrize("outside_ms", [-1, 60 * DAY_MS + 1])
def test_a_moment_outside_the_record_is_refused(known, outside_ms):
    truth = known.truth("EW1")

    with pytest.raises(OutOfRange, match="to_ms"):
        truth.cell_charge_c(truth.start_ms, truth.start_ms + outside_ms)


@pytest.mark.parametrize("name", SECTIONS)
def test_efficiency_of_the_crops_is_their_metal_over_their_own_charge(known, name):
    truth = known.truth(name)
    from_ms, to_ms = truth.start_ms + 20 * DAY_MS, truth.start_ms + 40 * DAY_MS
    lots = [lot for lot in truth.lots if from_ms <= lot.pulled_at_ms < to_ms]
    theory_kg = sum(lot_charge_c(truth, lot) for lot in lots) / 3.6e6 * KG_PER_KAH[name]

    found = account(truth, from_ms, to_ms)

    assert found.lots == len(lots) > 15
    assert found.crops_current_efficiency == pytest.approx(
        sum(lot.metal_kg for lot in lots) / theory_kg, rel=1e-5
    )
