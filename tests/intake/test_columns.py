import pytest

from server.intake.columns import SHEETS, canonical, recognised
from server.intake.errors import FileRefused


def kind_of(header, hint=""):
    return recognised(header.split(","), file="sheet.csv", line=1, hint=hint).name


def refusal_of(header, hint=""):
    with pytest.raises(FileRefused) as caught:
        kind_of(header, hint)
    return caught.value


def test_each_sheet_is_recognised_by_its_own_columns():
    found = {name: kind_of(",".join(kind.names)) for name, kind in SHEETS.items()}

    assert found == {name: name for name in SHEETS}


@pytest.mark.parametrize(
    ("header", "kind"),
    [
        ("At, SECTION ,Current kA", "current"),
        ("volts,cell,section,at,remark", "volts"),
        ("section,cells,from,to,state", "outages"),
        ("at,section,stream,acid_g_l", "electrolyte"),
        ("at,section,cell,found", "finds"),
        ("weighed_at,lot,section,cells,pulled_at,net_kg,starter_kg", "lots"),
        ("at,section,counter-kAh", "counter"),
    ],
)
def test_case_order_and_blanks_in_a_header_do_not_matter(header, kind):
    assert kind_of(header) == kind


def test_the_columns_count_for_more_than_the_name_of_the_file():
    assert kind_of("at,section,cell,volts", hint="current.csv") == "volts"


def test_the_name_decides_when_the_columns_fit_two_sheets():
    assert kind_of("at,section,current_ka,counter_kah", hint="counter march.csv") == "counter"


def test_columns_of_two_sheets_are_refused_without_a_name_to_go_by():
    refusal = refusal_of("at,section,current_ka,counter_kah")

    assert refusal.code == "several_kinds"
    assert "current and counter" in str(refusal)


def test_a_missing_column_is_named_with_what_was_probably_meant():
    refusal = refusal_of("at,section,cell,voltage")

    assert refusal.code == "columns"
    assert "missing: volts (is “voltage” meant?)" in refusal.reason


def test_the_name_of_the_file_tells_which_columns_to_ask_for():
    refusal = refusal_of("time,name", hint="outages.csv")

    assert "missing: section, cells, from, to, state" in refusal.reason


def test_a_strange_header_is_answered_with_all_sheets():
    refusal = refusal_of("Invoice,Amount")

    assert all(f"{name}: " in refusal.reason for name in SHEETS)


def test_an_electrolyte_sheet_without_a_measured_column_is_refused():
    assert refusal_of("at,section,stream").code == "columns"


def test_a_column_that_stands_twice_is_refused():
    refusal = refusal_of("at,section,cell,volts,Volts")

    assert (refusal.code, refusal.column) == ("column_twice", "volts")


@pytest.mark.parametrize("text", ["current_ka", "Current kA", " current-KA ", "current  ka"])
def test_a_heading_has_one_canonical_form(text):
    assert canonical(text) == "current_ka"
