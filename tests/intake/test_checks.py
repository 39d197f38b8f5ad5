import numpy as np
import pytest

from server.intake.checks import suspicions
from server.intake.explain import SuspicionCode

READINGS = 20_000


class Section:
    """Many cells of one section with their history, and what they read today."""

    def __init__(self, volts, spread_volts, noise_volts, limits, resistive_share, seed=20260301):
        self.rng = np.random.default_rng(seed)
        self.noise_volts = noise_volts
        self.limits = limits
        self.resistive_share = resistive_share
        self.expected = volts + spread_volts * self.rng.standard_normal(READINGS)
        self.true = self.honest()
        self.before = self.honest()

    def honest(self):
        return self.expected + self.noise_volts * self.rng.standard_normal(READINGS)

    def codes(self, volts, *, before=None, expected=None, decimals=3):
        """Codes of readings entered with so many decimals."""
        return suspicions(
            np.round(volts, decimals),
            self.expected if expected is None else expected,
            self.noise_volts,
            *self.limits,
            previous_volts=self.before if before is None else before,
            resistive_share=self.resistive_share,
        ).codes

    def share(self, volts, code=None, **options):
        """Share of readings that are suspect (for this reason)."""
        codes = self.codes(volts, **options)
        return np.mean(codes == code if code else codes > 0)

    def fresh_shorts(self):
        """Drops in voltage of shorts that take a tenth of the current, more or less."""
        taken = np.minimum(self.rng.exponential(0.1, READINGS), 0.8)
        return taken * self.resistive_share * self.expected


def section(name):
    return {
        "electrowinning": lambda: Section(2.03, 0.025, 0.008, (1.82, 2.22), 0.2),
        "electrorefining": lambda: Section(0.29, 0.005, 0.002, (0.26, 0.32), 0.9),
        "zinc": lambda: Section(3.3, 0.03, 0.008, (3.0, 3.7), 0.25),
    }[name]()


sections = pytest.mark.parametrize("name", ["electrowinning", "electrorefining", "zinc"])


@sections
def test_honest_readings_of_healthy_cells_are_believed(name):
    house = section(name)

    assert house.share(house.true) == 0


@sections
def test_fresh_shorts_are_believed(name):
    house = section(name)

    assert house.share(house.true - house.fresh_shorts()) < 0.001


@sections
def test_growing_shorts_are_believed(name):
    house = section(name)
    drop = house.fresh_shorts()
    before = house.before - house.rng.uniform(0.3, 0.9, READINGS) * drop

    assert house.share(house.true - drop, before=before) < 0.001


@sections
def test_standing_shorts_of_any_depth_are_believed(name):
    house = section(name)
    drop = house.rng.uniform(0, 1, READINGS) * house.resistive_share * house.expected
    before = house.before - drop

    assert house.share(house.true - drop, before=before) < 0.003


@sections
def test_contacts_that_corrode_are_believed(name):
    house = section(name)
    rise = house.rng.uniform(0.02, 0.5, READINGS)
    before = house.before + house.rng.uniform(0.3, 0.9, READINGS) * rise

    assert house.share(house.true + rise, before=before) < 0.002


@sections
def test_contacts_that_open_at_once_are_seldom_asked_about(name):
    """They may hit the reading that swapped digits would give, and then are asked about once."""
    house = section(name)
    rise = house.rng.exponential(0.1, READINGS)

    assert house.share(house.true + rise) < 0.01
    assert house.share(house.true + rise, before=house.before + rise) < 0.002


@sections
@pytest.mark.parametrize("setpoint", [0.5, 0.8, 0.9, 1.1, 1.2])
def test_a_changed_set_point_is_no_slip_even_when_nobody_took_it_out(name, setpoint):
    house = section(name)
    step = (setpoint - 1) * house.resistive_share * house.expected

    assert house.share(house.true + step) < 0.005


@sections
@pytest.mark.parametrize(
    ("factor", "code"),
    [
        (1000, SuspicionCode.SLIPPED_UNIT),
        (0.001, SuspicionCode.SLIPPED_UNIT),
        (10, SuspicionCode.TENFOLD),
        (0.1, SuspicionCode.TENTH),
        (-1, SuspicionCode.REVERSED_LEAD),
    ],
)
def test_slips_of_the_unit_the_point_and_the_leads_are_found(name, factor, code):
    house = section(name)

    assert house.share(np.round(house.true, 3) * factor, code, decimals=9) > 0.95


@sections
@pytest.mark.parametrize("factor", [1000, -1])
def test_gross_slips_are_found_in_cells_with_a_fault_too(name, factor):
    house = section(name)
    shorted = house.true - house.fresh_shorts() / 2

    assert house.share(np.round(shorted, 3) * factor) > 0.95


def swapped(volts, place):
    """Readings in mV with the digits at this place and the next one swapped."""
    digits = np.rint(volts * 1000).astype(int)
    right, left = digits // 10**place % 10, digits // 10 ** (place + 1) % 10
    return (digits + (right - left) * 9 * 10**place) / 1000


