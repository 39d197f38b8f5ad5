"""Files of sheets sent to the API."""

import pytest

from tests.factories import make_section

VOLTS = b"at,section,cell,volts\n2024-03-05T10:00Z,A,1,2.031\n2024-03-05T10:00Z,A,99,2.031\n"
CURRENT = b"at;section;current_ka\n2024-03-05T10:00Z;A;35,5\n2024-03-05T11:00Z;A;35,75\n"


@pytest.fixture
def section(session):
    return make_section(session, name="A")


def send(client, *files, **params):
    return client.post("/api/v1/imports", files=[("file", file) for file in files], params=params)


def test_files_are_taken_in_and_told_sheet_by_sheet(section, client_of):
    answer = send(client_of("operator"), ("volts.csv", VOLTS), ("current.csv", CURRENT))

    assert answer.status_code == 200, answer.text
    volts, current = answer.json()["files"]
    assert volts["name"] == "volts.csv"
    (sheet,) = volts["sheets"]
    assert (sheet["sheet"], sheet["rows"], sheet["stored"], sheet["held"]) == ("volts", 2, 1, 1)
    (sheet,) = current["sheets"]
    assert (sheet["sheet"], sheet["stored"]) == ("current", 2)
    assert "decimal comma" in sheet["dialect"]


def test_a_file_twice_changes_nothing(section, client):
    send(client, ("volts.csv", VOLTS))

    again = send(client, ("volts.csv", VOLTS)).json()["files"][0]["sheets"][0]

    assert (again["stored"], again["duplicates"]) == (0, 1)
    assert len(client.get("/api/v1/held").json()["held"]) == 1


def test_a_preview_stores_nothing(section, client):
    answer = send(client, ("volts.csv", VOLTS), preview=True)

    assert answer.status_code == 200, answer.text
    assert answer.json()["is_preview"] is True
    (sheet,) = answer.json()["files"][0]["sheets"]
    assert (sheet["new"], sheet["held"]) == (1, 1)
    assert sheet["first_at"] == "2024-03-05T10:00:00Z"
    (held,) = sheet["first_held"]
    assert (held["line"], held["found"]) == (3, "99")
    assert client.get("/api/v1/held").json()["held"] == []


def test_what_is_no_sheet_is_refused_with_the_reason(section, client):
    answer = send(client, ("notes.csv", b"shopping,list\nmilk,2\n"))

    assert answer.status_code == 422
    (fault,) = answer.json()["errors"]
    assert "notes.csv" in fault["where"]
    assert fault["found"]
    assert fault["expected"]


def test_no_file_is_refused(section, client):
    answer = client.post("/api/v1/imports")

    assert answer.status_code == 422
    assert answer.json()["errors"][0]["where"] == "file"


def test_a_reader_may_send_no_file(section, client_of):
    assert send(client_of("reader"), ("volts.csv", VOLTS)).status_code == 403


def test_a_file_that_corrects_takes_a_superintendent(section, client_of):
    planner, superintendent = client_of("planner"), client_of("superintendent")
    send(planner, ("volts.csv", VOLTS))
    corrected = VOLTS.replace(b"2.031", b"2.013", 1)

    refused = send(planner, ("volts.csv", corrected), reason="read again")
    taken = send(superintendent, ("volts.csv", corrected), reason="read again")

    assert refused.status_code == 403
    assert taken.json()["files"][0]["sheets"][0]["stored"] == 1
