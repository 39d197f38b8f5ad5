"""What an electrode of a cell costs: a curve held where its cost is known, with the doubt of it."""

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from server.science.arrays import Numbers, above_zero, not_negative
from server.science.constants import FARADAY_C_MOL, GAS_CONSTANT_J_MOL_K
from server.science.electrode.mixed import cathode_overpotential_v
from server.science.electrode.rates import butler_volmer_overpotential_v, charge_transfer_ohm_m2
from server.science.electrode.tafel import tafel_overpotential_v

# Where a value comes from; "chosen" is ours, picked so that something stated comes out.
Status = Literal["looked up", "from memory", "common practice", "chosen", "plant"]


@dataclass(frozen=True)
class StatedValue:
    """A number with its standard uncertainty, where it comes from and how sure that is."""

    value: float
    standard_uncertainty: float
    status: Status
    source: str


def stated_between(low: float, high: float, status: Status, source: str) -> StatedValue:
    """The middle of a band in which every value is equally believable.

    Parameters
    ----------
    low : float
        Lower end of the band.
    high : float
        Upper end of the band.
    status : {"looked up", "from memory", "common practice", "chosen", "plant"}
        How sure the source is.
    source : str
        Where the band comes from.

    Returns
    -------
    StatedValue
        The middle, with the half-width over the root of three as standard uncertainty.

    Source
    ------
    JCGM 100:2008, 4.3.7, eq. (7).

    Example
    -------
    >>> stated_between(0.45, 0.70, "from memory", "textbooks").value
    0.575
    """
    middle, half_width = (low + high) / 2.0, abs(high - low) / 2.0
    # Rounded, so that the middle reads as it would be written down.
    return StatedValue(round(middle, 12), half_width / math.sqrt(3.0), status, source)


@dataclass(frozen=True)
class UsualPoint:
    """Where on its curve an electrode's cost is known, and how the cost moves with temperature.

    `per_kelvin` is a share of the cost, compounded like interest. Hardly any source gives it, nor
    an activation energy; at zero the exchange current rises with temperature by just so much that
    the cost here stays.
    """

    current_density_a_m2: float
    temperature_k: float
    overpotential_v: StatedValue
    per_kelvin: StatedValue

    def at_temperature_v(self, temperature_k: ArrayLike) -> Numbers:
        """Give the cost at the point's current density and another temperature."""
        warmer_k = above_zero("temperature_k", temperature_k) - self.temperature_k
        return np.asarray(self.overpotential_v.value * np.exp(self.per_kelvin.value * warmer_k))


@dataclass(frozen=True)
class TafelElectrode:
    """An electrode far from equilibrium, on a straight line in the logarithm of the current.

    The line is held at a point rather than at an exchange current: that lies many decades away,
    and an error of it and one of the slope would all but cancel. The slope is that of the point's
    temperature and grows in proportion to temperature, as R T / F does.
    """

    name: str
    point: UsualPoint
    slope_v: StatedValue

    def slope_at_v(self, temperature_k: ArrayLike) -> Numbers:
        """Give the volts of a tenfold current at a temperature."""
        kelvin = above_zero("temperature_k", temperature_k)
        return np.asarray(self.slope_v.value * kelvin / self.point.temperature_k)

    def exchange_a_m2(self, temperature_k: ArrayLike) -> Numbers:
        """Give the exchange current density that belongs to the line at a temperature."""
        decades = self.point.at_temperature_v(temperature_k) / self.slope_at_v(temperature_k)
        return np.asarray(self.point.current_density_a_m2 * 10.0**-decades)

    def overpotential_v(self, current_density_a_m2: ArrayLike, temperature_k: ArrayLike) -> Numbers:
        """Give the cost of a current density, V; NaN where no current flows."""
        return tafel_overpotential_v(
            current_density_a_m2, self.exchange_a_m2(temperature_k), self.slope_at_v(temperature_k)
        )

    def differential_ohm_m2(
        self, current_density_a_m2: ArrayLike, temperature_k: ArrayLike
    ) -> Numbers:
        """Give the rise of the cost with current density, ohm m2; NaN where no current flows."""
        current = not_negative("current_density_a_m2", current_density_a_m2)
        flowing = np.where(current > 0.0, current, np.nan)
        return np.asarray(self.slope_at_v(temperature_k) / (math.log(10.0) * flowing))


@dataclass(frozen=True)
class TwoWayElectrode:
    """An electrode near enough to equilibrium for its reverse reaction to count.

    Butler-Volmer, held at a point as the line of a `TafelElectrode` is. The transfer coefficients
    are apparent ones, in the driven direction and against it.
    """

    name: str
    point: UsualPoint
    driven_transfer: StatedValue
    reverse_transfer: StatedValue

    def exchange_a_m2(self, temperature_k: ArrayLike) -> Numbers:
        """Give the exchange current density that belongs to the curve at a temperature."""
        kelvin = above_zero("temperature_k", temperature_k)
        cost_v = self.point.at_temperature_v(kelvin)
        reduced = cost_v * FARADAY_C_MOL / (GAS_CONSTANT_J_MOL_K * kelvin)
        forward = np.expm1(self.driven_transfer.value * reduced)
        backward = np.expm1(-self.reverse_transfer.value * reduced)
        return np.asarray(self.point.current_density_a_m2 / (forward - backward))

    def overpotential_v(
        self,
        current_density_a_m2: ArrayLike,
        temperature_k: ArrayLike,
        limiting_a_m2: ArrayLike | None = None,
    ) -> Numbers:
        """Give the cost of a current density, V, with the supply's limit where one is stated."""
        current = not_negative("current_density_a_m2", current_density_a_m2)
        exchange = self.exchange_a_m2(temperature_k)
        driven, reverse = self.driven_transfer.value, self.reverse_transfer.value
        if limiting_a_m2 is None:
            return butler_volmer_overpotential_v(current, exchange, driven, reverse, temperature_k)
        # A cathode's driven direction is the cathodic one.
        return cathode_overpotential_v(
            current, exchange, reverse, driven, temperature_k, limiting_a_m2
        )

    def differential_ohm_m2(
        self, current_density_a_m2: ArrayLike, temperature_k: ArrayLike
    ) -> Numbers:
        """Give the rise of the cost with current density, ohm m2, without a limit of supply."""
        return charge_transfer_ohm_m2(
            self.overpotential_v(current_density_a_m2, temperature_k),
            self.exchange_a_m2(temperature_k),
            self.driven_transfer.value,
            self.reverse_transfer.value,
            temperature_k,
        )


# An electrode of either kind.
Electrode = TafelElectrode | TwoWayElectrode
