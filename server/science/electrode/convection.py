"""Free convection along a vertical plate: how thin the rising solution keeps the film."""

from typing import Literal, get_args

import numpy as np
from numpy.typing import ArrayLike, NDArray

from server.science.arrays import Numbers, above_zero
from server.science.errors import UnknownName
from server.science.ranges import Range

Flow = Literal["by number", "laminar", "turbulent"]

# 3rd General Conference on Weights and Measures (1901): standard acceleration of free fall, exact.
GRAVITY_M_S2 = 9.80665
# Wilke, Eisenberg and Tobias, J. Electrochem. Soc. 100 (1953) 513, eq. XVII (looked up as quoted).
LAMINAR_FILM = 1.48
# Laminar boundary layer theory, and eq. XVII of the same paper.
LAMINAR_POWER = 0.25
# M. G. Fouad and N. Ibl, Electrochim. Acta 3 (1960) 233 (from memory).
TURBULENT_SHERWOOD = 0.31
# M. G. Fouad and N. Ibl, Electrochim. Acta 3 (1960) 233 (from memory).
TURBULENT_POWER = 0.28
# Review of limiting-current work by Selman and Tobias, Adv. Chem. Eng. 10 (1978) (from memory).
LAMINAR_RANGE = Range("schmidt_grashof", 1e4, 1e12)
# M. G. Fouad and N. Ibl, Electrochim. Acta 3 (1960) 233 (from memory).
TURBULENT_RANGE = Range("schmidt_grashof", 4e13, 1e15)


def schmidt(viscosity_m2_s: ArrayLike, diffusivity_m2_s: ArrayLike) -> Numbers:
    """Schmidt number: how much faster a solution spreads movement than its ions spread.

    Sc = nu / D. About 1000 for metal ions in water, 2000 in a tankhouse's electrolyte.

    Parameters
    ----------
    viscosity_m2_s : array_like, shape S
        Kinematic viscosity nu, m2/s; above zero.
    diffusivity_m2_s : array_like, broadcast with S
        Diffusion coefficient D of the ion, m2/s; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Number without unit. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 82.

    Example
    -------
    >>> f"{schmidt(1.0e-6, 7.0e-10):.0f}"
    '1429'
    """
    viscosity = above_zero("viscosity_m2_s", viscosity_m2_s)
    return np.asarray(viscosity / above_zero("diffusivity_m2_s", diffusivity_m2_s))


def grashof(
    density_difference_share: ArrayLike, height_m: ArrayLike, viscosity_m2_s: ArrayLike
) -> Numbers:
    """Grashof number: the lift of the lighter solution at the plate against its friction.

    Gr = g h^3 (rho_bulk - rho_surface) / (rho nu^2). At the limiting current the surface is free
    of the metal; acid that gathers there in its place makes the difference smaller.

    Parameters
    ----------
    density_difference_share : array_like, shape S
        Difference of density between bulk and surface, over the density; above zero.
    height_m : array_like, broadcast with S
        Height of the plate, m; above zero.
    viscosity_m2_s : array_like, broadcast with S
        Kinematic viscosity nu, m2/s; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Number without unit. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 82, with the density difference itself in place of
    expansion times temperature.

    Example
    -------
    >>> f"{grashof(0.010, 1.0, 1.0e-6):.2e}"
    '9.81e+10'
    """
    lift = above_zero("density_difference_share", density_difference_share) * GRAVITY_M_S2
    friction = above_zero("viscosity_m2_s", viscosity_m2_s) ** 2
    return np.asarray(lift * above_zero("height_m", height_m) ** 3 / friction)


def sherwood(height_m: ArrayLike, film_m: ArrayLike) -> Numbers:
    """Sherwood number: the height of a plate over the thickness of its film.

    Sh = h / delta, the same as k h / D with the mass-transfer coefficient k.

    Parameters
    ----------
    height_m : array_like, shape S
        Height of the plate, m; above zero.
    film_m : array_like, broadcast with S
        Mean thickness of the diffusion film, m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Number without unit. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    IUPAC Green Book, 3rd ed. (2007), p. 82.

    Example
    -------
    >>> f"{sherwood(1.0, 0.2e-3):.0f}"
    '5000'
    """
    return np.asarray(above_zero("height_m", height_m) / above_zero("film_m", film_m))