@pytest.mark.parametrize(
    ("name", "place", "least_volts"),
    [
        ("electrowinning", 1, 0.2),
        ("electrowinning", 2, 0.2),
        ("electrorefining", 1, 0.15),
        ("electrorefining", 2, 0.15),
        ("zinc", 1, 0.3),
        ("zinc", 2, 0.3),
    ],
)
def test_swapped_digits_are_found_where_no_fault_would_go_so_far(name, place, least_volts):
    house = section(name)
    entered = swapped(house.true, place)
    is_far = np.abs(entered - house.true) > least_volts

    found = suspicions(
        entered,
        house.expected,
        house.noise_volts,
        *house.limits,
        previous_volts=house.before,
        resistive_share=house.resistive_share,
    )

    is_found = found.codes == SuspicionCode.SWAPPED_DIGITS
    assert is_far.sum() > 50
    assert is_found[is_far].mean() > 0.9
    assert found.suggested_volts[is_found] == pytest.approx(np.round(house.true, 3)[is_found])


def test_a_slip_of_the_last_digits_is_left_to_the_watch():
    """0.295 entered as 0.259 is what a short reads, too."""
    found = suspicions(0.259, 0.295, 0.002, 0.26, 0.32)

    assert found.codes.tolist() == [SuspicionCode.NONE]


def test_a_fault_that_was_there_before_is_not_a_slip():
    asked = suspicions([2.305] * 2, 2.035, 0.008, 1.8, 2.2, previous_volts=[2.03, 2.29])

    assert asked.codes.tolist() == [SuspicionCode.SWAPPED_DIGITS, SuspicionCode.NONE]


@pytest.mark.parametrize(
    ("volts", "code", "suggested"),
    [
        (2035.0, SuspicionCode.SLIPPED_UNIT, 2.035),
        (0.002035, SuspicionCode.SLIPPED_UNIT, 2.035),
        (20.35, SuspicionCode.TENFOLD, 2.035),
        (0.2035, SuspicionCode.TENTH, 2.035),
        (-2.035, SuspicionCode.REVERSED_LEAD, 2.035),
        (77.0, SuspicionCode.IMPLAUSIBLE, np.nan),
        (-0.4, SuspicionCode.IMPLAUSIBLE, np.nan),
        (2.3, SuspicionCode.NONE, np.nan),
        (1.2, SuspicionCode.NONE, np.nan),
        (2.305, SuspicionCode.NONE, np.nan),
        (0.005, SuspicionCode.NONE, np.nan),
        (-0.05, SuspicionCode.NONE, np.nan),
    ],
)
def test_without_history_the_limits_are_the_yardstick_for_gross_slips(volts, code, suggested):
    found = suspicions(volts, np.nan, np.nan, 1.8, 2.2)

    assert found.codes.tolist() == [code]
    assert found.suggested_volts == pytest.approx([suggested], nan_ok=True)


def test_a_passivated_cell_of_a_refinery_may_read_volts():
    found = suspicions([1.2, 2.2, 3.4], 0.29, 0.002, 0.26, 0.32, previous_volts=0.3)

    assert found.codes.tolist() == [0, 0, SuspicionCode.IMPLAUSIBLE]


def test_without_limits_and_history_nothing_is_asked():
    assert len(suspicions([2035.0, -1.0, np.nan], np.nan, np.nan, np.nan, np.nan).found) <= 1


def test_a_missing_reading_is_not_suspect():
    assert suspicions([np.nan], 2.0, 0.008, 1.8, 2.2).codes.tolist() == [0]


def test_a_section_that_was_expected_to_be_dead_gives_no_warning():
    found = suspicions([0.016, 0.0, 2000.0], 0.0, 0.0, 0.26, 0.32)

    assert found.codes.tolist()[:2] == [0, 0]


def test_nothing_is_asked_of_nothing():
    assert len(suspicions([], 2.0, 0.008, 1.8, 2.2)) == 0


def test_found_are_the_places_of_the_suspect_readings():
    found = suspicions([2.03, 2035.0, 2.04, -2.0], 2.035, 0.008, 1.8, 2.2)

    assert found.found.tolist() == [1, 3]


@pytest.mark.parametrize(
    ("volts", "expected", "sentence"),
    [
        (
            2035.0,
            2.0312,
            "Found 2035 V, expected about 2.031 V; in the right unit it is 2.035 V.",
        ),
        (
            2035.0,
            np.nan,
            "Found 2035 V, expected 1.8 to 2.2 V; in the right unit it is 2.035 V.",
        ),
        (
            0.2035,
            2.0312,
            "Found 0.2035 V, expected about 2.0312 V; with the point one place to the right"
            " it is 2.0350 V.",
        ),
        (
            -2.035,
            2.0312,
            "Found -2.035 V, expected about 2.031 V; with the leads the right way round it is"
            " 2.035 V.",
        ),
        (
            77.0,
            2.0,
            "Found 77.000 V, expected about 2.000 V; no cell of this section can read that.",
        ),
    ],
)
def test_each_suspicion_says_what_was_found_expected_and_meant(volts, expected, sentence):
    found = suspicions(volts, expected, 0.008, 1.8, 2.2)

    assert found.reason(0) == sentence


def test_a_suspicion_carries_its_values_as_text():
    told = suspicions(20.35, 2.0312, 0.008, 1.8, 2.2).at(0)

    assert (told.code, told.found, told.expected, told.suggested) == (
        SuspicionCode.TENFOLD,
        "20.350",
        "about 2.031",
        "2.035",
    )
