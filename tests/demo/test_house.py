import hashlib

import numpy as np
import pytest

from server.demo.house import DEMO_DAYS, demo_house, truth_house
from server.demo.recipe import DAY_MS, HOUR_MS
from server.demo.sheets import COLUMNS, plant_toml, sheet_text
from server.demo.truth import account
from tests.demo.conftest import NOW_MS

DEMO_SECTIONS = ("EW1", "EW2", "ER1", "ZN1")


def fingerprint(house) -> str:
    texts = [plant_toml(house), *(sheet_text(house, sheet) for sheet in COLUMNS)]
    return hashlib.sha256("".join(texts).encode()).hexdigest()


def readings_of(section, cell):
    """Moments and volts of one cell as written, without the rounds that missed it."""
    rounds = section.records.rounds
    volts = rounds.volts[:, cell - 1]
    return rounds.at_ms[~np.isnan(volts), cell - 1], volts[~np.isnan(volts)]


def test_the_same_seed_and_moment_make_the_same_house(demo):
    assert fingerprint(demo_house(NOW_MS)) == fingerprint(demo)


def test_another_seed_makes_another_house():
    assert fingerprint(truth_house(seed=2, days=5)) != fingerprint(truth_house(seed=3, days=5))


def test_the_maker_says_how_far_it_is():
    told = []

    demo_house(NOW_MS, progress=lambda done, total: told.append((done, total)))

    assert told == [(1, 4), (2, 4), (3, 4), (4, 4)]


def test_the_demo_has_two_hundred_cells_in_four_sections(demo):
    processes = [section.recipe.process for section in demo.sections]

    assert sum(section.recipe.cells for section in demo.sections) == 200
    assert processes.count("copper electrowinning") == 2
    assert processes.count("copper electrorefining") == 1
    assert processes.count("zinc electrowinning") == 1


@pytest.mark.parametrize("name", DEMO_SECTIONS)
def test_the_demo_ends_now_and_not_later(demo, name):
    records = demo.section(name).records
    written = [
        records.current.at_ms.max(),
        records.rounds.at_ms[~np.isnan(records.rounds.volts)].max(),
        *(lot.weighed_at_ms for lot in records.lots),
        *(lot.pulled_at_ms for lot in records.lots),
        *(note.from_ms for note in records.outages),
        *(note.to_ms for note in records.outages if note.to_ms is not None),
        *(assay.at_ms for assay in records.assays),
        *(find.at_ms for find in records.finds),
        *(reading.at_ms for reading in records.counter),
    ]

    assert max(written) <= NOW_MS
    assert records.current.at_ms.max() > NOW_MS - HOUR_MS
    assert NOW_MS - DEMO_DAYS * DAY_MS - records.current.at_ms.min() < HOUR_MS


@pytest.mark.parametrize("hours", range(0, 24, 3))
def test_the_demo_can_be_made_at_any_hour(hours):
    house = demo_house(NOW_MS + hours * HOUR_MS)

    last_ms = max(section.records.rounds.at_ms.max() for section in house.sections)
    assert house.end_ms - last_ms < 9 * HOUR_MS


@pytest.mark.parametrize(
    ("name", "efficiency", "volts", "kwh_t"),
    [
        ("EW1", (0.91, 0.93), (1.98, 2.05), (1750, 1900)),
        ("EW2", (0.91, 0.93), (1.93, 2.05), (1750, 1900)),
        ("ER1", (0.955, 0.975), (0.27, 0.30), (230, 280)),
        ("ZN1", (0.89, 0.91), (3.25, 3.40), (2900, 3150)),
    ],
)
def test_the_figures_are_those_of_ordinary_plants(demo, name, efficiency, volts, kwh_t):
    found = account(demo.truth(name), demo.start_ms, demo.end_ms)

    assert efficiency[0] < found.crops_current_efficiency < efficiency[1]
    assert volts[0] < found.mean_cell_volts < volts[1]
    assert kwh_t[0] < found.specific_energy_j_kg / 3600 < kwh_t[1]


@pytest.mark.parametrize("name", DEMO_SECTIONS)
def test_shorts_are_open_now_and_some_have_grown_for_hours(demo, name):
    truth = demo.truth(name)

    still_open = [short for short in truth.events.shorts if short.to_ms is None]
    grown = [s for s in still_open if s.growth_h > 0 and NOW_MS - s.from_ms > 10 * HOUR_MS]

    assert len(still_open) >= 1
    assert max(short.final_share for short in grown) > 0.1
    for short in still_open:
        assert truth.in_service_at(NOW_MS, short.cell)
        assert truth.short_amps_at(NOW_MS, short.cell) > 0


def test_a_short_that_grows_pulls_its_cell_below_the_target_band(demo):
    section = demo.section("EW1")
    worst = max(
        (s for s in section.truth.events.shorts if s.to_ms is None), key=lambda s: s.final_share
    )

    at_ms, volts = readings_of(section, worst.cell)

    assert volts[at_ms > NOW_MS - 10 * HOUR_MS].min() < section.recipe.target_volts[0]
    assert volts[at_ms < worst.from_ms][-4:].min() > section.recipe.target_volts[0]


