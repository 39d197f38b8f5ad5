import re

import pytest

from server.storage.plant import house
from tests.factories import NOW_MS, make_section
from tests.web.pages.running import words_of

WHEN = {"from": "2024-03-05T00:00", "why": "new anodes"}
MIDNIGHT_MS = NOW_MS - 12 * 3_600_000


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


def terms(session):
    session.rollback()
    return house(session).section("EW1").terms


def sent(client, **changed):
    """The form as it is shown, with some of it changed."""
    page = client.get("/setup/sections/EW1")
    shown = dict(
        re.findall(r'<input type="text" id="field-\w+" name="(\w+)" value="([^"]*)"', page.text)
    )
    return client.post("/setup/sections/EW1", data=shown | WHEN | changed)


def test_a_reader_sees_what_holds_and_changes_nothing(client_of, section):
    client = client_of("reader")

    said = words_of(client.get("/setup/sections/EW1"))

    assert "Copper electrowinning · copper, 2 electrons" in said
    assert "Rated current 36 kA" in said
    assert "Change it from then on" not in said
    assert client.post("/setup/sections/EW1", data=WHEN).status_code == 403


def test_a_change_holds_from_its_date_and_leaves_the_past(client, section, session):
    answer = sent(client, rated_current_ka="34,5", low_volts="1.9")

    former, now = terms(session)
    assert answer.status_code == 303
    assert (former.rated_amps, former.low_volts) == (36_000.0, 1.85)
    assert (now.from_ms, now.rated_amps) == (MIDNIGHT_MS, 34_500.0)
    assert (now.low_volts, now.high_volts) == (1.9, 2.15)
    assert (now.why, now.cells) == ("new anodes", 10)


def test_the_history_says_what_changed_who_and_why(client, section):
    sent(client, rated_current_ka="34.5")

    said = words_of(client.get("/setup/sections/EW1"))

    assert re.search(
        r"Tue 5 Mar 2024 00:00 Rated current: 36 → 34\.5 new anodes · person \d+", said
    )
    assert "From the start" in said


def test_what_is_to_come_is_marked(client, section):
    sent(client, rated_current_ka="34.5", **{"from": "2024-04-01T00:00"})

    assert "to come" in words_of(client.get("/setup/sections/EW1"))


@pytest.mark.parametrize(
    ("field", "text", "sentence"),
    [
        ("cells", "ten", "Expected a number of cells, 1 or more."),
        ("rated_current_ka", "0", "Expected kiloamperes, above 0."),
        ("current_efficiency_pct", "101", "Expected a percentage above 0, up to 100."),
        ("low_volts", "3", "Expected two voltages, the lower one first."),
        ("walk_order", "1-99", "Expected each cell once, in walking order"),
        ("why", " ", "Say why it changes."),
        ("from", "2024-02-31T00:00", "is not in the calendar"),
    ],
)
def test_what_is_wrong_stands_at_its_field(client, section, session, field, text, sentence):
    page = sent(client, **{"cathodes_per_cell": "58"} | {field: text})

    at_field = re.search(rf'id="fault-{field}">([^<]*)<', page.text)
    assert page.status_code == 422
    assert sentence in at_field.group(1)
    assert 'name="cathodes_per_cell" value="58"' in page.text
    assert len(terms(session)) == 1


def test_nothing_changed_is_said(client, section):
    page = sent(client, rated_current_ka="36,0")

    assert page.status_code == 422
    assert "Nothing differs from what holds now." in page.text


def test_a_value_that_may_be_blank_is_taken_out(client, section, session):
    sent(client, rectifier_efficiency_pct="")

    assert terms(session)[-1].rectifier_efficiency is None


def test_two_changes_at_one_moment_are_refused(client, section):
    sent(client, rated_current_ka="34")

    page = sent(client, rated_current_ka="33")

    assert page.status_code == 422
    assert "choose another moment" in page.text


def test_a_second_change_of_the_day_is_offered_from_now_on(client, section):
    sent(client, rated_current_ka="34")

    page = client.get("/setup/sections/EW1")

    assert 'name="from" value="2024-03-05T12:00"' in page.text


def test_a_section_that_is_not_there_is_not_found(client, section):
    assert client.get("/setup/sections/EW9").status_code == 404


def test_a_measured_conductivity_is_written_down_with_its_temperature(client, section, session):
    answer = sent(client, electrode_gap_mm="42", conductivity_s_m="57,5", conductivity_at_c="45")

    former, now = terms(session)
    assert answer.status_code == 303
    assert (former.electrode_gap_m, former.conductivity_s_m) == (None, None)
    assert now.electrode_gap_m == pytest.approx(0.042)
    assert (now.conductivity_s_m, now.conductivity_at_k) == (57.5, 318.15)


def test_a_conductivity_without_its_temperature_is_asked_for_it(client, section):
    answer = sent(client, conductivity_s_m="57.5")

    assert answer.status_code == 422
    assert "Expected the temperature of conductivity_s_m." in words_of(answer)
