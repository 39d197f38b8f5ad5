import numpy as np
import pytest

from server.intake.row_slip import row_slip, row_slips

CELLS = 60
ELECTROWINNING = (2.03, 0.025, 0.008)
ELECTROREFINING = (0.29, 0.005, 0.002)
plants = pytest.mark.parametrize(
    "plant", [ELECTROWINNING, ELECTROREFINING], ids=["electrowinning", "electrorefining"]
)


def rounds(plant, count, cells=CELLS, seed=20260301):
    """Rounds of a section: what cells read, what was expected of them, and the noise.

    The expectation has an error of its own, all cells of a round have moved together, and
    readings are rounded to the millivolt.
    """
    rng = np.random.default_rng(seed)
    volts, spread_volts, noise_volts = plant
    level = volts + spread_volts * rng.standard_normal((count, cells))
    common = 0.05 * rng.standard_normal((count, 1))
    read = level + common + noise_volts * rng.standard_normal((count, cells))
    expected = level + 0.3 * noise_volts * rng.standard_normal((count, cells))
    return read.round(3), expected, 1.05 * noise_volts


def slipped(read, length, seed=1):
    """The same rounds with a stretch of each entered a line up or down."""
    rng = np.random.default_rng(seed)
    entered = read.copy()
    starts = rng.integers(1, read.shape[1] - length - 1, len(read))
    shifts = rng.choice([-1, 1], len(read))
    for i, (start, shift) in enumerate(zip(starts.tolist(), shifts.tolist(), strict=True)):
        entered[i, start : start + length] = read[i, start + shift : start + length + shift]
    return entered, starts, shifts


@plants
@pytest.mark.parametrize("cells", [20, 60, 200])
def test_honest_rounds_are_not_called(plant, cells):
    assert row_slips(*rounds(plant, 1_200_000 // cells // 4, cells)) == {}


@plants
def test_rounds_with_a_fault_in_every_twentieth_cell_are_not_called(plant):
    read, expected, noise = rounds(plant, 10_000)
    rng = np.random.default_rng(2)
    has_fault = rng.random(read.shape) < 0.05
    read = read - has_fault * rng.exponential(0.1 * plant[0], read.shape)

    assert len(row_slips(read, expected, noise)) <= 1


@pytest.mark.parametrize(
    ("plant", "length", "least"),
    [(ELECTROWINNING, 10, 0.95), (ELECTROWINNING, 20, 0.99), (ELECTROREFINING, 15, 0.95)],
)
def test_slips_are_found_with_their_direction_and_their_stretch(plant, length, least):
    read, expected, noise = rounds(plant, 1000)
    entered, starts, shifts = slipped(read, length)

    slips = row_slips(entered, expected, noise)

    right = [
        i
        for i, slip in slips.items()
        if slip.shift == shifts[i]
        and slip.mask[starts[i] : starts[i] + length].mean() > 0.6
        and slip.mask.sum() <= length + 4
    ]
    assert len(right) > least * len(read)


def test_a_slip_to_the_end_of_the_walk_is_found():
    read, expected, noise = rounds(ELECTROWINNING, 1)
    entered = read[0].copy()
    entered[41:] = read[0, 40:-1]

    slip = row_slip(entered, expected[0], noise)

    assert slip.shift == -1
    assert slip.mask[41:].mean() > 0.9
    assert not slip.mask[:38].any()


def test_what_each_cell_read_is_suggested():
    read, expected, noise = rounds(ELECTROWINNING, 1)
    entered = read[0].copy()
    entered[20:50] = read[0, 21:51]

    slip = row_slip(entered, expected[0], noise)

    within = np.flatnonzero(slip.mask)
    assert slip.suggested_volts[within[1:]] == pytest.approx(read[0, within[1:]])
    assert np.isnan(slip.suggested_volts[within[0]])
    assert slip.suggested_volts[~slip.mask] == pytest.approx(entered[~slip.mask])


def test_a_slip_is_told_in_a_sentence():
    read, expected, noise = rounds(ELECTROWINNING, 1)
    entered = read[0].copy()
    entered[20:50] = read[0, 21:51]

    slip = row_slip(entered, expected[0], noise)
    place = int(np.flatnonzero(slip.mask)[3])

    assert slip.reason(place) == (
        f"Found {entered[place]:.3f} V, expected about {expected[0, place]:.3f} V; this stretch"
        f" of the round fits one line further down, where this cell reads"
        f" {read[0, place]:.3f} V."
    )


def test_cells_that_were_not_read_do_not_hide_a_slip():
    read, expected, noise = rounds(ELECTROWINNING, 1)
    entered = read[0].copy()
    entered[20:50] = read[0, 21:51]
    entered[[25, 33]] = np.nan

    slip = row_slip(entered, expected[0], noise)

    assert slip.shift == 1
    assert not slip.mask[[25, 33]].any()


def test_cells_without_history_speak_neither_way():
    read, expected, noise = rounds(ELECTROWINNING, 1)
    entered = read[0].copy()
    entered[20:50] = read[0, 21:51]
    expected[0, [30, 31]] = np.nan

    assert row_slip(entered, expected[0], noise).mask[20:50].mean() > 0.8


def test_cells_that_are_all_alike_cannot_show_a_slip():
    assert row_slip(np.full(60, 2.03), np.full(60, 2.03), 0.008) is None


@pytest.mark.parametrize("cells", [0, 1, 4])
def test_a_few_cells_cannot_show_a_slip(cells):
    assert row_slip(np.full(cells, 2.0), np.full(cells, 2.5), 0.008) is None


def test_a_round_that_was_not_read_shows_no_slip():
    assert row_slip(np.full(60, np.nan), np.full(60, 2.0), 0.008) is None


def test_many_rounds_give_what_each_gives_alone():
    read, expected, noise = rounds(ELECTROREFINING, 200)
    entered, _, _ = slipped(read, 12)

    together = row_slips(entered, expected, noise)

    for i in range(len(entered)):
        alone = row_slip(entered[i], expected[i], noise)
        assert (alone is None) == (i not in together)
        if alone:
            assert np.array_equal(alone.mask, together[i].mask)
