"""Diffusion through the film at an electrode, the limit it sets, and the share in use."""

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import FARADAY_C_MOL

# Common practice: share of the limiting current density up to which deposits stay smooth.
SMOOTH_DEPOSIT_LOW_SHARE = 0.30
# Common practice: share of the limiting current density beyond which they are expected rough.
SMOOTH_DEPOSIT_HIGH_SHARE = 0.40
# V. G. Levich, Physicochemical Hydrodynamics (1962), as texts print it (looked up in several).
LEVICH_COEFFICIENT = 0.620


def film_limiting_a_m2(
    electrons: ArrayLike, diffusivity_m2_s: ArrayLike, mol_m3: ArrayLike, film_m: ArrayLike
) -> Numbers:
    """Largest current density at which an ion still arrives through the film.

    i_L = z F D c / delta: the surface is empty and the ion comes by diffusion alone. Migration is
    left out, which plenty of acid makes fair; it adds to the limit where acid is short.

    Parameters
    ----------
    electrons : array_like, shape S
        Electrons that each ion takes; above zero.
    diffusivity_m2_s : array_like, broadcast with S
        Diffusion coefficient D of the ion, m2/s; above zero.
    mol_m3 : array_like, broadcast with S
        Concentration c in the bulk, mol/m3; not negative.
    film_m : array_like, broadcast with S
        Thickness delta of the diffusion film, m; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Limiting current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a concentration is negative or another input not above zero.

    Source
    ------
    W. Nernst, Z. Phys. Chem. 47 (1904) 52.

    Example
    -------
    45 g/L of copper, a film of 0.20 mm.

    >>> f"{film_limiting_a_m2(2, 7.0e-10, 708.15, 0.20e-3):.1f}"
    '478.3'
    """
    flux = above_zero("diffusivity_m2_s", diffusivity_m2_s) * not_negative("mol_m3", mol_m3)
    charge = above_zero("electrons", electrons) * FARADAY_C_MOL
    return np.asarray(charge * flux / above_zero("film_m", film_m))


def film_thickness_m(
    electrons: ArrayLike,
    diffusivity_m2_s: ArrayLike,
    mol_m3: ArrayLike,
    limiting_a_m2: ArrayLike,
) -> Numbers:
    """Thickness of the diffusion film behind a measured limiting current density.

    delta = z F D c / i_L; undoes `film_limiting_a_m2`.

    Parameters
    ----------
    electrons : array_like, shape S
        Electrons that each ion takes; above zero.
    diffusivity_m2_s : array_like, broadcast with S
        Diffusion coefficient D of the ion, m2/s; above zero.
    mol_m3 : array_like, broadcast with S
        Concentration c in the bulk, mol/m3; not negative.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Film thickness, m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a concentration is negative or another input not above zero.

    Source
    ------
    W. Nernst, Z. Phys. Chem. 47 (1904) 52.

    Example
    -------
    >>> f"{film_thickness_m(2, 7.0e-10, 708.15, 478.3) * 1e3:.2f}"
    '0.20'
    """
    # The two stand in the same place of the law, so either is had from the other.
    limiting = above_zero("limiting_a_m2", limiting_a_m2)
    return film_limiting_a_m2(electrons, diffusivity_m2_s, mol_m3, limiting)


def share_of_limit(current_a_m2: ArrayLike, limiting_a_m2: ArrayLike) -> Numbers:
    """Share of the limiting current density that is in use.

    Up to `SMOOTH_DEPOSIT_LOW_SHARE` deposits are smooth, beyond `SMOOTH_DEPOSIT_HIGH_SHARE` they
    grow nodules. A share above 1 is returned as it is: the current then also makes something
    else, or the limit is wrong.

    Parameters
    ----------
    current_a_m2 : array_like, shape S
        Current density, A/m2; not negative.
    limiting_a_m2 : array_like, broadcast with S
        Limiting current density, A/m2; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Share, not per cent. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a current is negative or a limit not above zero.

    Source
    ------
    A quotient; the rule of 30 to 40 % is common practice of the trade.

    Example
    -------
    >>> f"{share_of_limit(300.0, 800.0):.3f}"
    '0.375'
    """
    current = not_negative("current_a_m2", current_a_m2)
    return np.asarray(current / above_zero("limiting_a_m2", limiting_a_m2))


