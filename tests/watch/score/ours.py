"""The watch of this program, told what the sheets of a made-up plant would tell it."""

import numpy as np

from server.science.processes import process
from server.storage.plant import SectionPlan, SectionTerms
from server.watch.model.facts import facts_of
from server.watch.model.replay import Doubted, Pulls, Replayed, Stays, replay
from server.watch.model.rounds import ordered
from tests.watch.plants.cathodes import weighed_ms
from tests.watch.plants.plant import LEAST_LOAD, Numbers, Plant, Truths
from tests.watch.score.plain import logged_amps
from tests.watch.score.watched import Flag, Watched

NOT_BELIEVED = 25.0
"""Standard deviations by which a slip of the pen is so far off that the intake holds it back."""


def watch(plant: Plant) -> Watched:
    """Replay a plant's rounds as if they had come one by one."""
    amps = logged_amps(plant)
    is_written = np.isfinite(plant.volts)
    is_doubted = is_written & plant.is_wrong
    is_doubted &= np.abs(plant.volts - plant.true_v) > NOT_BELIEVED * plant.scenario.noise_v
    is_used = is_written & ~is_doubted & plant.in_service
    is_used &= amps >= LEAST_LOAD * plant.scenario.trade.rated_amps
    place = np.broadcast_to(np.arange(plant.cells), plant.at_ms.shape)
    section = _section(plant)
    replayed = replay(
        facts_of(section, section.terms[0]),
        ordered(plant.at_ms[is_used], place[is_used], plant.volts[is_used], amps[is_used]),
        _pulls(plant),
        _stays(plant),
        _doubted(plant, is_doubted),
    )
    return Watched(_flags(replayed), *_arrays(plant, replayed))


def _section(plant: Plant) -> SectionPlan:
    """The section as plant.toml would set it up."""
    scenario = plant.scenario
    trade = scenario.trade
    kind = process(trade.process)
    low, high = trade.limits_v
    terms = SectionTerms(
        section_id=1,
        from_ms=0,
        cells=plant.cells,
        rows=2,
        cathodes_per_cell=trade.cathodes,
        cathode_area_m2=trade.cathode_area_m2,
        rated_amps=trade.rated_amps,
        metal_value_per_kg=trade.value_per_kg,
        differential_resistance_ohm=(
            trade.resistive_v / trade.rated_amps if scenario.states_resistance else None
        ),
        meter_accuracy_v=0.002,
        target_current_efficiency=trade.efficiency,
        low_volts=low,
        high_volts=high,
    )
    return SectionPlan(
        id=1,
        name=plant.name,
        process=trade.process,
        metal=kind.metal.symbol,
        electrons=kind.metal.electrons,
        terms=(terms,),
        cell_ids=tuple(range(1, plant.cells + 1)),
    )


def _pulls(plant: Plant) -> Pulls:
    rows = [
        (pull.pulled_ms, cell - 1)
        for pull in plant.pulls
        if weighed_ms(pull) < plant.end_ms
        for cell in pull.cells
    ]
    pulled = np.array(sorted(rows), np.int64).reshape(-1, 2)
    return Pulls(place=pulled[:, 1], at_ms=pulled[:, 0])


def _stays(plant: Plant) -> Stays:
    rows = [(one.cell - 1, one.from_ms, one.to_ms) for one in plant.bypasses]
    stays = np.array(rows, np.int64).reshape(-1, 3)
    return Stays(stays[:, 0], stays[:, 1], stays[:, 2])


def _doubted(plant: Plant, is_doubted: Truths) -> Doubted:
    place = np.nonzero(is_doubted)[1]
    at_ms = plant.at_ms[is_doubted]
    order = np.lexsort((place, at_ms))
    return Doubted(place[order], at_ms[order])


def _flags(replayed: Replayed) -> tuple[Flag, ...]:
    flags = []
    for raised in replayed.book.raised:
        outcome, at = raised.outcome, raised.at
        is_short = raised.kind == "short" and outcome is not None
        flags.append(
            Flag(
                cell=raised.place + 1,
                kind=raised.kind,
                tier=raised.tier,
                raised_ms=raised.raised_ms,
                ended_ms=raised.ended_ms,
                short_amps=float(outcome.given_amps[at]) if is_short else None,
                u_short_amps=float(outcome.u_given_amps[at]) if is_short else None,
                probability=float(outcome.probability[at]) if is_short else None,
            )
        )
    return tuple(flags)


def _arrays(plant: Plant, replayed: Replayed) -> tuple[Numbers, Numbers, Numbers, Numbers]:
    """Short current, the same if there is a short, its uncertainty, the healthy voltage."""
    found = [np.full(plant.at_ms.shape, np.nan) for _ in range(4)]
    starts_ms = plant.at_ms.min(axis=1)
    for outcome in replayed.outcomes:
        at_ms, place = outcome.readings.at_ms, outcome.readings.place
        number = np.searchsorted(starts_ms, at_ms, side="right") - 1
        for array, values in zip(
            found,
            (
                outcome.short_amps,
                outcome.given_amps,
                outcome.u_given_amps,
                outcome.expected_v,
            ),
            strict=True,
        ):
            array[number, place] = values
    return found[0], found[1], found[2], found[3]
