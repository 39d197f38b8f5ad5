from datetime import date

import pytest

from server.storage.plant import house
from server.web.pages.period import chosen_period
from server.web.refusals import Refused
from tests.factories import DAY_MS, HOUR_MS, NOW_MS, make_house, make_section


@pytest.fixture
def plant(session):
    make_house(session, time_zone="America/Santiago")
    make_section(session)
    return house(session)


def test_without_an_address_it_is_the_last_days_up_to_now(plant):
    period = chosen_period(plant, NOW_MS, None, None, days=7)

    assert (period.from_day, period.to_day) == (date(2024, 2, 28), date(2024, 3, 5))
    assert period.to_ms == NOW_MS
    assert period.later_url is None


def test_days_are_those_of_the_tankhouse(plant):
    period = chosen_period(plant, NOW_MS, "2024-03-01", "2024-03-02", days=7)

    assert period.to_ms - period.from_ms == 2 * DAY_MS
    assert period.from_ms % DAY_MS == 3 * HOUR_MS


def test_records_that_end_long_ago_are_what_is_shown_first(plant):
    period = chosen_period(plant, NOW_MS, None, None, days=30, last_ms=NOW_MS - 300 * DAY_MS)

    assert period.to_day == date(2023, 5, 10)
    assert ("May 2023", "?from=2023-05-01&to=2023-05-10", False) in period.presets


def test_the_preset_that_is_shown_is_the_current_one(plant):
    period = chosen_period(plant, NOW_MS, None, None, days=30)

    assert [words for words, _url, is_current in period.presets if is_current] == ["30 days"]
    assert [words for words, *_ in period.presets][-2:] == ["Mar 2024", "Feb 2024"]


def test_earlier_and_later_are_as_long_and_keep_the_other_fields(plant):
    kept = {"section": "EW1"}
    period = chosen_period(plant, NOW_MS, "2024-02-01", "2024-02-10", days=7, kept=kept)

    assert period.earlier_url == "?section=EW1&from=2024-01-22&to=2024-01-31"
    assert period.later_url == "?section=EW1&from=2024-02-11&to=2024-02-20"


@pytest.mark.parametrize(
    ("first", "last"),
    [
        ("yesterday", None),
        ("2024-02-30", None),
        ("2024-03-02", "2024-03-01"),
        ("2020-01-01", "2024-01-01"),
        ("0001-01-01", "0001-02-01"),
        (None, "9999-12-31"),
    ],
)
def test_days_that_make_no_period_are_refused(plant, first, last):
    with pytest.raises(Refused):
        chosen_period(plant, NOW_MS, first, last, days=7)
