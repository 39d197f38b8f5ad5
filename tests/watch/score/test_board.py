"""The scoreboard as a whole, on a small plant of one process."""

from dataclasses import replace

import numpy as np
import pytest

from tests.source import ROOT
from tests.watch.plants.making import make
from tests.watch.plants.scenario import Scenario
from tests.watch.plants.scenarios import NONE, REFINING
from tests.watch.score.__main__ import BEGIN, END, put_between
from tests.watch.score.board import MEASURES, as_markdown, board
from tests.watch.score.detectors import OURS, PLAIN, TOLD, every_case


@pytest.fixture(scope="module")
def found():
    scenario = Scenario("small", REFINING, cells=24, days=20)
    scenarios = (scenario, replace(scenario, name="small and calm", shorts=NONE))
    return {"copper electrorefining": every_case([make(s, 1) for s in scenarios])}


def test_every_detector_is_asked(found):
    (of,) = found.values()

    assert list(of) == [TOLD, OURS, *PLAIN]
    assert all(len(cases) == 2 for cases in of.values())


def test_the_watch_says_something_of_every_reading_it_was_given(found):
    (of,) = found.values()
    case = of[OURS][0]
    is_said = np.isfinite(case.watched.short_amps)

    assert is_said[case.plant.is_read & case.plant.is_loaded].mean() > 0.99
    assert np.isfinite(case.watched.expected_v[is_said]).all()
    assert any(flag.kind == "short" and flag.short_amps for flag in case.watched.flags)


def test_the_table_has_a_line_for_every_measure_and_detector(found):
    text = as_markdown(board(found), "1 May 2026", 2, 1_000)
    lines = text.splitlines()

    assert "1 May 2026" in lines[0]
    assert all(any(f"| {m.measure} |" in line for line in lines) for m in MEASURES)
    assert all(any(line.startswith(f"| {name} |") for line in lines) for name in PLAIN)


def test_the_table_takes_the_place_of_the_former_one():
    page = f"before\n{BEGIN}\nold\n{END}\nafter\n"

    assert put_between(page, "new") == f"before\n{BEGIN}\nnew\n{END}\nafter\n"


def test_the_page_for_developers_has_a_place_for_it():
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")

    assert text.count(BEGIN) == text.count(END) == 1