def test_shorts_end_by_a_pull_or_a_find_and_finds_are_written_down(demo):
    section = demo.section("ER1")
    ended = {short.ended_by for short in section.truth.events.shorts}
    found = {(f.at_ms, f.cell) for f in section.records.finds if f.found == "short"}

    assert ended == {"pull", "find", ""}
    assert found == {(s.to_ms, s.cell) for s in section.truth.events.shorts if s.ended_by == "find"}


def test_a_contact_corrodes_until_its_cell_stands_out(demo):
    section = demo.section("EW1")
    bad = next(c for c in section.truth.events.contacts if c.to_ms is None)
    cleaned = next(c for c in section.truth.events.contacts if c.to_ms is not None)

    at_ms, volts = readings_of(section, bad.cell)

    assert np.median(volts[-10:]) - np.median(volts[at_ms < bad.from_ms]) > 0.06
    assert volts[-6:].max() > section.recipe.target_volts[1]
    at_ms, volts = readings_of(section, cleaned.cell)
    before, after = volts[at_ms < cleaned.to_ms][-12:], volts[at_ms > cleaned.to_ms][:12]
    assert np.median(before) - np.median(after) > 0.02
    assert ("contact", cleaned.cell) in {(f.found, f.cell) for f in section.records.finds}


@pytest.mark.parametrize("name", DEMO_SECTIONS)
def test_an_outage_is_written_down_and_seen_in_the_current(demo, name):
    records = demo.section(name).records
    outage = next(note for note in records.outages if note.state == "off")
    inside = (records.current.at_ms >= outage.from_ms) & (records.current.at_ms < outage.to_ms)

    assert outage.cell is None
    assert inside.sum() >= 5
    assert not records.current.amps[inside].any()


def test_a_cell_is_bypassed_now_and_not_read(demo):
    section = demo.section("EW1")
    (note,) = [n for n in section.records.outages if n.to_ms is None]

    at_ms, _ = readings_of(section, note.cell)

    assert note.state == "bypassed"
    assert NOW_MS - note.from_ms > DAY_MS
    assert at_ms.max() < note.from_ms


def test_the_set_point_was_cut_for_days(demo):
    section = demo.section("EW2")
    (cut,) = section.truth.events.cuts
    current = section.records.current

    inside = (current.at_ms >= cut.from_ms) & (current.at_ms < cut.to_ms)
    before = (current.at_ms < cut.from_ms) & (current.at_ms > cut.from_ms - 8 * DAY_MS)

    assert cut.to_ms - cut.from_ms > 5 * DAY_MS
    assert np.median(current.amps[inside]) < 0.88 * np.median(current.amps[before])


def test_one_scale_reads_half_a_percent_high_from_a_day_on(demo):
    truth = demo.truth("EW2")
    (fault,) = truth.events.scale_faults

    before = account(truth, demo.start_ms, fault.from_ms - DAY_MS)
    after = account(truth, fault.from_ms, demo.end_ms)

    assert before.weighed_kg / before.harvested_kg == pytest.approx(1.0, abs=2e-4)
    assert after.weighed_kg / after.harvested_kg == pytest.approx(1.005, abs=2e-4)
    for other in ("EW1", "ER1", "ZN1"):
        clean = account(demo.truth(other), demo.start_ms, demo.end_ms)
        assert clean.weighed_kg / clean.harvested_kg == pytest.approx(1.0, abs=2e-4)


def test_slips_of_the_pen_of_every_kind_are_in_the_sheet_and_in_the_truth(demo):
    slips = [(s, slip) for s in demo.sections for slip in s.truth.slips]

    assert {slip.kind for _, slip in slips} == {"unit", "swapped digits", "row"}
    for section, slip in slips:
        rounds = section.records.rounds
        first = slip.cells[0] - 1
        (in_round,) = np.flatnonzero(rounds.at_ms[:, first] == slip.at_ms)
        written = rounds.volts[in_round, first : first + len(slip.cells)]
        assert written.tolist() == list(slip.written_volts)
        assert slip.written_volts != slip.meant_volts


def test_the_counter_rolls_over_and_counts_the_current(demo):
    counter = demo.section("EW1").records.counter
    counted = np.diff([reading.kah for reading in counter])
    days_c = [
        demo.truth("EW1").section_charge_c(one.at_ms, two.at_ms)
        for one, two in zip(counter[:-1], counter[1:], strict=True)
    ]

    assert (counted < 0).sum() == 1
    assert counted % 100_000 == pytest.approx(np.array(days_c) / 3.6e6, rel=1e-3, abs=0.2)


def test_the_logger_missed_some_hours(demo):
    section = demo.section("EW2")
    (gap,) = section.truth.events.gaps

    silent_ms = np.diff(section.records.current.at_ms).max()

    assert silent_ms >= gap.to_ms - gap.from_ms
    assert section.truth.section_charge_c(gap.from_ms, gap.to_ms) > 0


@pytest.mark.parametrize("name", DEMO_SECTIONS)
def test_some_readings_are_missing_but_few(demo, name):
    rounds = demo.section(name).records.rounds

    missing = np.isnan(rounds.volts).mean()

    assert 0.005 < missing < 0.05
