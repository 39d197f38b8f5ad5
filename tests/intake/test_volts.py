from uuid import uuid4

import pytest
from sqlalchemy.orm import Session

from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    make_current,
    make_outage,
    make_section,
    make_terms,
)
from tests.intake.conftest import LEVELS, as_csv, iso, rounds


@pytest.fixture
def known(books):
    """Ten healthy rounds of EW1 are stored."""
    books.file(as_csv(rounds("EW1", LEVELS, 10)))
    return books


def one_round(volts, at_ms=NOW_MS - HOUR_MS, section="EW1"):
    return [
        {"at": iso(at_ms + 20_000 * i), "section": section, "cell": i + 1, "volts": v}
        for i, v in enumerate(volts)
    ]


def suspects(books):
    return books.rows(
        "SELECT c.number, s.code, s.suggested FROM suspicion s JOIN cell c ON c.id = s.cell_id"
        " ORDER BY c.number"
    )


def test_voltages_are_whole_microvolts(books):
    books.record("volts", at="2024-03-05T06:00Z", section="EW1", cell=1, volts="2.0130005")

    assert books.rows("SELECT microvolts FROM reading") in ([(2013000,)], [(2013001,)])


def test_a_healthy_round_is_believed(known):
    results = known.records("volts", *one_round(LEVELS))

    assert [result.status for result in results] == ["stored"] * 10


@pytest.mark.parametrize(
    ("entered", "code", "suggested"),
    [
        (1987.0, "slipped_unit", "1.987"),
        (9.187, "swapped_digits", "1.987"),
        (-1.987, "reversed_lead", "1.987"),
        (0.199, "tenth", "1.990"),
    ],
)
def test_a_slip_is_stored_and_left_out_until_somebody_decides(known, entered, code, suggested):
    volts = [*LEVELS]
    volts[2] = entered

    results = known.records("volts", *one_round(volts))

    assert [result.status for result in results] == ["stored"] * 2 + ["suspect"] + ["stored"] * 7
    assert f"{suggested} V" in results[2].reason
    assert suspects(known) == [(3, code, suggested)]
    stored = known.series()
    doubted = stored.where(stored.suspect != 0)
    assert doubted.volts.tolist() == [entered]
    assert len(stored.believed()) == len(stored) - 1


def test_readings_are_told_with_the_decimals_that_are_written_down(books):
    coarse = [round(level, 2) for level in LEVELS]
    books.file(as_csv([r | {"volts": coarse[r["cell"] - 1]} for r in rounds("EW1", coarse, 10)]))

    result = books.record("volts", at=iso(NOW_MS), section="EW1", cell=3, volts=199)

    assert result.status == "suspect"
    assert "expected about 1.99 V" in result.reason


def test_what_is_doubted_is_no_yardstick_for_the_next(known):
    for day in range(6):
        volts = [*LEVELS]
        volts[2] = 1987.0
        known.records("volts", *one_round(volts, NOW_MS - 6 * HOUR_MS + day * HOUR_MS))

    result = known.record("volts", at=iso(NOW_MS), section="EW1", cell=3, volts=1.985)

    assert result.status == "stored"


def test_a_cell_without_history_is_held_against_its_limits(books):
    results = books.records(
        "volts",
        {"at": "2024-03-05T06:00Z", "section": "EW1", "cell": 1, "volts": 2031},
        {"at": "2024-03-05T06:01Z", "section": "EW1", "cell": 2, "volts": 1.79},
    )

    assert [result.status for result in results] == ["suspect", "stored"]


def test_a_whole_round_in_millivolts_is_not_a_movement_of_the_section(known):
    results = known.records("volts", *one_round([1000 * volts for volts in LEVELS]))

    assert {result.status for result in results} == {"suspect"}


