"""How fast known reactions go: exchange currents, transfer coefficients and Tafel slopes."""

from dataclasses import dataclass
from typing import Literal

Status = Literal["looked up", "from memory", "fitted"]


@dataclass(frozen=True)
class KineticParameters:
    """What Butler-Volmer asks for, with how far the exchange current is believed.

    An exchange current density is known to a factor, not to a per cent: it moves with
    concentration, temperature, impurities and the state of the surface. `low_a_m2` and
    `high_a_m2` enclose what is reported. The transfer coefficients are apparent ones, which
    count the electrons. `status` tells whether the figure was looked up, recalled, or fitted to
    an overpotential that was recalled.
    """

    name: str
    exchange_a_m2: float
    low_a_m2: float
    high_a_m2: float
    anodic_transfer: float
    cathodic_transfer: float
    status: Status
    source: str


@dataclass(frozen=True)
class TafelParameters:
    """The Tafel slope of an anode, V per decade, with the limits in which it is believed."""

    name: str
    slope_v: float
    low_v: float
    high_v: float
    status: Status
    source: str


# E. Mattsson and J. O'M. Bockris, Trans. Faraday Soc. 55 (1959) 1586 (from memory).
COPPER_IN_SULFATE = KineticParameters(
    "copper in acid sulfate", 50.0, 10.0, 100.0, 1.5, 0.5, "from memory",
    "Mattsson and Bockris, Trans. Faraday Soc. 55 (1959) 1586; 45 to 65 degC",
)  # fmt: skip
# University of Cambridge, DoITPoMS, page "Tafel curve of copper electrode" (looked up).
COPPER_FOR_TEACHING = KineticParameters(
    "copper, a teaching value", 1.0, 0.1, 10.0, 1.0, 1.0, "looked up",
    "University of Cambridge, DoITPoMS; 27 degC, coefficient 0.5 with two electrons",
)  # fmt: skip
# Fitted to a cathodic overpotential of 60 to 120 mV near 500 A/m2 and 38 degC (from memory).
ZINC_IN_SULFATE = KineticParameters(
    "zinc in acid sulfate", 90.0, 50.0, 160.0, 1.5, 0.5, "fitted",
    "a cathodic overpotential of 60 to 120 mV at 400 to 600 A/m2, from memory",
)  # fmt: skip

# A/m2 by source, to show how far apart reports of one reaction lie. Textbooks quoting Mattsson and
# Bockris (from memory); DoITPoMS (looked up); J. Appl. Electrochem., doi 10.1007/bf00620584, for
# copper(II) to copper(I) and copper(I) to metal, one electron each (looked up: abstract).
COPPER_EXCHANGE_REPORTED_A_M2: dict[str, tuple[float, float]] = {
    "Mattsson and Bockris": (10.0, 100.0),
    "teaching page": (1.0, 1.0),
    "pulsed current, first electron": (0.34, 0.34),
    "pulsed current, second electron": (0.24, 0.24),
}

# log10 of i0 in A/cm2, lowest and highest, for hydrogen from acid. Compilations of Bockris and of
# Trasatti (from memory); half a decade either way where only one figure is remembered. For
# platinum 10^-3.3 and 10^-2 were looked up, for zinc 10^-10: all lie within.
HYDROGEN_EXCHANGE_LOG10_A_CM2: dict[str, tuple[float, float]] = {
    "Pt": (-3.5, -2.0),
    "Co": (-5.8, -4.8),
    "Ni": (-6.0, -5.0),
    "Fe": (-6.5, -5.5),
    "Cu": (-7.5, -6.5),
    "Ag": (-8.4, -7.4),
    "Ti": (-8.7, -7.7),
    "Zn": (-11.0, -10.0),
    "Cd": (-11.3, -10.3),
    "Mn": (-11.4, -10.4),
    "Pb": (-13.0, -12.0),
}
# One A/cm2 is 10^4 A/m2.
DECADES_FROM_CM2_TO_M2 = 4.0


def _hydrogen_on(symbol: str, low: float, high: float) -> KineticParameters:
    """Hydrogen on one metal, from the logarithms of its lowest and highest exchange current."""
    decades = low, (low + high) / 2.0, high
    least, middle, most = (10.0 ** (decade + DECADES_FROM_CM2_TO_M2) for decade in decades)
    return KineticParameters(
        f"hydrogen on {symbol}", middle, least, most, 0.5, 0.5, "from memory",
        "compilations of Bockris and of Trasatti; acid, about 25 degC, 0.12 V per decade",
    )  # fmt: skip


# The table above, in A/m2, the middle decade as the value.
HYDROGEN_ON: dict[str, KineticParameters] = {
    symbol: _hydrogen_on(symbol, *decades)
    for symbol, decades in HYDROGEN_EXCHANGE_LOG10_A_CM2.items()
}

# J. Cent. South Univ. Technol. 4 (1997), doi 10.1007/s11771-997-0035-y (looked up: abstract).
OXYGEN_ON_LEAD_CALCIUM = TafelParameters(
    "oxygen on lead and lead-calcium", 0.100, 0.080, 0.120, "looked up",
    "J. Cent. South Univ. Technol. 4 (1997), doi 10.1007/s11771-997-0035-y; pre-polarised",
)  # fmt: skip
# The same article; tin made no difference.
OXYGEN_ON_LEAD_SILVER = TafelParameters(
    "oxygen on lead-silver and lead-silver-calcium", 0.140, 0.120, 0.160, "looked up",
    "J. Cent. South Univ. Technol. 4 (1997), doi 10.1007/s11771-997-0035-y; pre-polarised",
)  # fmt: skip
# Electrode literature (from memory); close to 40 mV on compact ruthenium oxide was looked up.
OXYGEN_ON_COATED_TITANIUM = TafelParameters(
    "oxygen on coated titanium", 0.055, 0.040, 0.070, "from memory",
    "iridium oxide in acid; electrode literature",
)  # fmt: skip
