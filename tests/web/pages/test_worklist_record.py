import pytest

from tests.factories import DAY_MS, NOW_MS, make_find, make_flag, make_section
from tests.fixtures.browser import accessibility_faults
from tests.web.pages.running import rows_of, words_of


@pytest.fixture
def section(session):
    section = make_section(session, name="EW1")
    for cell_id, found in zip(section.cell_ids, ("short", "short", "nothing"), strict=False):
        make_flag(session, section.id, cell_id, kind="short", tier="act", probability=0.95)
        make_find(session, section.id, cell_id, found=found)
    make_flag(session, section.id, section.cell_ids[5])
    return section


def test_hits_and_false_calls_are_told_by_kind(client_of, section):
    page = client_of("reader").get("/worklist/record")

    rows = rows_of(page, "Lately, 90 days")
    assert rows[0] == ["▼ short to act on", "67 % 21 to 94", "2", "1", "0", "0", "3"]
    assert rows[1] == ["▲ drifting high watched", "not known", "0", "0", "0", "1", "1"]
    assert rows_of(page, "Since the record began") == rows


def test_stated_probabilities_are_held_against_what_was_found(client, section):
    rows = rows_of(client.get("/worklist/record"), "What its probabilities were worth")

    assert [row[:4] for row in rows] == [
        ["50–70", "0", "", "0"],
        ["70–90", "0", "", "0"],
        ["90–99", "3", "95.0 %", "2"],
        ["99–100", "0", "", "0"],
    ]


def test_without_probabilities_it_says_so(client, session):
    make_section(session)

    assert "No flag states how probable it is." in client.get("/worklist/record").text


def test_the_load_stands_beside_its_targets(client, section):
    rows = {row[0]: row[1:] for row in rows_of(client.get("/worklist/record"), "4 flags raised")}

    assert rows["flags a day"][1:] == ["150", "300", "public notes that quote the standard"]
    assert rows["share to act on"][:2] == ["● 75.0 %", "20 %"]
    assert rows["chattering: raised again within 24 h of their end"][:2] == ["0", "0"]


def test_a_short_period_is_said_to_be_one(client, section):
    page = client.get("/worklist/record", params={"from": "2024-03-01", "to": "2024-03-05"})

    assert "over 30 days at least" in words_of(page)
    assert "over 30 days at least" not in words_of(client.get("/worklist/record"))


def test_a_flag_of_long_ago_is_not_lately(client, session, section):
    raised_ms = NOW_MS - 100 * DAY_MS
    make_flag(session, section.id, section.cell_ids[7], raised_ms=raised_ms, ended_ms=raised_ms + 1)
    page = client.get("/worklist/record")

    assert rows_of(page, "Lately")[1][-1] == "1"
    assert rows_of(page, "Since")[1][-1] == "2"


def test_everybody_can_read_it(page, live_server, sign_in, section):
    sign_in(page)
    page.goto(f"{live_server}/worklist/record")

    assert accessibility_faults(page) == []
