"""Which readings can be read but not believed, each with the reason and what was probably meant.

The question asked of a reading is not whether it is unusual, since unusual readings are what
a voltmeter is carried around for, but whether a slip explains it so much better than a fault
of the cell that somebody should look at the entry before anybody looks at the cell. So every
slip is weighed against the honest faults that could give the same reading: a short, which
lowers it, a bad contact, which raises it, and a fault that was there a round earlier.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.intake.explain import Suspicion, SuspicionCode, sentence

Numbers = NDArray[np.float64]
Truth = NDArray[np.bool_]

OFF_NOISES = 6.0
OFF_SHARE = 0.04
"""A reading is asked about only when it is off by more than six noises and 4 % of what was
expected. Six noises leave 2 in 1,000 million honest readings of a healthy cell; 4 % keep
meters of the first class, and cells that have been re-built, out of it."""

FIT_NOISES = 3.0
"""What was probably meant has to lie within three noises: 99.7 % of true slips pass."""

ODDS = 20.0
"""How much likelier than any honest fault a slip must be. At 20 to 1, at most one question in
twenty-one is put to somebody who made no mistake, if the frequencies below are right, and one
in seven if they are wrong by a factor of three."""

# How often slips are made, for each reading: copying by hand goes wrong in 0.5 to 1 % of the
# entries (common in studies of data entry); most of that is caught by the writer, and of the
# rest a part has these forms. Wide estimates: a factor of three changes little.
UNIT_RATE = 1e-3
TENFOLD_RATE = 3e-4
REVERSED_RATE = 5e-4
SWAP_RATE = 3e-4
"""For each pair of neighbouring digits."""

# How often a fault begins between two readings of one cell, and how large it is at once.
SHORT_RATE = 3e-3
SHORT_SHARE = 0.12
"""Mean share of the cell's current that a fresh short takes; its voltage falls with it by as
much of the part that follows the current. One in fifty is larger than this law allows."""
CONTACT_RATE = 1e-3
CONTACT_VOLTS = 0.06
"""Mean rise at a contact that has gone bad; one in ten is an open one, with a long tail."""
_LARGER_SHORTS, _OPEN_CONTACTS, _OPEN_VOLTS = 0.02, 0.1, 0.2
FAULT_STAYS = 0.5
"""Chance that a cell that was off a round earlier is still off, near to where it was."""
_WAS_OFF_NOISES = 4.0

LOWEST_VOLTS = -0.1
"""A bolted short or a jumper reads some millivolts either way; no cell reads less than this."""
HIGHEST_RISE_VOLTS = 3.0
"""A passivated or open cell of a refinery rises to the voltage at which water splits, so the
ceiling is three times the upper limit or this much above it, whichever is more."""

_SMALLEST_NOISE_VOLTS = 0.5e-3
"""A meter that shows millivolts cannot be surer than half of one."""
_MOST_DECIMALS = 6
_LIMITS_NOISE = 0.25
"""Without history, the section's limits stand for two such noises either way."""


@dataclass(frozen=True, slots=True)
class _Asked:
    """Readings that are off, with what is needed to weigh them."""

    volts: Numbers
    expected: Numbers
    noise: Numbers
    previous: Numbers
    resistive_share: Numbers
    decimals: NDArray[np.int64]
    has_history: Truth


@dataclass(frozen=True, slots=True)
class Suspicions:
    """The verdict on an array of readings: a code for each, 0 where it is believed.

    `suggested_volts` is what was probably meant, NaN where nothing is suggested.
    """

    codes: NDArray[np.uint8]
    suggested_volts: Numbers
    _volts: Numbers
    _expected: Numbers
    _low: Numbers
    _high: Numbers
    _decimals: NDArray[np.int64]

    def __len__(self) -> int:
        return len(self.codes)

    @property
    def found(self) -> NDArray[np.int64]:
        """Positions of the readings that are not believed."""
        return np.flatnonzero(self.codes)

    def at(self, position: int) -> Suspicion:
        """Tell one suspicion in words."""
        return sentence(
            SuspicionCode(int(self.codes[position])),
            volts=float(self._volts[position]),
            expected_volts=float(self._expected[position]),
            low_volts=float(self._low[position]),
            high_volts=float(self._high[position]),
            suggested_volts=float(self.suggested_volts[position]),
            decimals=int(self._decimals[position]),
        )

    def reason(self, position: int) -> str:
        """The sentence of one suspicion."""
        return self.at(position).reason


