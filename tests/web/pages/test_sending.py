import pytest

from server.storage.deliveries import Delivery
from server.storage.readings import between
from tests.factories import NOW_MS, make_readings, make_section
from tests.web.pages.running import rows_of, words_of

SIX_MS = NOW_MS - 6 * 3_600_000
VOLTS = b"at;section;cell;volts\n2024-03-05T06:00;EW1;1;2,031\n2024-03-05T06:01;EW1;2;2,o29\n"


@pytest.fixture
def section(session):
    return make_section(session, name="EW1")


@pytest.fixture
def client(client_of, section):
    """Somebody who logs and sends files."""
    return client_of("operator")


def send(client, *files):
    """Send files; answers the address at which they are looked at."""
    sent = [("file", file) for file in files or [("night.csv", VOLTS)]]
    return client.post("/readings-in", files=sent).headers["location"]


def test_the_page_says_what_a_file_would_bring(client):
    page = client.get(send(client))

    said = words_of(page)
    assert "Nothing is stored yet." in said
    assert "decimal comma" in said
    assert "rows 2 new 1 in the books already 0 would be held ● 1" in said
    (row,) = rows_of(page, "Rows that would be held")
    assert row[:3] == ["3", "volts", "2,o29"]
    assert "2024-03-05T06:01;EW1;2;2,o29" in row[4]


def test_a_slip_is_shown_with_what_was_probably_meant(client, session, section):
    hours = range(SIX_MS - 40 * 3_600_000, SIX_MS, 8 * 3_600_000)
    make_readings(session, section.cell_ids[0], hours, [2.03] * len(hours))
    slip = b"at,section,cell,volts\n2024-03-05T06:00,EW1,1,2031\n"

    page = client.get(send(client, ("night.csv", slip)))

    (row,) = rows_of(page, "Readings that would be suspect")
    assert row[:3] == ["2", "EW1", "1"]
    assert (row[4], row[6]) == ("2031", "2.031")


def test_a_file_of_another_kind_is_refused_and_the_others_go_in(client, session):
    where = send(client, ("night.csv", VOLTS), ("menu.csv", b"soup,fish\n1,2\n"))

    page = client.get(where)
    answer = client.post(f"{where}/take-in")

    session.rollback()
    assert "This file cannot be taken in: menu.csv, line 1" in words_of(page)
    assert answer.status_code == 303
    assert [d.source for d in session.query(Delivery)] == ["night.csv"]


def test_nothing_but_a_file_of_another_kind_cannot_be_taken_in(client):
    page = client.get(send(client, ("menu.csv", b"soup,fish\n1,2\n")))

    assert "take-in" not in page.text


def test_what_is_taken_in_is_stored_and_followed_by_the_figures(client, session, section):
    where = send(client)

    answer = client.post(f"{where}/take-in")

    session.rollback()
    (delivery,) = session.query(Delivery)
    assert answer.headers["location"] == f"/readings-in?taken={delivery.id}"
    assert (delivery.stored, delivery.held, delivery.dialect != "") == (1, 1, True)
    assert between(session, section.cell_ids, SIX_MS, SIX_MS + 1).volts.tolist() == [2.031]


def test_it_is_taken_in_once(client):
    where = send(client)
    client.post(f"{where}/take-in")

    assert client.post(f"{where}/take-in").status_code == 404


def test_it_can_be_left_out(client, session):
    where = send(client)

    client.post(f"{where}/drop")

    session.rollback()
    assert client.get(where).status_code == 404
    assert session.query(Delivery).count() == 0


def test_nobody_sees_what_another_one_sent(client, client_of):
    assert client_of("superintendent").get(send(client)).status_code == 404


def test_corrections_take_a_superintendent_and_a_reason(client, client_of):
    where = send(client)
    ines = client_of("superintendent")
    hers = send(ines)

    refused = client.post(f"{where}/look", data={"kind": "corrections", "reason": "x"})
    unsaid = ines.post(f"{hers}/look", data={"kind": "corrections", "reason": " "})

    assert refused.status_code == 403
    assert unsaid.status_code == 422
    assert "Say why what is stored is to be corrected." in unsaid.text


def test_looked_at_as_corrections_rows_take_the_place_of_what_is_stored(
    client_of, session, section
):
    make_readings(session, section.cell_ids[0], [SIX_MS], [2.5])
    ines = client_of("superintendent")
    where = send(ines)

    before = words_of(ines.get(where))
    ines.post(f"{where}/look", data={"kind": "corrections", "reason": "wrong meter"})
    after = words_of(ines.get(where))
    ines.post(f"{where}/take-in")

    session.rollback()
    assert "new 0 in the books already 0 would be held ● 2" in before
    assert "new 1 in the books already 0 would be held ● 1" in after
    assert "Reason: wrong meter" in after
    assert between(session, section.cell_ids, SIX_MS, SIX_MS + 1).volts.tolist() == [2.031]


def test_they_can_be_looked_at_as_new_records_again(client_of, section):
    ines = client_of("superintendent")
    where = send(ines)
    ines.post(f"{where}/look", data={"kind": "corrections", "reason": "wrong meter"})

    ines.post(f"{where}/look", data={"kind": "new"})

    assert "wrong meter" not in ines.get(where).text


def test_a_name_with_folders_is_shown_bare(client):
    page = client.get(send(client, ("C:\\rounds\\<b>night.csv", VOLTS)))

    assert "&lt;b&gt;night." in page.text
    assert "rounds" not in page.text


def test_what_waited_too_long_is_gone(client, the_time):
    where = send(client)
    the_time.now_ms += 3 * 3_600_000

    assert client.get(where).status_code == 404