def levich_film_m(
    diffusivity_m2_s: ArrayLike, viscosity_m2_s: ArrayLike, rotation_rad_s: ArrayLike
) -> Numbers:
    """Thickness of the diffusion film at a rotating disc.

    delta = 1.61 D^(1/3) nu^(1/6) omega^(-1/2), the same everywhere on the disc. Laminar flow, and
    ions slow against the viscosity: at a Schmidt number of 1000 the film is really 3 % thicker.

    Parameters
    ----------
    diffusivity_m2_s : array_like, shape S
        Diffusion coefficient D of the ion, m2/s; above zero.
    viscosity_m2_s : array_like, broadcast with S
        Kinematic viscosity nu, m2/s; above zero.
    rotation_rad_s : array_like, broadcast with S
        Angular velocity omega, rad/s; above zero. Turns per second times 2 pi.

    Returns
    -------
    ndarray, broadcast shape
        Film thickness, m. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If an input is not above zero.

    Source
    ------
    V. G. Levich, Physicochemical Hydrodynamics (1962); correction for the Schmidt number: J.
    Newman, J. Phys. Chem. 70 (1966) 1327.

    Example
    -------
    >>> f"{levich_film_m(7.0e-10, 1.0e-6, 104.72) * 1e6:.1f}"
    '14.0'
    """
    diffusivity = above_zero("diffusivity_m2_s", diffusivity_m2_s)
    viscosity = above_zero("viscosity_m2_s", viscosity_m2_s)
    rotation = above_zero("rotation_rad_s", rotation_rad_s)
    scale = diffusivity ** (1.0 / 3.0) * viscosity ** (1.0 / 6.0) / np.sqrt(rotation)
    return np.asarray(scale / LEVICH_COEFFICIENT)


def levich_limiting_a_m2(
    electrons: ArrayLike,
    diffusivity_m2_s: ArrayLike,
    viscosity_m2_s: ArrayLike,
    mol_m3: ArrayLike,
    rotation_rad_s: ArrayLike,
) -> Numbers:
    """Limiting current density at a rotating disc, the laboratory's measure of diffusivity.

    i_L = 0.620 z F D^(2/3) nu^(-1/6) c omega^(1/2); 0.201 for turns per minute and 1.554 for turns
    per second. The limits are those of `levich_film_m`.

    Parameters
    ----------
    electrons : array_like, shape S
        Electrons that each ion takes; above zero.
    diffusivity_m2_s : array_like, broadcast with S
        Diffusion coefficient D of the ion, m2/s; above zero.
    viscosity_m2_s : array_like, broadcast with S
        Kinematic viscosity nu, m2/s; above zero.
    mol_m3 : array_like, broadcast with S
        Concentration c in the bulk, mol/m3; not negative.
    rotation_rad_s : array_like, broadcast with S
        Angular velocity omega, rad/s; above zero.

    Returns
    -------
    ndarray, broadcast shape
        Limiting current density, A/m2. NaN where an input is NaN.

    Raises
    ------
    OutOfRange
        If a concentration is negative or another input not above zero.

    Source
    ------
    V. G. Levich, Physicochemical Hydrodynamics (1962).

    Example
    -------
    A disc at 1000 turns per minute.

    >>> f"{levich_limiting_a_m2(2, 7.0e-10, 1.0e-6, 100.0, 104.72):.0f}"
    '965'
    """
    film_m = levich_film_m(diffusivity_m2_s, viscosity_m2_s, rotation_rad_s)
    return film_limiting_a_m2(electrons, diffusivity_m2_s, mol_m3, film_m)
