"""The magnetic field around bars that carry current, and how far off it has faded."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.errors import WrongShape

# CODATA 2022: vacuum magnetic permeability, relative standard uncertainty 1.6e-10.
MAGNETIC_CONSTANT_N_A2 = 1.25663706127e-6
# Law and practice: what is printed here replaces neither.
CAUTION = "Site procedure and local codes govern; a computed distance gives no clearance."


@dataclass(frozen=True)
class FieldLimit:
    """One published limit for static magnetic fields, and how well it is known here.

    `status` is "looked up" or "from memory". A limit says nothing about tools, watches and cards,
    which are pulled or spoiled by far weaker fields than those that harm a person.
    """

    who: str
    flux_density_t: float
    source: str
    status: str


_ICNIRP = "ICNIRP, Health Phys. 96 (2009) 504-514"
_DIRECTIVE = "Directive 2013/35/EU, annex II, table B4"
# ICNIRP 2009, as a standards database sums it up and (0.5 mT) as it is quoted in public; the EU
# directive from memory. From the weakest field to the strongest.
FIELD_LIMITS = (
    FieldLimit("people with active implants: devices undisturbed", 0.5e-3, _ICNIRP, "looked up"),
    FieldLimit("people with active implants: action level", 0.5e-3, _DIRECTIVE, "from memory"),
    FieldLimit("attraction of iron objects, action level", 3e-3, _DIRECTIVE, "from memory"),
    FieldLimit("the public, any part of the body", 0.4, _ICNIRP, "looked up"),
    FieldLimit("at work, head and trunk", 2.0, _ICNIRP, "looked up"),
    FieldLimit("at work, limbs", 8.0, _ICNIRP, "looked up"),
)


def flux_density_t(current_a: ArrayLike, distance_m: ArrayLike) -> Numbers:
    """Flux density beside one long straight bar.

    B = mu0 I / (2 pi r). For a bar longer than some times the distance, alone, with no iron
    near; other bars add as `flux_density_of_bars_t` has it. The sign of the current is dropped.
    Site procedure and local codes govern where people may stand.

    Parameters
    ----------
    current_a : array_like, shape S
        Current in the bar, A; both signs.
    distance_m : array_like, broadcast with S
        Distance from the bar's middle, m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Flux density, T (1 mT is 10 gauss). NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a distance is not above zero.

    Source
    ------
    J.-B. Biot and F. Savart, Ann. Chim. Phys. 15 (1820) 222.

    Example
    -------
    50 mm from a hanger bar that carries 600 A, in mT.

    >>> f"{1000 * flux_density_t(600.0, 0.05):.1f}"
    '2.4'
    """
    distance = above_zero("distance_m", distance_m)
    amps = np.abs(finite("current_a", current_a))
    return np.asarray(MAGNETIC_CONSTANT_N_A2 * amps / (2.0 * math.pi * distance))


def distance_for_field_m(current_a: ArrayLike, flux_density_t: ArrayLike) -> Numbers:
    """Distance from one long straight bar at which its field has fallen to a given one.

    r = mu0 I / (2 pi B). A keep-out line needs the measured field of all bars together; site
    procedure and local codes govern.

    Parameters
    ----------
    current_a : array_like, shape S
        Current in the bar, A; both signs.
    flux_density_t : array_like, broadcast with S
        Flux density, T; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Distance from the bar's middle, m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a flux density is not above zero.

    Source
    ------
    `flux_density_t`, solved for the distance.

    Example
    -------
    >>> f"{distance_for_field_m(30e3, 0.5e-3):.1f}"
    '12.0'
    """
    field = above_zero("flux_density_t", flux_density_t)
    amps = np.abs(finite("current_a", current_a))
    return np.asarray(MAGNETIC_CONSTANT_N_A2 * amps / (2.0 * math.pi * field))


def flux_density_of_bars_t(currents_a: ArrayLike, across_m: ArrayLike, up_m: ArrayLike) -> Numbers:
    """Flux density amid parallel long straight bars, as the sum of their vectors.

    Each bar adds mu0 I / (2 pi r) at right angles to the line that leads to it. A bar there and
    a bar back cancel from afar. No iron near.

    Parameters
    ----------
    currents_a : array_like, shape (..., N)
        Current of each bar, A; the sign is its direction.
    across_m : array_like, broadcast with `currents_a`
        Sideways distance from the place to each bar, m.
    up_m : array_like, broadcast with `currents_a`
        Upward distance from the place to each bar, m.

    Returns
    -------
    ndarray, shape (...)
        Magnitude of the flux density, T. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If the place lies within a bar's middle, at no distance, or a number is infinite.
    WrongShape
        If the bars are not in a sequence.

    Source
    ------
    J.-B. Biot and F. Savart, Ann. Chim. Phys. 15 (1820) 222; fields add as vectors.

    Example
    -------
    Two bars side by side with the current there and back, seen from between them, in mT.

    >>> f"{1000 * flux_density_of_bars_t([30e3, -30e3], [-1.0, 1.0], [0.0, 0.0]):.1f}"
    '12.0'
    """
    amps, across, up = np.broadcast_arrays(
        finite("currents_a", currents_a), finite("across_m", across_m), finite("up_m", up_m)
    )
    if amps.ndim == 0:
        raise WrongShape("currents_a", found="a single number", allowed="bars in a sequence")
    squared_m2 = above_zero("distance_m", np.hypot(across, up)) ** 2
    scale = MAGNETIC_CONSTANT_N_A2 * amps / (2.0 * math.pi * squared_m2)
    return np.asarray(np.hypot((scale * up).sum(axis=-1), (scale * across).sum(axis=-1)))


def limits_exceeded(flux_density_t: float) -> tuple[FieldLimit, ...]:
    """Published limits that a flux density goes beyond.

    An empty answer is no clearance: limits change, law differs, and a bar's own field is not the
    whole field. Site procedure and local codes govern.

    Parameters
    ----------
    flux_density_t : float
        Flux density, T; not negative.

    Returns
    -------
    tuple of FieldLimit
        Those below it, from the weakest field to the strongest; none for NaN.

    Raises
    ------
    OutOfRange
        If the flux density is negative or infinite.

    Source
    ------
    `FIELD_LIMITS`, each with its own source and status.

    Example
    -------
    >>> [limit.flux_density_t for limit in limits_exceeded(2.4e-3)]
    [0.0005, 0.0005]
    """
    field = float(not_negative("flux_density_t", flux_density_t))
    return tuple(limit for limit in FIELD_LIMITS if field > limit.flux_density_t)