def natural_film_m(
    height_m: ArrayLike, schmidt_grashof: ArrayLike, flow: Flow = "by number"
) -> Numbers:
    """Mean thickness of the film that free convection leaves on a vertical plate.

    Laminar delta = 1.48 h (Sc Gr)^(-1/4), within `LAMINAR_RANGE`; turbulent delta = h / (0.31 (Sc
    Gr)^0.28), within `TURBULENT_RANGE`, where a metre of cathode lies. Between the two no law is
    published, and the film is read off the straight line, on logarithmic paper, that joins them.
    Bubbles, pumped flow and a narrow gap are left out; they make a real film thinner.

    Parameters
    ----------
    height_m : array_like, shape S
        Height of the plate, m; above zero.
    schmidt_grashof : array_like, broadcast with S
        Product of Schmidt and Grashof number; above zero.
    flow : {"by number", "laminar", "turbulent"}
        Law to use; by the product, or one of them whatever the product.

    Returns
    -------
    ndarray, broadcast shape
        Film thickness, m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a height or product is not above zero.
    UnknownName
        If there is no such flow.

    Source
    ------
    C. R. Wilke, M. Eisenberg and C. W. Tobias, J. Electrochem. Soc. 100 (1953) 513, eq. XVII;
    M. G. Fouad and N. Ibl, Electrochim. Acta 3 (1960) 233 (from memory).

    Example
    -------
    A laboratory's electrode of 5 cm, and a cathode of a metre in the same solution.

    >>> films_m = natural_film_m([0.05, 1.0], [1.75e10, 1.4e14])
    >>> [f"{film_m * 1e3:.2f}" for film_m in films_m]
    ['0.20', '0.35']
    """
    if flow not in get_args(Flow):
        raise UnknownName("flow", flow, get_args(Flow))
    height = above_zero("height_m", height_m)
    product = above_zero("schmidt_grashof", schmidt_grashof)
    laminar, turbulent = _laminar_share(product), _turbulent_share(product)
    if flow == "by number":
        ends = np.array([LAMINAR_RANGE.high, TURBULENT_RANGE.low])
        joined = [_laminar_share(ends[0]), _turbulent_share(ends[1])]
        between = np.exp(np.interp(np.log(product), np.log(ends), np.log(joined)))
        share = np.where(product <= ends[0], laminar, between)
        share = np.where(product >= ends[1], turbulent, share)
    else:
        share = laminar if flow == "laminar" else turbulent
    return np.asarray(height * share)


def natural_flow(schmidt_grashof: ArrayLike) -> NDArray[np.str_]:
    """Which flow free convection makes along a plate, by the product of its two numbers.

    By `LAMINAR_RANGE` and `TURBULENT_RANGE`; what lies between them neither law covers. Below and
    above both the nearer law is all there is: ask the ranges whether it is stretched.

    Parameters
    ----------
    schmidt_grashof : array_like, any shape
        Product of Schmidt and Grashof number; above zero.

    Returns
    -------
    ndarray of str, same shape
        "laminar", "between" or "turbulent"; "unknown" where the product is NaN.

    Raises
    ------
    OutOfRange
        If a product is not above zero.

    Source
    ------
    As `natural_film_m`.

    Example
    -------
    >>> natural_flow([1.75e10, 1.4e14]).tolist()
    ['laminar', 'turbulent']
    """
    product = above_zero("schmidt_grashof", schmidt_grashof)
    cases = [product <= LAMINAR_RANGE.high, product >= TURBULENT_RANGE.low, np.isnan(product)]
    return np.select(cases, ["laminar", "turbulent", "unknown"], default="between")


def _laminar_share(schmidt_grashof: Numbers) -> Numbers:
    """The film over the height where the flow is laminar."""
    return np.asarray(LAMINAR_FILM * schmidt_grashof**-LAMINAR_POWER)


def _turbulent_share(schmidt_grashof: Numbers) -> Numbers:
    """The film over the height where the flow is turbulent."""
    return np.asarray(1.0 / (TURBULENT_SHERWOOD * schmidt_grashof**TURBULENT_POWER))