def suspicions(
    volts: ArrayLike,
    expected_volts: ArrayLike,
    noise_volts: ArrayLike,
    low_volts: ArrayLike,
    high_volts: ArrayLike,
    *,
    previous_volts: ArrayLike | None = None,
    decimals: ArrayLike = 3,
    resistive_share: ArrayLike = 0.9,
) -> Suspicions:
    """Tell which readings are not to be believed.

    Parameters
    ----------
    volts : array_like, shape S
        Readings as entered, V. NaN is never suspect.
    expected_volts : array_like, broadcast to S
        What the cell would read at this current if nothing had happened to it, V: its level
        from the rounds before, referred to the current and to the common movement of the
        round, so that a changed set-point is not seen as a fault of every cell. NaN where
        there is no history; the limits are the yardstick then, and only gross slips show.
    noise_volts : array_like, broadcast to S
        Standard deviation of an honest reading about that expectation, V. NaN counts as none.
    low_volts, high_volts : array_like, broadcast to S
        The section's target limits, V. NaN where there are none.
    previous_volts : array_like, broadcast to S, optional
        The cell's reading a round earlier, referred in the same way, believed or not. A fault
        that was there before explains today's reading; a slip does not last. NaN where none.
    decimals : array_like of int, broadcast to S
        Decimals of the readings as entered; digits that are neighbours depend on it. A
        reading that needs more gets more.
    resistive_share : array_like, broadcast to S
        Part of the cell voltage that follows the current, 0 to 1: how far a short can pull
        it down. Where it is not given, shorts are given the benefit of the doubt.

    Returns
    -------
    Suspicions
        With arrays of shape S, which is one-dimensional.

    Example
    -------
    >>> found = suspicions([2.031, 2035.0, 2.305, 1.93], 2.035, 0.008, 1.8, 2.2,
    ...                    resistive_share=0.2)
    >>> [SuspicionCode(code).name for code in found.codes]
    ['NONE', 'SLIPPED_UNIT', 'SWAPPED_DIGITS', 'NONE']
    >>> found.reason(2)
    'Found 2.305 V, expected about 2.035 V; with two neighbouring digits swapped it is 2.035 V.'
    """
    volts = np.atleast_1d(np.asarray(volts, dtype=np.float64))
    shape = volts.shape

    def spread(values: ArrayLike | None) -> Numbers:
        given = np.nan if values is None else values
        return np.broadcast_to(np.asarray(given, dtype=np.float64), shape)

    expected, low, high = spread(expected_volts), spread(low_volts), spread(high_volts)
    is_known = np.isfinite(expected)
    yardstick = np.where(is_known, expected, (low + high) / 2)
    noise = np.where(is_known, np.nan_to_num(spread(noise_volts)), (high - low) * _LIMITS_NOISE)
    noise = np.maximum(noise, _SMALLEST_NOISE_VOLTS)
    off = np.abs(volts - yardstick)
    asked = np.flatnonzero(off > np.maximum(OFF_NOISES * noise, OFF_SHARE * np.abs(yardstick)))

    codes = np.zeros(shape, dtype=np.uint8)
    suggested = np.full(shape, np.nan)
    places = np.broadcast_to(np.asarray(decimals, dtype=np.int64), shape).copy()
    places[asked] = _decimals_needed(volts[asked], places[asked])
    best = _weighed(
        _Asked(
            volts[asked],
            yardstick[asked],
            noise[asked],
            spread(previous_volts)[asked],
            spread(resistive_share)[asked],
            places[asked],
            is_known[asked],
        )
    )
    codes[asked], suggested[asked] = best
    ceiling = np.maximum(3 * high, high + HIGHEST_RISE_VOLTS)
    is_wild = (codes == SuspicionCode.NONE) & ((volts < LOWEST_VOLTS) | (volts > ceiling))
    codes[is_wild] = SuspicionCode.IMPLAUSIBLE
    return Suspicions(codes, suggested, volts, expected, low, high, places)


def _weighed(asked: _Asked) -> tuple[NDArray[np.uint8], Numbers]:
    """Give the likeliest slip of each reading and what was meant, where it beats honest faults."""
    codes = np.zeros(len(asked.volts), dtype=np.uint8)
    suggested = np.full(len(asked.volts), np.nan)
    likeliest = ODDS * _honest_density(asked)
    for code, meant, density in _slips(asked):
        is_better = density > likeliest
        codes[is_better] = code
        suggested[is_better] = meant[is_better]
        likeliest = np.where(is_better, density, likeliest)
    return codes, suggested


def _honest_density(asked: _Asked) -> Numbers:
    """Density of such a reading, per volt, among the readings of cells that have a fault."""
    drop = asked.expected - asked.volts
    size = np.abs(asked.expected)
    mean_drop = np.maximum(SHORT_SHARE * asked.resistive_share * size, _SMALLEST_NOISE_VOLTS)
    short = SHORT_RATE * (
        (1 - _LARGER_SHORTS) * np.exp(-np.abs(drop) / mean_drop) / mean_drop
        + _LARGER_SHORTS / np.maximum(size, CONTACT_VOLTS)
    )
    rise = np.abs(drop)
    contact = CONTACT_RATE * (
        (1 - _OPEN_CONTACTS) * np.exp(-rise / CONTACT_VOLTS) / CONTACT_VOLTS
        + _OPEN_CONTACTS * _OPEN_VOLTS / (_OPEN_VOLTS + rise) ** 2
    )
    begun = np.where(drop < 0, contact, np.where(asked.volts > LOWEST_VOLTS, short, 0.0))
    departure = np.abs(asked.previous - asked.expected)
    was_off = departure > _WAS_OFF_NOISES * asked.noise
    spread = np.maximum(3 * asked.noise, departure / 2)
    staying = FAULT_STAYS * _normal(asked.volts, asked.previous, spread)
    return begun + np.where(was_off, staying, 0.0)


