"""The told detector, and limits that are set for a share of false flags."""

import numpy as np
import pytest

from tests.watch.plants.making import make
from tests.watch.plants.scenario import Scenario, Shorts
from tests.watch.plants.scenarios import ELECTROWINNING, NONE
from tests.watch.score.charts import Scored, limit_for, raises, standing
from tests.watch.score.plain import fixed_limits, own_cusum, own_ewma, three_sigma
from tests.watch.score.seen import false_per_thousand, flagged_share
from tests.watch.score.told import told, told_cases


@pytest.fixture(scope="module")
def plants():
    return [
        make(Scenario("usual", ELECTROWINNING, cells=60, days=40), 1),
        make(Scenario("calm", ELECTROWINNING, cells=60, days=40, shorts=NONE), 1),
    ]


@pytest.fixture(scope="module")
def cases(plants):
    return told_cases(plants)


def test_its_limit_gives_two_false_flags_per_thousand_readings(cases):
    assert false_per_thousand(cases) == pytest.approx(2.0, abs=0.2)


def test_it_sees_most_of_what_passes(cases):
    assert 0.75 < flagged_share(cases[:1]) < 1.0


def test_its_odds_speak_for_shorts_where_there_are_any(plants):
    scored, watched = told(plants[0])
    there, used = plants[0].has_short, np.isfinite(scored.scores)

    assert np.median(scored.scores[there & used]) > 3.0
    assert np.median(scored.scores[~there & used]) < -3.0
    large = used & (plants[0].short_at_reading_amps > 4_000.0)
    ratio = watched.given_amps[large] / plants[0].short_at_reading_amps[large]
    assert np.median(ratio) == pytest.approx(1.0, abs=0.1)


def test_what_it_states_as_probability_is_how_often_it_is_so(plants):
    scored, _ = told(plants[0])
    used = np.isfinite(scored.scores)
    stated = 1.0 / (1.0 + np.exp(-scored.scores[used]))

    assert stated.mean() == pytest.approx(plants[0].has_short[used].mean(), rel=0.35)


@pytest.mark.parametrize(
    ("of", "high"),
    [(fixed_limits, 1.0), (three_sigma, 30.0), (own_ewma, 12.0), (own_cusum, 40.0)],
)
def test_every_detector_raises_as_many_falsely_and_sees_less(plants, cases, of, high):
    scored = [of(plant) for plant in plants]
    limit = limit_for(scored, 0.0, high)
    readings = sum(int(plant.is_read.sum()) for plant in plants)
    stands = [standing(one, limit) for one in scored]
    false = sum(
        int((raises(one, at) & ~one.plant.has_short).sum())
        for one, at in zip(scored, stands, strict=True)
    )
    seen = (stands[0] & plants[0].has_short).sum() / plants[0].has_short.sum()

    assert 1000.0 * false / readings == pytest.approx(2.0, abs=0.3)
    assert seen < (cases[0].is_flagged & plants[0].has_short).sum() / plants[0].has_short.sum()


def test_a_flag_ends_at_the_second_low_score_in_a_row_and_with_the_cathodes():
    plant = make(Scenario("short", ELECTROWINNING, cells=4, days=4, shorts=Shorts(per_crop=0.0)), 1)
    rounds = len(plant.at_ms)
    scores = np.zeros((rounds, 4))
    scores[1] = 5.0
    scores[2], scores[3] = 1.0, 3.0
    stands = standing(Scored(plant, scores, over=lambda limit: limit / 2), limit=4.0)
    is_same = plant.crop_of[:6] == plant.crop_of[1]

    expected = np.array([False, True, True, True, True, False])[:, None] & is_same
    np.testing.assert_array_equal(stands[:6], expected)
