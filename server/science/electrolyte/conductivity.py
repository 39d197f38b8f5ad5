"""Conductivity of the baths of copper, zinc and nickel, and a plant's own in their place."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, finite, not_negative
from server.science.constants import ZERO_CELSIUS_K
from server.science.errors import OutOfRange, UnknownName
from server.science.ranges import Range

# Ours: terms of other metals are carried over from copper's, or guessed; half of each is doubted.
OTHER_METALS_U_SHARE = 0.5


@dataclass(frozen=True)
class Conductivity:
    """A correlation kappa = constant + a metal + b acid + c (T - T0) + others, in S/m and g/L.

    `others` pairs the names of further metals with their S/m per g/L. `status` says where the
    coefficients come from; `u_share` is the relative standard uncertainty of the result within
    `ranges`, the metals of `others` apart.
    """

    name: str
    constant_s_m: float
    per_metal_g_l: float
    per_acid_g_l: float
    per_kelvin: float
    reference_k: float
    u_share: float
    ranges: tuple[Range, ...]
    status: Literal["looked up", "from memory", "plant"]
    source: str
    others: tuple[tuple[str, float], ...] = ()

    def __post_init__(self) -> None:
        """Refuse coefficients that are no numbers, and an uncertainty below zero."""
        for quantity in ("constant_s_m", "per_metal_g_l", "per_acid_g_l", "per_kelvin"):
            value = getattr(self, quantity)
            if not np.isfinite(value):
                raise OutOfRange(quantity, found=value, allowed="a finite number")
        if not self.reference_k > 0.0:
            raise OutOfRange("reference_k", found=self.reference_k, allowed="above zero")
        if not self.u_share >= 0.0:
            raise OutOfRange("u_share", found=self.u_share, allowed="zero or more")


# The form and the coefficients of D. C. Price and W. G. Davenport, Metall. Trans. B 12B (1981)
# 639, for refining (kappa in S/cm = 0.134 - 0.00356 Cu + 0.00249 H2SO4 + 0.00426 degC) are from
# memory. For them speaks that without copper they give sulfuric acid's conductivity at 45 and
# 60 degC within 3 %. The range was looked up in a scan of the article's first page, hard to read;
# winning has another correlation there, not recalled, so a winning bath lies outside.
# The terms of Ni and Fe are not recalled: here a mole of either counts as one of copper, and
# arsenic's is a guess by the volume it takes; the sign of all is known (T. Kalliomaki and others,
# Minerals 6 (2016) 59, abstract, looked up).
COPPER_CONDUCTIVITY = Conductivity(
    name="acid copper sulfate",
    constant_s_m=13.4,
    per_metal_g_l=-0.356,
    per_acid_g_l=0.249,
    per_kelvin=0.426,
    reference_k=ZERO_CELSIUS_K,
    u_share=0.10,
    ranges=(
        Range("metal_g_l", 40.0, 60.0),
        Range("acid_g_l", 165.0, 223.0),
        Range("temperature_k", 323.15, 343.15),
    ),
    status="from memory",
    source="D. C. Price and W. G. Davenport, Metall. Trans. B 12B (1981) 639, from memory",
    others=(("Ni", -0.385), ("Fe", -0.405), ("As", -0.15)),
)
# No closed correlation could be looked up. A typical value from memory (about 45 S/m at 55 g/L
# zinc, 170 g/L acid, 38 degC; what is remembered of such baths lies from 38 to 52 S/m) with slopes
# by comparison: zinc's a little below copper's mole for mole, acid's and warmth's four fifths.
# A mole of magnesium or manganese counts as one of zinc.
ZINC_CONDUCTIVITY = Conductivity(
    name="acid zinc sulfate",
    constant_s_m=27.5,
    per_metal_g_l=-0.30,
    per_acid_g_l=0.20,
    per_kelvin=0.35,
    reference_k=311.15,
    u_share=0.15,
    ranges=(
        Range("metal_g_l", 40.0, 80.0),
        Range("acid_g_l", 100.0, 200.0),
        Range("temperature_k", 303.15, 318.15),
    ),
    status="from memory",
    source="typical value of spent electrolyte, slopes by comparison with copper, from memory",
    others=(("Mg", -0.81), ("Mn", -0.36)),
)
# No closed correlation could be looked up. A typical value from memory (about 10 S/m at 75 g/L
# nickel, pH 3, 60 degC, with the sodium sulfate that such baths hold); 2 % per kelvin, as for any
# salt. García Alcócer (thesis, Universidad de Chile, 2007, abstract, looked up) found that acid
# raises it, warmth raises it, and more nickel lowers it.
NICKEL_CONDUCTIVITY = Conductivity(
    name="nickel sulfate",
    constant_s_m=11.5,
    per_metal_g_l=-0.02,
    per_acid_g_l=0.25,
    per_kelvin=0.20,
    reference_k=333.15,
    u_share=0.25,
    ranges=(
        Range("metal_g_l", 50.0, 100.0),
        Range("acid_g_l", 0.0, 50.0),
        Range("temperature_k", 318.15, 343.15),
    ),
    status="from memory",
    source="typical value of nickel sulfate with sodium sulfate and boric acid, from memory",
)
# The correlations above, by the metal that the bath deposits.
CONDUCTIVITIES: dict[str, Conductivity] = {
    "Cu": COPPER_CONDUCTIVITY,
    "Zn": ZINC_CONDUCTIVITY,
    "Ni": NICKEL_CONDUCTIVITY,
}


def _others_s_m(model: Conductivity, others_g_l: Mapping[str, ArrayLike]) -> list[Numbers]:
    """What each further metal takes from the conductivity."""
    known = dict(model.others)
    for symbol in others_g_l:
        if symbol not in known:
            raise UnknownName(f"further metal of {model.name}", symbol, known)
    return [
        np.asarray(known[symbol] * not_negative(f"{symbol}_g_l", g_l))
        for symbol, g_l in others_g_l.items()
    ]


def conductivity_s_m(
    model: Conductivity,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    temperature_k: ArrayLike,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> Numbers:
    """Conductivity of a bath, without bubbles.

    The model's sum. Beyond its ranges (`outside(model.ranges, ...)` says so) it is worked out as
    well, until it falls to zero, which no bath does.

    Parameters
    ----------
    model : Conductivity
        One of `CONDUCTIVITIES`, or a plant's own.
    metal_g_l : array_like, shape S
        Metal that the bath deposits, g/L; not negative.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid, g/L; not negative.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L; only those the model has a term for.

    Returns
    -------
    ndarray, broadcast shape
        Conductivity, S/m. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the model has no term for a further metal.
    OutOfRange
        If a concentration is negative, a temperature is not above zero, or the model does not
        reach so far: its sum is zero or less.

    Source
    ------
    The model's `source`, with its `status`.

    Example
    -------
    >>> f"{conductivity_s_m(CONDUCTIVITIES['Cu'], 45.0, 180.0, 333.15):.1f}"
    '67.8'
    """
    warmer = above_zero("temperature_k", temperature_k) - model.reference_k
    total = (
        model.constant_s_m
        + model.per_metal_g_l * not_negative("metal_g_l", metal_g_l)
        + model.per_acid_g_l * not_negative("acid_g_l", acid_g_l)
        + model.per_kelvin * warmer
    )
    for part in _others_s_m(model, others_g_l or {}):
        total = total + part
    return above_zero(f"conductivity_s_m of {model.name}", total)


def conductivity_with_doubt(
    model: Conductivity,
    metal_g_l: ArrayLike,
    acid_g_l: ArrayLike,
    temperature_k: ArrayLike,
    others_g_l: Mapping[str, ArrayLike] | None = None,
) -> tuple[Numbers, Numbers]:
    """Conductivity of a bath, without bubbles, and its standard uncertainty.

    As `conductivity_s_m`. The uncertainty is the model's own share of the value and half of what
    further metals take. It holds within the model's ranges; beyond them it is too small.

    Parameters
    ----------
    model : Conductivity
        One of `CONDUCTIVITIES`, or a plant's own.
    metal_g_l : array_like, shape S
        Metal that the bath deposits, g/L; not negative.
    acid_g_l : array_like, broadcast with S
        Free sulfuric acid, g/L; not negative.
    temperature_k : array_like, broadcast with S
        Temperature, K; above zero.
    others_g_l : mapping of str to array_like, optional
        Further metals by symbol, g/L; only those the model has a term for.

    Returns
    -------
    tuple of two ndarrays, broadcast shape
        Conductivity and its standard uncertainty, S/m. NaN where an input is NaN.

    Raises
    ------
    UnknownName
        If the model has no term for a further metal.
    OutOfRange
        As in `conductivity_s_m`.

    Source
    ------
    As `conductivity_s_m`; JCGM 100:2008, 5.1.2, eq. (10).

    Example
    -------
    >>> value, doubt = conductivity_with_doubt(CONDUCTIVITIES["Zn"], 55.0, 170.0, 311.15)
    >>> f"{value:.1f} +- {doubt:.1f}"
    '45.0 +- 6.8'
    """
    value = conductivity_s_m(model, metal_g_l, acid_g_l, temperature_k, others_g_l)
    variance = (model.u_share * value) ** 2
    for part in _others_s_m(model, others_g_l or {}):
        variance = variance + (OTHER_METALS_U_SHARE * part) ** 2
    return value, np.asarray(np.sqrt(variance))


def plant_conductivity(
    measured_s_m: float,
    at_k: float,
    per_kelvin_share: float = 0.0,
    u_share: float = 0.02,
    name: str = "measured at the plant",
) -> Conductivity:
    """A plant's own measured value, in place of a correlation.

    The measured value at its temperature, carried to others by a share per kelvin (acid baths
    0.006 to 0.01, salts without acid 0.02). Metal and acid do not enter: it is that bath. For a
    plant's own correlation make a `Conductivity` with its coefficients.

    Parameters
    ----------
    measured_s_m : float
        Measured conductivity, S/m; above zero.
    at_k : float
        Temperature at which it was measured, K; above zero.
    per_kelvin_share : float
        Rise per kelvin, as a share of the measured value.
    u_share : float
        Relative standard uncertainty of the measurement, as a share; not negative.
    name : str
        What was measured.

    Returns
    -------
    Conductivity
        A model with status "plant".

    Raises
    ------
    OutOfRange
        If the conductivity or temperature is not above zero, or the uncertainty is negative.

    Source
    ------
    The plant.

    Example
    -------
    >>> bath = plant_conductivity(62.0, 318.15, per_kelvin_share=0.007)
    >>> f"{conductivity_s_m(bath, 38.0, 185.0, 320.15):.2f}"
    '62.87'
    """
    measured = float(above_zero("measured_s_m", measured_s_m))
    return Conductivity(
        name=name,
        constant_s_m=measured,
        per_metal_g_l=0.0,
        per_acid_g_l=0.0,
        per_kelvin=measured * float(finite("per_kelvin_share", per_kelvin_share)),
        reference_k=at_k,
        u_share=u_share,
        ranges=(),
        status="plant",
        source=name,
    )


def calibrated(
    model: Conductivity,
    measured_s_m: float,
    metal_g_l: float,
    acid_g_l: float,
    temperature_k: float,
    u_share: float = 0.03,
) -> Conductivity:
    """A correlation of the literature, scaled so that it passes through a plant's measurement.

    All coefficients are multiplied by measured over calculated: the level is the plant's, the
    relative slopes stay those of the literature.

    Parameters
    ----------
    model : Conductivity
        One of `CONDUCTIVITIES`, or any other.
    measured_s_m : float
        Measured conductivity without bubbles, S/m; above zero.
    metal_g_l : float
        Metal in the bath that was measured, g/L; not negative.
    acid_g_l : float
        Free acid in it, g/L; not negative.
    temperature_k : float
        Its temperature, K; above zero.
    u_share : float
        Relative standard uncertainty near that bath, as a share; not negative.

    Returns
    -------
    Conductivity
        The scaled model, with status "plant".

    Raises
    ------
    OutOfRange
        If an input lies outside its limits or the model does not reach that bath.

    Source
    ------
    The plant's measurement, with the slopes of the model's `source`.

    Example
    -------
    >>> own = calibrated(CONDUCTIVITIES["Zn"], 41.0, 52.0, 175.0, 309.15)
    >>> f"{conductivity_s_m(own, 52.0, 175.0, 309.15):.1f}"
    '41.0'
    """
    worked_out = float(conductivity_s_m(model, metal_g_l, acid_g_l, temperature_k))
    scale = float(above_zero("measured_s_m", measured_s_m)) / worked_out
    return replace(
        model,
        constant_s_m=scale * model.constant_s_m,
        per_metal_g_l=scale * model.per_metal_g_l,
        per_acid_g_l=scale * model.per_acid_g_l,
        per_kelvin=scale * model.per_kelvin,
        u_share=u_share,
        status="plant",
        source=f"measured at the plant, slopes of: {model.source}",
        others=tuple((symbol, scale * slope) for symbol, slope in model.others),
    )