def test_a_round_entered_one_line_down_is_seen(books):
    with Session(books.database.engine) as session:
        make_section(session, name="EW3", cells=40)
    books.again()
    levels = [round(LEVELS[i % 10] + 0.003 * (i * i % 7), 3) for i in range(40)]
    books.file(as_csv(rounds("EW3", levels, 10)))
    entered = [*levels[:12], levels[11], *levels[12:-1]]

    results = books.records("volts", *one_round(entered, section="EW3"))

    slipped = [i for i, result in enumerate(results) if result.status == "suspect"]
    assert slipped == list(range(slipped[0], 40))
    assert slipped[0] in (11, 12, 13)
    assert "one line" in results[20].reason
    assert {row[1] for row in suspects(books)} == {"row_slip"}


def test_a_movement_of_all_cells_is_no_slip(known):
    results = known.records("volts", *one_round([round(v - 0.15, 3) for v in LEVELS]))

    assert {result.status for result in results} == {"stored"}


def test_one_reading_is_judged_with_the_rest_of_its_round(known):
    moved = [round(v - 0.11, 3) for v in LEVELS]
    known.records("volts", *one_round(moved)[:-1])

    result = known.record("volts", **one_round(moved)[-1])

    assert result.status == "stored"


def test_a_set_point_that_was_cut_is_followed_in_refining(books):
    levels = [0.290, 0.301, 0.285, 0.297, 0.292, 0.288]
    with Session(books.database.engine) as session:
        hours = range(NOW_MS - 5 * DAY_MS, NOW_MS, HOUR_MS)
        amps = [27_000.0 if at < NOW_MS - 2 * HOUR_MS else 13_500.0 for at in hours]
        make_current(session, books.house.section("ER1").id, list(hours), amps)
    books.file(as_csv(rounds("ER1", levels, 10, noise=0.001)))

    halved = books.record("volts", at=iso(NOW_MS), section="ER1", cell=1, volts=0.158)
    as_before = books.record("volts", at=iso(NOW_MS), section="ER1", cell=2, volts=1.705)

    assert halved.status == "stored"
    assert as_before.status == "suspect"


def test_what_is_read_while_the_section_is_off_is_not_judged(known):
    with Session(known.database.engine) as session:
        section_id = known.house.section("EW1").id
        make_outage(session, section_id, from_ms=NOW_MS - 2 * HOUR_MS, to_ms=NOW_MS)

    results = known.records("volts", *one_round([-0.4] * 10))

    assert {result.status for result in results} == {"stored"}


def test_what_is_read_while_a_cell_is_bypassed_does_not_become_its_level(known):
    known.record(
        "outages",
        section="EW1",
        cells="3",
        **{"from": iso(NOW_MS - 7 * HOUR_MS)},
        to=iso(NOW_MS - HOUR_MS),
        state="bypassed",
    )
    for number in range(6):
        at = iso(NOW_MS - 7 * HOUR_MS + number * HOUR_MS)
        known.record("volts", at=at, section="EW1", cell=3, volts=0.02)

    result = known.record("volts", at=iso(NOW_MS), section="EW1", cell=3, volts=1.990)

    assert result.status == "stored"
    assert suspects(known) == []


def test_slips_are_found_in_a_long_file_in_any_order(books):
    records = rounds("EW1", LEVELS, 40)
    slips = [(3, 12), (7, 25), (1, 39)]
    for cell, number in slips:
        records[number * 10 + cell - 1]["volts"] *= 1000
    by_cell = sorted(records, key=lambda r: (r["cell"], r["at"]))

    counts = [books.preview(as_csv(some)).suspect for some in (records, by_cell, by_cell[::-1])]
    books.file(as_csv(by_cell))

    assert counts == [3, 3, 3]
    assert sorted(row[0] for row in suspects(books)) == sorted(cell for cell, _ in slips)


def test_a_cell_that_came_later_is_unknown_before(books):
    with Session(books.database.engine) as session:
        section_id = books.house.section("EW1").id
        make_terms(session, section_id, from_ms=NOW_MS - DAY_MS, cells=8)
    books.again()

    before = books.record("volts", at=iso(NOW_MS - 2 * DAY_MS), section="EW1", cell=9, volts=2.0)
    after = books.record("volts", at=iso(NOW_MS - HOUR_MS), section="EW1", cell=9, volts=2.0)

    assert before.status == "stored"
    assert after.status == "held"
    assert "no cell 9 at that time" in after.reason


