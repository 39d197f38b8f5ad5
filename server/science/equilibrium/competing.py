"""Which of several reactions can go at a potential, and which goes first."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, finite, not_negative
from server.science.errors import UnknownName, WrongShape

Side = Literal["cathode", "anode"]

# Sign of the current by which a potential drives a reaction: definition (IUPAC, anodic positive).
SIGNS: dict[str, float] = {"cathode": -1.0, "anode": 1.0}


@dataclass(frozen=True)
class Contender:
    """One reaction of an electrode: its name, its equilibrium, and where it starts to matter."""

    name: str
    equilibrium_v: float
    overpotential_v: float
    starts_v: float


def starts_v(equilibrium_v: ArrayLike, side: Side, overpotential_v: ArrayLike = 0.0) -> Numbers:
    """Potential at which a reaction runs at the rate to which its overpotential belongs.

    At a cathode the equilibrium less the overpotential, at an anode both together. With no
    overpotential this is thermodynamics alone: the potential beyond which the reaction can go.

    Parameters
    ----------
    equilibrium_v : array_like, shape S
        Equilibrium potential at the activities that prevail, V.
    side : {"cathode", "anode"}
        Whether the reaction takes electrons from the electrode or gives them to it.
    overpotential_v : array_like, broadcast with S
        Overpotential that the reaction needs there for the rate of interest, as a size, V; not
        negative. From Tafel's law or a measurement.

    Returns
    -------
    ndarray, broadcast shape
        Potential, V. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the side is neither of the two.
    OutOfRange
        If a potential is infinite or an overpotential is negative.

    Source
    ------
    Definition of the overpotential; IUPAC Green Book, 3rd ed. (2007), p. 72.

    Example
    -------
    Hydrogen on zinc, which needs a volt and more.

    >>> f"{starts_v(0.0, 'cathode', overpotential_v=1.1):.1f}"
    '-1.1'
    """
    size = not_negative("overpotential_v", overpotential_v)
    return np.asarray(finite("equilibrium_v", equilibrium_v) + _sign(side) * size)


def driving_v(
    potential_v: ArrayLike,
    equilibrium_v: ArrayLike,
    side: Side,
    overpotential_v: ArrayLike = 0.0,
) -> Numbers:
    """How far a potential lies beyond the start of a reaction; above zero it can go.

    A cathodic reaction can go below its equilibrium, an anodic one above it.

    Parameters
    ----------
    potential_v : array_like, shape S
        Potential of the electrode, V, on the scale of the equilibrium potentials.
    equilibrium_v : array_like, broadcast with S
        Equilibrium potential at the activities that prevail, V.
    side : {"cathode", "anode"}
        Whether the reaction takes electrons from the electrode or gives them to it.
    overpotential_v : array_like, broadcast with S
        Overpotential for a rate that matters, as a size, V; not negative.

    Returns
    -------
    ndarray, broadcast shape
        V, above zero where the reaction can go. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the side is neither of the two.
    OutOfRange
        If a potential is infinite or an overpotential is negative.

    Source
    ------
    dG = -n F E below zero: a reaction that runs by itself.

    Example
    -------
    Copper and zinc at -0.5 V: copper is deposited, zinc is not.

    >>> driving_v(-0.5, [0.342, -0.762], "cathode") > 0
    array([ True, False])
    """
    start = starts_v(equilibrium_v, side, overpotential_v)
    return np.asarray(_sign(side) * (finite("potential_v", potential_v) - start))


def in_order(
    equilibria_v: Mapping[str, float],
    side: Side,
    overpotentials_v: Mapping[str, float] | None = None,
) -> tuple[Contender, ...]:
    """Reactions of an electrode in the order in which they start as it is driven harder.

    At a cathode the most positive start first, at an anode the most negative. Without
    overpotentials that is thermodynamics: hydrogen before zinc from acid, oxygen before chlorine.
    With those of the electrode's material it is what plants see: zinc before hydrogen, and
    chlorine beside oxygen. Equal starts keep the order in which they were given.

    Parameters
    ----------
    equilibria_v : mapping of str to float
        Equilibrium potential of each reaction by name, V; no NaN.
    side : {"cathode", "anode"}
        The electrode.
    overpotentials_v : mapping of str to float, optional
        Overpotential of each reaction at one common current density, as a size, V; nothing for
        those that are not named.

    Returns
    -------
    tuple of Contender
        First to last.

    Raises
    ------
    UnknownName
        If the side is neither of the two, or an overpotential belongs to no reaction.
    WrongShape
        If a number is missing (NaN), since what is not known has no place in an order.
    OutOfRange
        If a potential is infinite or an overpotential is negative.

    Source
    ------
    As `starts_v`.

    Example
    -------
    >>> couples = {"zinc": -0.82, "hydrogen": 0.02}
    >>> [known.name for known in in_order(couples, "cathode")]
    ['hydrogen', 'zinc']
    >>> needed = {"zinc": 0.10, "hydrogen": 1.10}
    >>> [known.name for known in in_order(couples, "cathode", needed)]
    ['zinc', 'hydrogen']
    """
    needed = overpotentials_v or {}
    for name in needed:
        if name not in equilibria_v:
            raise UnknownName("reaction with an overpotential", name, equilibria_v)
    contenders = []
    for name, equilibrium in equilibria_v.items():
        size = needed.get(name, 0.0)
        start = float(starts_v(equilibrium, side, size))
        if np.isnan(start):
            raise WrongShape(f"potential of {name}", found="missing", allowed="a number")
        contenders.append(Contender(name, float(equilibrium), float(size), start))
    return tuple(sorted(contenders, key=lambda known: _sign(side) * known.starts_v))


def first_to_go(
    equilibria_v: Mapping[str, ArrayLike],
    side: Side,
    overpotentials_v: Mapping[str, ArrayLike] | None = None,
) -> NDArray[np.str_]:
    """Name of the reaction that starts first, for arrays of potentials.

    As `in_order`, where activities or overpotentials vary along arrays, such as a day of
    acid-to-zinc ratios.

    Parameters
    ----------
    equilibria_v : mapping of str to array_like
        Equilibrium potential of each reaction by name, V; shapes that broadcast.
    side : {"cathode", "anode"}
        The electrode.
    overpotentials_v : mapping of str to array_like, optional
        Overpotential of each reaction, as a size, V; nothing for those that are not named.

    Returns
    -------
    ndarray of str, broadcast shape
        Name of the first; empty where an input is NaN.

    Raises
    ------
    UnknownName
        If the side is neither of the two, or an overpotential belongs to no reaction.
    WrongShape
        If there is no reaction.
    OutOfRange
        If a potential is infinite or an overpotential is negative.

    Source
    ------
    As `starts_v`.

    Example
    -------
    Oxygen against chlorine at pH 1 and pH 7, one mole of chloride in the litre.

    >>> first_to_go({"oxygen": [1.17, 0.81], "chlorine": 1.36}, "anode", {"oxygen": 0.5})
    array(['chlorine', 'oxygen'], dtype='<U8')
    """
    needed = overpotentials_v or {}
    for name in needed:
        if name not in equilibria_v:
            raise UnknownName("reaction with an overpotential", name, equilibria_v)
    if not equilibria_v:
        raise WrongShape("equilibria_v", found="no reaction", allowed="one or more")
    names = np.asarray(list(equilibria_v))
    starts = np.stack(
        np.broadcast_arrays(
            *(starts_v(volts, side, needed.get(name, 0.0)) for name, volts in equilibria_v.items())
        )
    )
    missing = np.isnan(starts).any(axis=0)
    # A NaN would win the search for the smallest; where there is one the answer is empty anyway.
    order = np.where(np.isnan(starts), 0.0, _sign(side) * starts)
    return np.asarray(np.where(missing, "", names[np.argmin(order, axis=0)]))


def _sign(side: str) -> float:
    """The direction in which an electrode is driven, or a refusal."""
    if side not in SIGNS:
        raise UnknownName("side", side, SIGNS)
    return SIGNS[side]
