"""The sentence of a flag says what the flag's fields hold."""

import re
from dataclasses import replace

import numpy as np
import pytest

from server.watch.evidence import Doubt, flag_of
from server.watch.model.facts import facts_of
from server.watch.model.raising import Raised
from tests.factories import make_section
from tests.watch.model.sections import NOISE_V, made_up, pull_every_week

COPPER_KG_PER_C = 63.546e-3 / (2 * 96_485.33212)


@pytest.fixture
def section(session):
    return make_section(session, cells=40)


def raised_by(section, change, kind, place=7):
    """The first flag of a kind that a made-up section raises for a cell."""
    made = made_up(rounds=120)
    change(made)
    replayed = made.replayed(replace(facts_of(section, section.terms[0]), noise_v=0.008))
    return next(one for one in replayed.book.raised if (one.kind, one.place) == (kind, place))


def numbers(text):
    return [float(found) for found in re.findall(r"\d+(?:\.\d+)?", text)]


def shorted(made):
    made.volts[40:, 7] -= 12 * NOISE_V


def test_the_sentence_of_a_short_has_the_numbers_of_its_fields(section):
    flag = flag_of(section, raised_by(section, shorted, "short"), None)

    volts, away_mv, expected, _, likely, kilo_amps, low, high, kg = numbers(flag.evidence)
    assert volts == pytest.approx(flag.volts, abs=0.0005)
    assert expected == pytest.approx(flag.expected_volts, abs=0.0005)
    assert away_mv == pytest.approx(-flag.deviation_v * 1000, abs=0.5)
    assert likely == pytest.approx(flag.probability * 100, abs=0.5)
    assert kilo_amps * 1000 == pytest.approx(flag.short_amps, abs=50)
    assert low * 1000 == pytest.approx(max(flag.short_amps - 1.96 * flag.u_short_amps, 0), abs=51)
    assert high * 1000 == pytest.approx(flag.short_amps + 1.96 * flag.u_short_amps, abs=51)
    assert kg == pytest.approx(flag.lost_kg_per_day, abs=0.5)
    assert " below the " in flag.evidence
    assert flag.evidence.endswith("kg of copper a day.")


def test_the_loss_is_what_the_short_current_would_have_plated(section):
    flag = flag_of(section, raised_by(section, shorted, "short"), None)

    plated_kg = flag.short_amps * 86_400 * COPPER_KG_PER_C * 0.93
    assert flag.lost_kg_per_day == pytest.approx(plated_kg, rel=1e-4)
    assert flag.lost_value_per_day == pytest.approx(plated_kg * 9.2, rel=1e-4)
    assert flag.deviation_v == pytest.approx(flag.volts - flag.expected_volts)
    assert flag.short_amps == pytest.approx(12 * NOISE_V / 11e-6, rel=0.4)


def test_no_more_is_shorted_than_the_section_carries(section):
    raised = raised_by(section, shorted, "short")
    amps = np.full_like(raised.outcome.given_amps, 50_000.0)

    flag = flag_of(section, replace(raised, outcome=replace(raised.outcome, given_amps=amps)), None)

    assert flag.short_amps == 36_000


@pytest.mark.parametrize(
    ("sign", "kind", "verb", "hint"),
    [
        (1, "drift high", "risen", "Contacts first, then anodes and flow."),
        (-1, "drift low", "fallen", "Nodules or a short that creeps."),
    ],
)
def test_the_sentence_of_a_drift_says_how_far_it_went_and_what_chance_makes(
    section, sign, kind, verb, hint
):
    def drifting(made):
        pull_every_week(made)
        made.volts[40:, 7] += sign * 0.0003 * np.arange(80)

    raised = raised_by(section, drifting, kind)
    flag = flag_of(section, raised, None)

    lasting_mv, chance_mv, volts, away_mv, expected = numbers(flag.evidence)[:5]
    assert lasting_mv == pytest.approx(abs(raised.outcome.lasting_v[raised.at]) * 1000, abs=0.5)
    assert chance_mv == pytest.approx(raised.outcome.u_lasting_v[raised.at] * 1000, abs=0.5)
    assert volts == pytest.approx(flag.volts, abs=0.0005)
    assert away_mv == pytest.approx(abs(flag.deviation_v) * 1000, abs=0.5)
    assert expected == pytest.approx(flag.expected_volts, abs=0.0005)
    assert f"it has {verb} " in flag.evidence
    assert flag.evidence.endswith(hint)
    assert flag.short_amps is flag.probability is flag.lost_kg_per_day is None


def test_a_flag_lies_at_its_cell_and_its_moment(section):
    raised = raised_by(section, shorted, "short")
    flag = flag_of(section, raised, None)

    assert flag.cell_id == section.cell_ids[7]
    assert flag.section_id == section.id
    assert flag.raised_ms == flag.raised_by_ms == raised.raised_ms
    assert (flag.kind, flag.tier, flag.ended_ms) == ("short", raised.tier, raised.ended_ms)


def test_a_doubted_reading_is_told_with_its_reason(section):
    raised = Raised(3, "suspect reading", 5, "look", None, None, -1)

    flag = flag_of(section, raised, Doubt(2031.0, "a thousand times the usual voltage"))

    assert (flag.volts, flag.evidence) == (2031.0, "a thousand times the usual voltage")
    assert flag_of(section, raised, None).evidence == "The reading is not believed."


def test_a_cell_left_out_is_told_as_that(section):
    flag = flag_of(section, Raised(3, "no reading", 5, "look", None, None, -1), None)

    assert "three rounds in a row" in flag.evidence
    assert flag.volts is None
