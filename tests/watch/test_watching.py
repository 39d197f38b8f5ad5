"""The watch in the books is the same to the last bit, however the records arrived."""

from dataclasses import dataclass

import numpy as np
import pytest
from sqlalchemy.orm import Session

from server.accounts import rollup
from server.jobs import catch_up, recompute
from server.settings import Settings
from server.storage import readings
from server.storage.current import keep_bypasses
from server.storage.database import Database
from server.storage.direct import execute, fetch_rows
from server.storage.flag_rows import flags_touching
from server.storage.plant import Cell, house
from server.storage.stale import mark
from server.storage.watch_rows import rounds_between
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    make_current,
    make_delivery,
    make_lot,
    make_outage,
    make_section,
    make_suspicion,
    make_terms,
)

DAYS, CELLS = 44, 8
# The 32nd day of those that are kept for good lies in the second week.
START_MS = (19_800 // 32 * 32 - 10) * DAY_MS


@dataclass(frozen=True)
class Told:
    """What arrives at once: a round's readings, or a lot."""

    kind: str
    at_ms: int
    cells: np.ndarray
    offset_ms: np.ndarray
    microvolts: np.ndarray
    suspect: np.ndarray


def events(seed: int = 4) -> list[Told]:
    """Six weeks of rounds and lots: shorts, a pull during a walk, doubts, gaps, a slow drift."""
    rng = np.random.default_rng(seed)
    level = 2.0 + rng.normal(0, 0.02, CELLS)
    told = []
    for turn in range(2 * DAYS):
        day = turn / 2
        volts = level + rng.normal(0, 0.006) + rng.normal(0, 0.005, CELLS)
        volts[2] -= 0.06 * (5 <= day < 8.2) + 0.05 * (day >= 30)
        volts[5] -= 0.09 * (17 <= day < 22)
        volts[6] += 0.0015 * max(day - 20, 0)
        suspect = (rng.random(CELLS) < 0.02).astype(int)
        is_read = rng.random(CELLS) > 0.03
        is_read[7] &= not 12 <= day < 15
        at_ms = START_MS + turn * DAY_MS // 2 + 6 * HOUR_MS
        cells = np.flatnonzero(is_read)
        volts = np.where(suspect, volts * 1000, volts)
        told.append(
            Told(
                "volts",
                at_ms,
                cells,
                cells * 300_000,
                np.rint(volts[cells] * 1e6).astype(np.int64),
                suspect[cells],
            )
        )
    none = np.zeros(0, int)
    for day in range(1, DAYS, 2):
        pair = np.array([day % 8 - 1, day % 8])
        # In the middle of a walk: the first of the two is read before the pull.
        at_ms = START_MS + day * DAY_MS + 6 * HOUR_MS + int(pair[0]) * 300_000 + 100_000
        told.append(Told("lot", at_ms, pair, none, none, none))
    return sorted(told, key=lambda one: one.at_ms)


def arrive(session, section, one, revision=0):
    """Store what arrived and mark what it makes stale, as the intake does."""
    delivery = make_delivery(session)
    if one.kind == "lot":
        make_lot(
            session,
            section.id,
            name=f"L{one.at_ms}",
            cells=";".join(str(cell + 1) for cell in one.cells),
            pulled_ms=one.at_ms,
            started_ms=None,
            delivery_id=delivery.id,
        )
        mark(session, section.id, "lots", one.at_ms, one.at_ms + 1)
        return
    cell_ids = np.array(section.cell_ids)[one.cells]
    at_ms = one.at_ms + one.offset_ms
    readings.store(
        session,
        cell_ids,
        at_ms,
        np.full(len(at_ms), revision),
        one.microvolts,
        one.suspect,
        delivery.id,
    )
    for at in np.flatnonzero(one.suspect):
        make_suspicion(session, section.id, int(cell_ids[at]), at_ms=int(at_ms[at]))
    mark(session, section.id, "readings", int(at_ms[0]), int(at_ms[-1]) + 1)


def plant(session, cells=CELLS):
    """A section with its current logged from the first day on and a bypassed cell."""
    section = make_section(session, name="EW1", cells=cells)
    make_current(
        session,
        section.id,
        [START_MS + n * DAY_MS // 2 for n in range(2 * DAYS + 2)],
        [36_000.0 * (0.8 if n % 3 == 2 else 1.0) for n in range(2 * DAYS + 2)],
    )
    from_ms, to_ms = START_MS + 12 * DAY_MS, START_MS + 14 * DAY_MS
    make_outage(session, section.id, cells="8", from_ms=from_ms, to_ms=to_ms, state="bypassed")
    keep_bypasses(session, section.cell_ids, [(section.cell_ids[7], from_ms, to_ms)])
    mark(session, section.id, "charge", START_MS, START_MS + (DAYS + 1) * DAY_MS)
    return section


def watched(session):
    """Every row that the watch wrote."""
    return {
        "flag": fetch_rows(session, "SELECT * FROM flag ORDER BY raised_ms, cell_id, kind"),
        "watched_round": fetch_rows(
            session, "SELECT * FROM watched_round ORDER BY section_id, started_ms"
        ),
        "watch_state": fetch_rows(session, "SELECT * FROM watch_state ORDER BY section_id, day_ms"),
    }


def done(session):
    assert catch_up(session, Settings()) == 0
    session.commit()
    return watched(session)


def in_one_go(session, told, cells=CELLS):
    section = plant(session, cells)
    for one in told:
        arrive(session, section, one)
    return done(session)


@pytest.fixture(scope="module")
def at_once(tmp_path_factory):
    """What the watch writes where everything arrives at once."""
    path = tmp_path_factory.mktemp("whole") / "books.db"
    database = Database(f"sqlite:///{path}")
    database.upgrade()
    with Session(database.engine) as session:
        rows = in_one_go(session, events())
    database.close()
    return rows


def assert_same(found, expected):
    for table, rows in expected.items():
        assert found[table] == rows, table


def days_kept(rows):
    return [row[1] // DAY_MS for row in rows["watch_state"]]


def test_the_made_up_weeks_have_flags_of_most_kinds(at_once):
    kinds = {value for row in at_once["flag"] for value in row if isinstance(value, str)}

    assert kinds >= {"short", "drift high", "suspect reading", "act", "look"}
    assert len(at_once["watched_round"]) == 2 * DAYS


def test_of_what_is_remembered_the_last_days_and_every_thirty_second_stay(at_once):
    newest = max(row[2] for row in at_once["watched_round"]) // DAY_MS

    first = START_MS // DAY_MS
    wanted = [day for day in range(first + 1, newest + 1) if day >= newest - 8 or day % 32 == 0]

    assert days_kept(at_once) == wanted
    assert wanted[0] % 32 == 0


@pytest.mark.parametrize("order", ["in time", "backwards", "shuffled"])
def test_rounds_that_arrive_one_by_one_give_the_same_as_all_at_once(session, at_once, order):
    told = events()
    if order == "backwards":
        told.reverse()
    elif order == "shuffled":
        np.random.default_rng(7).shuffle(told)
    section = plant(session)

    for n, one in enumerate(told):
        arrive(session, section, one)
        if n % 8 == 7:
            catch_up(session, Settings())
            session.commit()

    assert_same(done(session), at_once)


def test_blocks_of_eight_days_change_nothing(session, at_once, monkeypatch):
    monkeypatch.setattr(rollup, "BLOCK_MS", 8 * DAY_MS)

    assert_same(in_one_go(session, events()), at_once)


def test_a_rebuild_gives_the_same(database, session, at_once, monkeypatch):
    in_one_go(session, events())
    monkeypatch.setattr(rollup, "BLOCK_MS", 16 * DAY_MS)

    recompute(database, Settings())

    with Session(database.engine) as after:
        assert_same(watched(after), at_once)


def test_lots_that_arrive_after_the_readings_give_the_same(session, at_once):
    section = plant(session)
    for kind in ("volts", "lot"):
        for one in events():
            if one.kind == kind:
                arrive(session, section, one)
        rows = done(session)

    assert_same(rows, at_once)


def test_a_late_round_changes_only_what_follows_it(session, at_once):
    told = events()
    late = next(n for n, one in enumerate(told) if one.at_ms > START_MS + 25.2 * DAY_MS)
    section = plant(session)
    for one in told[:late] + told[late + 1 :]:
        arrive(session, section, one)
    before = done(session)

    arrive(session, section, told[late])

    after = done(session)
    at_ms = told[late].at_ms
    earlier = [row for row in before["watched_round"] if row[1] < at_ms]
    assert len(earlier) > 40
    assert after["watched_round"][: len(earlier)] == earlier
    assert_same(after, at_once)


def test_what_another_release_remembered_is_not_read(session, at_once):
    told = events()
    section = plant(session)
    for one in told[:-1]:
        arrive(session, section, one)
    done(session)
    for day_ms, state in fetch_rows(session, "SELECT day_ms, state FROM watch_state"):
        execute(
            session,
            "UPDATE watch_state SET state = ? WHERE day_ms = ?",
            (np.float64(99.0).tobytes() + bytes(state)[8:], day_ms),
        )

    arrive(session, section, told[-1])

    assert_same(done(session), at_once)


def test_a_corrected_reading_gives_the_same_as_if_it_had_come_first(database, session):
    told = events()
    wrong = next(n for n, one in enumerate(told) if one.at_ms > START_MS + 25.2 * DAY_MS)
    section = plant(session)
    for one in told:
        arrive(session, section, one)
    before = done(session)
    right = told[wrong]
    fixed = Told(
        "volts",
        right.at_ms,
        right.cells[:1],
        right.offset_ms[:1],
        right.microvolts[:1] - 120_000,
        np.zeros(1, int),
    )

    arrive(session, section, fixed, revision=1)

    after = done(session)
    assert after["flag"] != before["flag"]
    recompute(database, Settings())
    with Session(database.engine) as rebuilt:
        assert_same(watched(rebuilt), after)


def test_other_targets_keep_what_was_learned(session):
    told = events()
    section = plant(session)
    make_terms(session, section.id, cells=CELLS, from_ms=START_MS + 20 * DAY_MS, low_volts=1.9)
    for one in told:
        arrive(session, section, one)

    done(session)

    (_, _, _, first), (_, _, _, second) = rounds_between(
        session, section.id, START_MS + 19 * DAY_MS + 12 * HOUR_MS, START_MS + 21 * DAY_MS
    )[:2]
    assert np.median(second["band_v"]) < 1.2 * np.median(first["band_v"])


def test_another_number_of_cathodes_lets_the_cells_be_learned_anew(session):
    section = plant(session)
    make_terms(
        session,
        section.id,
        cells=CELLS,
        from_ms=START_MS + 20 * DAY_MS,
        cathodes_per_cell=50,
    )
    for one in events():
        arrive(session, section, one)

    done(session)

    bands = [
        float(np.median(cells["band_v"][cells["at_ms"] > 0].astype(float)))
        for _, _, _, cells in rounds_between(session, section.id, 0, 2**60)
    ]
    # A cell of which nothing is known may read anything within the spread of the section.
    assert bands[40] > 2 * bands[39]
    assert bands[43] < 0.75 * bands[40]


@pytest.mark.parametrize(
    "changed", [{"low_volts": 1.9}, {"cathodes_per_cell": 50}, {"cells": CELLS - 1}]
)
def test_a_rebuild_gives_the_same_across_a_change_of_terms(database, session, changed, monkeypatch):
    monkeypatch.setattr(rollup, "BLOCK_MS", 8 * DAY_MS)
    section = plant(session)
    # Between two rounds, with a doubt between the last round and the change.
    from_ms = START_MS + 40 * DAY_MS + 12 * HOUR_MS
    make_terms(session, section.id, from_ms=from_ms, **({"cells": CELLS} | changed))
    section = house(session).sections[0]
    told = events()
    one = np.zeros(1, int)
    told.append(Told("volts", from_ms - HOUR_MS, one, one, one + 2_000_000_000, one + 1))
    told.sort(key=lambda each: each.at_ms)
    for each in told:
        arrive(session, section, each)
        if each.at_ms > START_MS + 38 * DAY_MS:
            done(session)
    step_by_step = done(session)

    recompute(database, Settings())

    with Session(database.engine) as rebuilt:
        assert_same(watched(rebuilt), step_by_step)


def test_cells_that_are_added_change_nothing_of_what_was(database, session):
    told = events()
    section = plant(session)
    half = next(n for n, one in enumerate(told) if one.at_ms > START_MS + 25.2 * DAY_MS)
    for one in told[:half]:
        arrive(session, section, one)
    before = done(session)
    make_terms(session, section.id, cells=CELLS + 2, from_ms=told[half].at_ms - 2 * HOUR_MS)
    session.add_all(Cell(section_id=section.id, number=CELLS + n) for n in (1, 2))
    session.commit()
    section = house(session).sections[0]
    for one in told[half:]:
        arrive(session, section, one)

    after = done(session)

    count = len(before["watched_round"])
    assert after["watched_round"][:count] == before["watched_round"]
    recompute(database, Settings())
    with Session(database.engine) as rebuilt:
        assert_same(watched(rebuilt), after)


def test_flags_of_a_cell_that_is_taken_out_end(session):
    section = plant(session)
    gone_ms = START_MS + 35 * DAY_MS
    make_terms(session, section.id, cells=2, from_ms=gone_ms)
    for one in events():
        arrive(session, section, one)

    done(session)

    assert [
        flag
        for flag in flags_touching(session, gone_ms + DAY_MS, 2**60, section.id)
        if flag.cell_id in section.cell_ids[2:]
    ] == []