def test_only_the_time_that_changed_is_stale(known):
    known.settle()

    known.record("volts", at=iso(NOW_MS), section="EW1", cell=3, volts=1.99)
    known.records(
        "volts",
        {"at": iso(NOW_MS - 400 * DAY_MS), "section": "ER1", "cell": 1, "volts": 0.29},
        {"at": iso(NOW_MS - 300 * DAY_MS), "section": "ER1", "cell": 1, "volts": 0.29},
    )

    assert known.stale() == [
        ("EW1", "readings", NOW_MS, NOW_MS + 1),
        ("ER1", "readings", NOW_MS - 400 * DAY_MS, NOW_MS - 400 * DAY_MS + 1),
        ("ER1", "readings", NOW_MS - 300 * DAY_MS, NOW_MS - 300 * DAY_MS + 1),
    ]


def test_late_readings_go_in_beside_the_later_ones(known):
    at_ms = NOW_MS - 76 * HOUR_MS

    result = known.record("volts", at=iso(at_ms), section="EW1", cell=3, volts=1.991)

    assert result.status == "stored"
    series = known.series()
    cell = series.where(series.cell_id == known.cell("EW1", 3))
    assert cell.at_ms.tolist() == sorted(cell.at_ms.tolist())
    assert at_ms in cell.at_ms


def test_an_id_is_taken_in_once(books):
    sent_id = str(uuid4())
    reading = {"section": "EW1", "cell": 1, "at": "2024-03-05T06:00Z", "volts": 2.01}

    first = books.record("volts", id=sent_id, **reading)
    again = books.record("volts", id=sent_id.upper(), **reading | {"volts": 2.02})

    assert (first.id, first.status) == (sent_id, "stored")
    assert (again.id, again.status) == (sent_id, "duplicate")
    assert books.series().volts.tolist() == [2.01]


def test_an_id_that_was_held_may_come_again(books):
    sent_id = str(uuid4())
    reading = {"section": "EW1", "cell": 99, "at": "2024-03-05T06:00Z", "volts": 2.01}

    first = books.record("volts", id=sent_id, **reading)
    again = books.record("volts", id=sent_id, **reading | {"cell": 9})

    assert (first.status, again.status) == ("held", "stored")


def test_answers_come_in_the_order_of_the_records(books):
    at = "2024-03-05T06:00Z"
    results = books.records(
        "volts",
        {"id": "a", "at": at, "section": "EW1", "cell": 2, "volts": 2.0},
        {"id": "b", "at": at, "section": "EW1", "cell": 1, "volts": "two"},
        {"id": "c", "at": at, "section": "EW1", "cell": 1, "volts": 2.0},
        {"id": "a", "at": at, "section": "EW1", "cell": 3, "volts": 2.0},
        {"id": "d", "at": at, "section": "EW1", "cell": 2, "volts": 2.0},
        {"id": "e", "at": at, "section": "EW1", "cell": 2, "volts": 2.1},
        {"id": "f", "at": at, "section": "EW1", "cell": 4, "volts": 2050.0},
    )

    assert [(result.id, result.status) for result in results] == [
        ("a", "stored"),
        ("b", "held"),
        ("c", "stored"),
        ("a", "duplicate"),
        ("d", "duplicate"),
        ("e", "held"),
        ("f", "suspect"),
    ]


def test_what_was_known_then_can_be_asked_for(books):
    reading = {"at": "2024-03-05T06:00Z", "section": "EW1", "cell": 1}
    books.record("volts", **reading, volts=2.01)
    books.now_ms = NOW_MS + DAY_MS
    books.record("volts", **reading, volts=2.03, reason="read anew")

    assert books.series().volts.tolist() == [2.03]
    assert books.series(known_ms=NOW_MS).volts.tolist() == [2.01]


def test_nothing_sent_is_nothing_taken(books):
    assert books.records("volts") == []
    assert books.rows("SELECT COUNT(*) FROM delivery") == [(0,)]