def _slips(asked: _Asked) -> Iterator[tuple[SuspicionCode, Numbers, Numbers]]:
    """Each slip with what was meant and its density, per volt, among all readings."""
    volts = asked.volts
    yield _scaled(asked, SuspicionCode.SLIPPED_UNIT, UNIT_RATE, 1e-3, is_gross=True)
    yield _scaled(asked, SuspicionCode.SLIPPED_UNIT, UNIT_RATE, 1e3)
    yield _scaled(asked, SuspicionCode.TENFOLD, TENFOLD_RATE, 0.1)
    yield _scaled(asked, SuspicionCode.TENTH, TENFOLD_RATE, 10.0)
    reversed_lead = _scaled(asked, SuspicionCode.REVERSED_LEAD, REVERSED_RATE, -1.0, is_gross=True)
    yield reversed_lead[0], reversed_lead[1], np.where(volts < LOWEST_VOLTS, reversed_lead[2], 0.0)
    scale = 0.5 / _half_step(asked)
    # As many digits as a reading of some volts has; a thousand volts is no matter of swapping.
    digits = np.where(np.abs(volts) < 100, np.rint(np.abs(volts) * scale), 0).astype(np.int64)
    half_step = _half_step(asked)
    for place in range(_MOST_DECIMALS + 1):
        unit = 10**place
        right, left = digits // unit % 10, digits // (10 * unit) % 10
        meant = np.sign(volts) * (digits + (right - left) * 9 * unit) / scale
        is_swap = asked.has_history & (right != left) & (place <= asked.decimals)
        density = np.where(is_swap, SWAP_RATE * _fitting(meant, asked, half_step), 0.0)
        yield SuspicionCode.SWAPPED_DIGITS, meant, density


def _scaled(
    asked: _Asked, code: SuspicionCode, rate: float, factor: float, *, is_gross: bool = False
) -> tuple[SuspicionCode, Numbers, Numbers]:
    """A reading that was entered as `1 / factor` times what was meant.

    Gross slips lead where no cell can be, so what was meant may also be the reading of a cell
    with a fault, anywhere from half to one and a half of what was expected.
    """
    meant = asked.volts * factor
    density = _fitting(meant, asked, abs(factor) * _half_step(asked))
    if is_gross:
        size = np.maximum(np.abs(asked.expected), _SMALLEST_NOISE_VOLTS)
        is_near = np.abs(meant - asked.expected) < size / 2
        broad = _normal(meant, asked.expected, size / 4)
        density = 0.9 * density + 0.1 * np.where(is_near, broad, 0.0)
    return code, meant, rate * abs(factor) * density


def _fitting(meant: Numbers, asked: _Asked, half_step: Numbers) -> Numbers:
    """Density of what was meant about the expectation, 0 where it does not fit.

    `half_step` is half of the last digit entered, as it counts in what was meant: 0.030 for
    0.30 has lost a digit, and fits less sharply.
    """
    noise = np.hypot(asked.noise, half_step / np.sqrt(3))
    is_near = np.abs(meant - asked.expected) <= FIT_NOISES * noise
    return np.where(is_near, _normal(meant, asked.expected, noise), 0.0)


def _half_step(asked: _Asked) -> Numbers:
    half: Numbers = np.asarray(0.5 / 10.0**asked.decimals, dtype=np.float64)
    return half


def _normal(values: Numbers, centre: Numbers, spread: Numbers) -> Numbers:
    density: Numbers = np.exp(-0.5 * ((values - centre) / spread) ** 2) / (
        spread * np.sqrt(2 * np.pi)
    )
    return density


def _decimals_needed(volts: Numbers, decimals: NDArray[np.int64]) -> NDArray[np.int64]:
    """Decimals of a reading as entered: at least those given, more where its digits go on."""
    needed = decimals.copy()
    for _ in range(_MOST_DECIMALS):
        scaled = np.abs(volts) * 10.0**needed
        is_short = (np.abs(scaled - np.rint(scaled)) > 1e-6 * np.maximum(scaled, 1)) & (
            needed < _MOST_DECIMALS
        )
        if not is_short.any():
            break
        needed[is_short] += 1
    return needed
