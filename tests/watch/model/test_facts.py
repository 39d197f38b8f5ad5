import pytest

from server.watch.model.facts import facts_of
from tests.factories import make_section


def test_what_the_plant_states_is_what_the_watch_starts_from(session):
    section = make_section(session, cells=12)

    found = facts_of(section, section.terms[0])

    assert (found.cells, found.rated_amps) == (12, 36_000)
    assert found.resistance_ohm == 11e-6
    assert found.u_resistance_ohm == pytest.approx(1.1e-6)
    # Limits of error of 2 mV are those of an even distribution.
    assert found.least_noise_v == pytest.approx(0.002 / 3**0.5)
    assert found.noise_v == pytest.approx(0.004 * 2.0)
    assert found.spread_v == pytest.approx(0.012 * 2.0)
    assert found.crop_ms == 6 * 86_400_000


def test_where_nothing_is_stated_the_process_says_what_follows_the_current(session):
    section = make_section(session, differential_resistance_ohm=None)

    found = facts_of(section, section.terms[0])

    assert found.resistance_ohm == pytest.approx(0.2 * 2.0 / 36_000)
    assert 0.1 < found.u_resistance_ohm / found.resistance_ohm < 0.6


def test_a_coarse_meter_is_where_the_noise_begins(session):
    section = make_section(session, meter_accuracy_v=0.05)

    found = facts_of(section, section.terms[0])

    assert found.least_noise_v == pytest.approx(0.05 / 3**0.5)
    assert found.noise_v == 0.05
    assert found.spread_v == pytest.approx(0.1 / 3**0.5)
