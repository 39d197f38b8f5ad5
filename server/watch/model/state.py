"""All that the watch remembers of a section between two rounds, and that as bytes."""

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from server.watch.model.facts import Facts
from server.watch.model.sizes import sizes

Numbers = NDArray[np.float64]

# Raised with every change of what is remembered: what an older program kept is not read then.
_VERSION = 2.0

# Kinds of flags that the model raises, in the order of the columns of `raised_ms`.
KINDS = ("short", "drift high", "drift low", "no reading", "suspect reading")


@dataclass
class State:
    """What is believed of the cells and of what they share; arrays by cell number less one."""

    weight: Numbers
    """(cells, sizes + 1): how likely no short (first) and a short of each size is."""
    level_v: Numbers
    """(cells, sizes + 1): by how much the healthy cell would read above the section, if so."""
    level_var: Numbers
    """(cells, sizes + 1): variance of that."""
    noise_v: Numbers
    """Mean absolute deviation of healthy readings."""
    tilt: Numbers
    """By what share the cell's resistance differs from the section's."""
    tilt_var: Numbers
    hung_ms: Numbers
    """Since when its cathodes hang; NaN where that is not known."""
    known: Numbers
    """Readings that the cell's level rests on."""
    fresh: Numbers
    """While its cathodes are young: the age, in crops, of those pulled before; else 0."""
    before_v: Numbers
    """Its level when the last crop was pulled."""
    before_var: Numbers
    reference_v: Numbers
    """What the cell read above the section over the last weeks."""
    recent_v: Numbers
    """By how much it has lately read above that."""
    last_z: Numbers
    missed: Numbers
    """Rounds in a row without a reading of the cell, while it was in service."""
    raised_ms: Numbers
    """(cells, kinds): since when each flag is open; 0 where it is not."""
    acting: Numbers
    """(cells, kinds): 1 where the open flag says to act."""
    calm: Numbers
    """(cells, kinds): readings in a row that speak for its end; below 0, readings still to rest."""
    shared: Numbers
    """What the cells share, by the places below."""

    def packed(self) -> bytes:
        """All of it as bytes; the same state gives the same bytes."""
        parts = [np.array([_VERSION, *self.weight.shape])]
        parts += [np.ravel(getattr(self, part.name)) for part in fields(self)]
        return np.concatenate(parts).astype("<f8").tobytes()

    def copy(self) -> "State":
        """Another one that can be changed apart."""
        return State(*(getattr(self, part.name).copy() for part in fields(self)))


# Places in `State.shared`.
(
    ROUNDS,
    RESISTANCE,
    RESISTANCE_VAR,
    AGE_WEIGHT,
    AGE_SUM,
    CROP_SUM,
    CROP_COUNT,
    COMMON_V,
    COMMON_AMPS,
    COMMON_STEP_V,
    ECHO_SUM,
    ECHO_COUNT,
    SPREAD_V,
    ONSET_COUNT,
    LOOK_ODDS,
    _YOUTH,
) = range(16)

# And of what is learned of deposits in their first hours, part by part.
YOUTH_SUM, YOUTH_COUNT = slice(_YOUTH, _YOUTH + 4), slice(_YOUTH + 4, _YOUTH + 8)

# And of shorts seen at pulls, size by size.
ONSET_SUMS = slice(_YOUTH + 8, _YOUTH + 8 + len(sizes().shares))
_SHARED = ONSET_SUMS.stop


def fresh_state(facts: Facts) -> State:
    """A section of which no reading has been seen."""
    cells, columns = facts.cells, len(sizes().shares) + 1
    weight = np.zeros((cells, columns))
    weight[:, 0] = 1.0 - _STANDING
    weight[:, 1:] = _STANDING * sizes().prior
    shared = np.zeros(_SHARED)
    shared[RESISTANCE] = facts.resistance_ohm
    shared[RESISTANCE_VAR] = facts.u_resistance_ohm**2
    shared[COMMON_V] = np.nan
    shared[COMMON_STEP_V] = facts.spread_v
    shared[SPREAD_V] = facts.spread_v
    return State(
        weight=weight,
        level_v=np.zeros((cells, columns)),
        level_var=np.full((cells, columns), facts.spread_v**2),
        noise_v=np.full(cells, facts.noise_v * _MEAN_ABSOLUTE),
        tilt=np.zeros(cells),
        tilt_var=np.full(cells, _TILT**2),
        hung_ms=np.full(cells, np.nan),
        known=np.zeros(cells),
        fresh=np.zeros(cells),
        before_v=np.zeros(cells),
        before_var=np.zeros(cells),
        reference_v=np.zeros(cells),
        recent_v=np.zeros(cells),
        last_z=np.full(cells, np.nan),
        missed=np.zeros(cells),
        raised_ms=np.zeros((cells, len(KINDS))),
        acting=np.zeros((cells, len(KINDS))),
        calm=np.zeros((cells, len(KINDS))),
        shared=shared,
    )


# Common practice: share of cells that have a short when nobody has looked yet.
_STANDING = 0.06

# Of what is known of cells that are made anew, this stays.
_KEPT = ("raised_ms", "acting", "calm", "hung_ms")


def refitted(former: State, facts: Facts, is_same_make: bool) -> State:
    """The state for another number of cells, or for cells that were made anew."""
    cells = min(facts.cells, len(former.known))
    if is_same_make and cells == facts.cells == len(former.known):
        return former
    fresh = fresh_state(facts)
    if is_same_make:
        fresh.shared = former.shared.copy()
        fresh.level_var[:] = former.shared[SPREAD_V] ** 2
    for name in _KEPT if not is_same_make else (part.name for part in fields(State)):
        if name != "shared":
            getattr(fresh, name)[:cells] = getattr(former, name)[:cells]
    return fresh


# Mean absolute deviation of a normal distribution, in standard deviations: root of 2 / pi.
_MEAN_ABSOLUTE = 0.7978845608028654

# Common practice: resistances of the cells of one section differ by some per cent.
_TILT = 0.05


def is_readable(content: bytes) -> bool:
    """Whether this program packed it, or one that remembers the same."""
    return float(np.frombuffer(content, "<f8", count=1)[0]) == _VERSION


def unpacked(content: bytes) -> State:
    """The state that was packed."""
    numbers = np.frombuffer(content, "<f8").astype(np.float64)
    version, cells, columns = numbers[:3]
    if version != _VERSION:
        raise ValueError(f"a state of version {version:.0f}; this program knows {_VERSION:.0f}")
    shape = int(cells), int(columns)
    shapes: dict[str, tuple[int, ...]] = {
        "weight": shape,
        "level_v": shape,
        "level_var": shape,
        "raised_ms": (shape[0], len(KINDS)),
        "acting": (shape[0], len(KINDS)),
        "calm": (shape[0], len(KINDS)),
        "shared": (_SHARED,),
    }
    parts, at = [], 3
    for part in fields(State):
        wanted = shapes.get(part.name, (shape[0],))
        size = int(np.prod(wanted))
        parts.append(numbers[at : at + size].reshape(wanted).copy())
        at += size
    return State(*parts)
