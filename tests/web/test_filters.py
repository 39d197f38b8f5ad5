from datetime import date, datetime

import pytest

from server.web import filters
from server.web.i18n import speaking

THIN = "\u2009"
UNIT = "\u202f"
NAN = float("nan")


def ms(text):
    return round(datetime.fromisoformat(text).timestamp() * 1000)


@pytest.fixture(autouse=True)
def _santiago():
    with speaking("en", "America/Santiago"):
        yield


@pytest.mark.parametrize(
    "written",
    [
        filters.number,
        filters.signed,
        filters.percent,
        filters.kg,
        filters.tonnes,
        filters.kwh,
        filters.kwh_t,
        filters.ka,
        filters.kah,
        filters.millivolts,
        filters.money,
        filters.duration,
    ],
)
@pytest.mark.parametrize("missing", [None, NAN])
def test_what_is_missing_says_so(written, missing):
    assert written(missing) == "no data"


@pytest.mark.parametrize(
    ("value", "decimals", "written"),
    [
        (2.0314, 3, "2.031"),
        (1894, 0, f"1{THIN}894"),
        (1234567.891, 1, f"1{THIN}234{THIN}567.9"),
        (-11.2, 0, "\u221211"),
        (-0.04, 1, "0.0"),
        (0, 0, "0"),
        (float("inf"), 1, "no data"),
    ],
)
def test_numbers_have_thin_spaces_in_thousands_and_a_real_minus(value, decimals, written):
    assert filters.number(value, decimals) == written


def test_figure_and_unit_never_part():
    assert filters.number(36.1, 1, "kA") == f"36.1{UNIT}kA"


def test_the_decimal_sign_is_the_language_s():
    with speaking("es"):
        assert filters.number(1894.5, 1) == f"1{THIN}894,5"


def test_differences_carry_their_sign():
    assert filters.signed(11.2) == "+11"
    assert filters.signed(-11.2) == "\u221211"
    assert filters.signed(0.0) == "0"


def test_doubt_is_silent_where_it_is_not_known():
    assert filters.doubt(0.4, 1) == f"±{UNIT}0.4"
    assert filters.doubt(None, 1) == ""


@pytest.mark.parametrize(
    ("written", "expected"),
    [
        (filters.percent(0.9344), "93.4"),
        (filters.percent(0.9344, 1, "%"), f"93.4{UNIT}%"),
        (filters.percent(1.02), "102.0"),
        (filters.kg(3705.2), f"3{THIN}705"),
        (filters.tonnes(41_200), "41.2"),
        (filters.kwh(3.6e9), f"1{THIN}000"),
        (filters.kwh_t(6_818_400), f"1{THIN}894"),
        (filters.ka(36_100), "36.1"),
        (filters.kah(3.6e6), "1.0"),
        (filters.millivolts(-0.0112), "\u221211"),
        (filters.money(221.4, 0, "USD"), f"221{UNIT}USD"),
    ],
)
def test_si_quantities_are_written_in_the_plant_s_units(written, expected):
    assert written == expected


def test_a_moment_reads_as_the_clock_on_the_wall():
    at_ms = ms("2026-03-03T07:12:31+00:00")

    assert filters.moment(at_ms) == "Tue 3 Mar 2026 04:12"
    assert filters.moment(at_ms, "short") == "Tue 3 Mar 04:12"
    assert filters.moment(at_ms, "second") == "Tue 3 Mar 2026 04:12:31"
    assert filters.clock(at_ms) == "04:12"
    assert filters.day(at_ms) == "Tue 3 Mar 2026"
    assert filters.iso(at_ms) == "2026-03-03T04:12:31-03:00"


def test_days_and_months_speak_the_reader_s_language():
    with speaking("es"):
        assert filters.day(date(2026, 3, 3)) == "mar 3 mar 2026"


@pytest.mark.parametrize("written", [filters.moment, filters.clock, filters.day])
def test_no_moment_is_no_data(written):
    assert written(None) == "no data"


def test_the_hour_that_comes_twice_says_which_it_is():
    with speaking(zone="Europe/Madrid"):
        first = filters.clock(ms("2026-10-25T00:30:00+00:00"))
        second = filters.clock(ms("2026-10-25T01:30:00+00:00"))

    assert first == "02:30 (UTC+02:00)"
    assert second == "02:30 (UTC+01:00)"


def test_the_hour_before_the_clock_is_put_on_says_nothing():
    with speaking(zone="Europe/Madrid"):
        assert filters.clock(ms("2026-03-29T00:59:00+00:00")) == "01:59"


def test_fields_take_values_and_keep_what_was_typed():
    at_ms = ms("2026-03-03T07:12:00+00:00")

    assert filters.moment_typed(at_ms) == "2026-03-03T04:12"
    assert filters.moment_typed("2026-13-01") == "2026-13-01"
    assert filters.moment_typed(None) == ""
    assert filters.day_typed(at_ms) == "2026-03-03"
    assert filters.day_typed(date(2026, 3, 3)) == "2026-03-03"
    assert filters.day_typed("soon") == "soon"
    assert filters.number_typed(1950.0) == "1950"
    assert filters.number_typed(2.0314) == "2.0314"
    assert filters.number_typed("2,03") == "2,03"
    assert filters.number_typed(None) == ""


@pytest.mark.parametrize(
    ("length_ms", "written"),
    [
        (0, "0 min"),
        (35 * 60_000, "35 min"),
        (130 * 60_000, "2 h 10 min"),
        (52 * 3_600_000, "2 d 4 h"),
        (48 * 3_600_000 + 60_000, "2 d 1 min"),
    ],
)
def test_lengths_of_time_are_told_in_two_units(length_ms, written):
    assert filters.duration(length_ms).replace(UNIT, " ") == written


def test_how_long_ago_is_told_in_words():
    assert filters.ago(0, 130 * 60_000).replace(UNIT, " ") == "2 h 10 min ago"
    assert filters.ago(None, 0) == "no data"


def test_counts_carry_their_noun():
    assert filters.count(1, "cell", "cells") == "1 cell"
    assert filters.count(1500, "cell", "cells") == f"1{THIN}500 cells"


def test_runs_of_cells_are_drawn_together():
    assert filters.cells_list([3, 1, 2, 15, 7, 8]) == "1–3, 7–8, 15"


@pytest.mark.parametrize(
    ("kind", "direction", "words"),
    [
        ("short", "low", "short"),
        ("drift low", "low", "drifting low"),
        ("drift high", "high", "drifting high"),
        ("suspect reading", "look", "suspect reading"),
        ("no reading", "look", "no reading"),
        ("something new", "look", "something new"),
    ],
)
def test_every_kind_of_flag_has_a_direction_and_words(kind, direction, words):
    assert filters.flag_direction(kind) == direction
    assert filters.flag_words(kind) == words
    assert direction in filters.MARKS


@pytest.mark.parametrize(
    ("zone", "words"),
    [
        ("America/Santiago", "Santiago time"),
        ("America/Argentina/Buenos_Aires", "Buenos Aires time"),
        ("UTC", "UTC"),
        ("Etc/GMT+4", "Etc/GMT+4"),
    ],
)
def test_a_zone_is_named_by_its_place(zone, words):
    assert filters.zone_words(zone) == words


def test_a_long_name_may_break_and_is_still_escaped():
    written = str(filters.breakable("north/volts_<b>.csv"))

    assert written == "north/<wbr>volts_<wbr>&lt;b&gt;.<wbr>csv"
