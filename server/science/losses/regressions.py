"""Published regressions of current efficiency, each with the range that its source vouches for."""

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, not_negative
from server.science.errors import UnknownName
from server.science.ranges import Range, outside


@dataclass(frozen=True)
class Term:
    """One term of a polynomial: points of efficiency times powers of named quantities."""

    points: float
    powers: tuple[tuple[str, int], ...] = ()


@dataclass(frozen=True)
class Regression:
    """A polynomial in percent, as it was printed, with its ranges and how well it is known.

    `status` is "looked up" or "from memory"; what was only recalled is for orientation, and a
    page that shows its result says so. `fixed` names quantities that were held constant in the
    experiments: they have a range but no term.
    """

    name: str
    symbol: str
    terms: tuple[Term, ...]
    ranges: tuple[Range, ...]
    status: str
    source: str

    @property
    def quantities(self) -> tuple[str, ...]:
        """Names of the quantities that the polynomial needs, in the order they come up."""
        named = (quantity for term in self.terms for quantity, _ in term.powers)
        return tuple(dict.fromkeys(named))

    @property
    def fixed(self) -> tuple[str, ...]:
        """Names of the quantities that have a range but no term."""
        needed = self.quantities
        return tuple(held.quantity for held in self.ranges if held.quantity not in needed)

    def outside(self, **values: ArrayLike) -> tuple[Range, ...]:
        """Ranges that any of the given values leaves; quantities not given are not judged."""
        return outside(self.ranges, **values)


# Khouraibchia and Moats, Minerals & Metallurgical Processing 27 (2010) and ECS Trans. 28 (2010):
# coefficients from memory, to be checked against the paper; ranges recalled and drawn narrow.
KHOURAIBCHIA_MOATS = Regression(
    "Khouraibchia and Moats",
    "Cu",
    (
        Term(88.19),
        Term(-4.91, (("ferric_g_l", 1),)),
        Term(0.52, (("copper_g_l", 1),)),
        Term(1.81e-3, (("current_density_a_m2", 1),)),
        Term(-6.83e-3, (("copper_g_l", 2),)),
        Term(0.028, (("ferric_g_l", 1), ("copper_g_l", 1))),
        Term(4.015e-3, (("ferric_g_l", 1), ("current_density_a_m2", 1))),
    ),
    (
        Range("ferric_g_l", 0.0, 6.0),
        Range("copper_g_l", 35.0, 50.0),
        Range("current_density_a_m2", 250.0, 350.0),
    ),
    "from memory",
    "S. Khouraibchia and M. Moats, Minerals & Metallurgical Processing 27 (2010)",
)
# Das and Gopala Krishna, Int. J. Miner. Process. 46 (1996) 91: 97 % without ferric iron and 83 %
# at 6 g/L, 215 A/m2 (from memory); the straight line between these two ends is ours.
DAS_GOPALA_KRISHNA = Regression(
    "Das and Gopala Krishna",
    "Cu",
    (Term(97.0), Term((83.0 - 97.0) / 6.0, (("ferric_g_l", 1),))),
    (Range("ferric_g_l", 0.0, 6.0), Range("current_density_a_m2", 210.0, 220.0)),
    "from memory",
    "S. C. Das and P. Gopala Krishna, Int. J. Miner. Process. 46 (1996) 91",
)
# Every regression, by its name: the two above.
REGRESSIONS: dict[str, Regression] = {
    known.name: known for known in (KHOURAIBCHIA_MOATS, DAS_GOPALA_KRISHNA)
}


def regression(name: str) -> Regression:
    """The regression of a name.

    Parameters
    ----------
    name : str
        Name, capitals or not.

    Returns
    -------
    Regression
        The polynomial, with its ranges, status and source.

    Raises
    ------
    UnknownName
        If no regression has that name; it offers the near ones.

    Source
    ------
    See the lines above each regression.

    Example
    -------
    >>> regression("khouraibchia and moats").status
    'from memory'
    """
    wanted = " ".join(name.lower().split())
    for known in REGRESSIONS.values():
        if known.name.lower() == wanted:
            return known
    raise UnknownName("regression", name, REGRESSIONS)


def regressed_efficiency(known: Regression, **values: ArrayLike) -> Numbers:
    """Current efficiency that a regression gives, inside its ranges or out of them.

    Ask `Regression.outside` with the same values and say so where it answers. A regression of
    laboratory cells holds no shorts and no leakage: a tankhouse lies below it. Neither capped nor
    clipped.

    Parameters
    ----------
    known : Regression
        The regression.
    **values : array_like, shapes that broadcast
        Its quantities by name, such as ``ferric_g_l``; not negative. Those held fixed in the
        experiments may be given too and change nothing.

    Returns
    -------
    ndarray, broadcast shape
        Current efficiency, as a share. NaN where a needed value is NaN.

    Raises
    ------
    UnknownName
        If a quantity is missing that the regression needs, or one is given that it does not know.
    OutOfRange
        If a value is negative.

    Source
    ------
    The regression's own.

    Example
    -------
    >>> share = regressed_efficiency(
    ...     KHOURAIBCHIA_MOATS, ferric_g_l=2.0, copper_g_l=40.0, current_density_a_m2=300.0
    ... )
    >>> f"{share:.3f}"
    '0.934'
    """
    allowed = (*known.quantities, *known.fixed)
    for name in values:
        if name not in allowed:
            raise UnknownName("quantity", name, allowed)
    for name in known.quantities:
        if name not in values:
            raise UnknownName("quantity not given", name, tuple(values))
    numbers = {name: not_negative(name, value) for name, value in values.items()}
    points = sum(
        term.points * math.prod((numbers[name] ** power for name, power in term.powers), start=1.0)
        for term in known.terms
    )
    return np.asarray(points / 100.0)
