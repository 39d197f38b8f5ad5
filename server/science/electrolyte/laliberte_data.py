"""Which baths the model of Laliberte has been stretched to, beyond the data behind it."""

from collections.abc import Mapping
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import not_negative
from server.science.electrolyte.laliberte import LALIBERTE_RANGES, mass_shares
from server.science.ranges import Range, outside


def outside_data(
    salts_g_l: Mapping[str, ArrayLike],
    temperature_k: ArrayLike,
    about: Literal["density", "viscosity"] = "density",
    least_share: float = 0.01,
) -> tuple[Range, ...]:
    """Ranges of the data behind the model that a bath leaves.

    Each salt was fitted to solutions of itself alone, and its fit is asked at the share of
    everything dissolved; so that share is held against its data, and the temperature too. A
    salt of which there is hardly any is not asked for: iron's densities were measured at 15 to
    25 degC only, but a gram per litre of it cannot spoil a bath's.

    Parameters
    ----------
    salts_g_l : mapping of str to array_like, shapes that broadcast
        Concentrations by formula, g/L; not negative.
    temperature_k : array_like, broadcast with the concentrations
        Temperature, K; 258.15 to 423.15.
    about : {"density", "viscosity"}
        Which property is meant; their data differ.
    least_share : float
        Mass share from which a salt is asked for; not negative.

    Returns
    -------
    tuple of Range
        Ranges left by at least one bath, named by formula and quantity; empty when all is well.

    Raises
    ------
    UnknownName
        If a salt has no fit.
    OutOfRange
        As in `density_kg_m3`.
    WrongShape
        If the inputs do not broadcast.

    Source
    ------
    Data of M. Laliberte, J. Chem. Eng. Data 54 (2009) 1725, as in `LALIBERTE_RANGES`.

    Example
    -------
    Copper refining at 62 degC: copper's densities end at 60 degC.

    >>> left = outside_data({"CuSO4": 113.0, "H2SO4": 180.0}, 335.15)
    >>> [str(known) for known in left]
    ['CuSO4 temperature_k 283.15 to 333.15']
    """
    least = not_negative("least_share", least_share)
    shares = mass_shares(salts_g_l, temperature_k)
    dissolved = sum(shares.values(), start=np.zeros(()))
    left: list[Range] = []
    for formula, share in shares.items():
        counts = (share >= least) & (share > 0.0)
        asked: dict[str, ArrayLike] = {
            f"{formula} temperature_k": np.where(counts, temperature_k, np.nan),
            f"{formula} dissolved_share": np.where(counts, dissolved, np.nan),
        }
        left.extend(outside(LALIBERTE_RANGES[about][formula], **asked))
    return tuple(left)
