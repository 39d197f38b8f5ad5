"""Coefficients of the Laliberte model for the sulfates of a tankhouse and their acid."""

from dataclasses import dataclass

from server.science.constants import ZERO_CELSIUS_K
from server.science.ranges import Range


@dataclass(frozen=True)
class SaltFit:
    """Coefficients of one salt in water, and the data to which they were fitted.

    `density` holds c0 to c4, `viscosity` v1 to v6 of the paper; they go with degrees Celsius and
    mass shares, and give kg/m3 and mPa s.
    """

    formula: str
    density: tuple[float, float, float, float, float]
    density_ranges: tuple[Range, Range]
    viscosity: tuple[float, float, float, float, float, float]
    viscosity_ranges: tuple[Range, Range]


def _ranges(formula: str, data: tuple[float, float, float]) -> tuple[Range, Range]:
    """Temperature and share of everything dissolved, of the solutions of this salt alone."""
    coldest_degc, hottest_degc, richest = data
    return (
        Range(
            f"{formula} temperature_k", coldest_degc + ZERO_CELSIUS_K, hottest_degc + ZERO_CELSIUS_K
        ),
        Range(f"{formula} dissolved_share", 0.0, richest),
    )


def _fit(
    formula: str,
    density: tuple[float, float, float, float, float],
    density_data: tuple[float, float, float],
    viscosity: tuple[float, float, float, float, float, float],
    viscosity_data: tuple[float, float, float],
) -> SaltFit:
    """A fit from its data's coldest and hottest degC and largest mass share."""
    return SaltFit(
        formula,
        density,
        _ranges(formula, density_data),
        viscosity,
        _ranges(formula, viscosity_data),
    )


# M. Laliberte, J. Chem. Eng. Data 54 (2009) 1725, DOI 10.1021/je8008123, supplement; density after
# M. Laliberte and W. E. Cooper, ibid. 49 (2004) 1141. Read off the table of the open library
# chemicals 1.5.2 (Laliberte2009.tsv), rounded to ten figures, which moves nothing visible. A table
# of thirteen salts instead of that library: it weighs 73 MB and brings pandas (84 MB) and fluids,
# and the model's own functions are in a further one, thermo (30 MB), one bath at a time.
SALT_FITS: dict[str, SaltFit] = {
    fit.formula: fit
    for fit in (
        _fit(
            "CuSO4",
            density=(-1.120782942e-06, 6.068505906e-07, -0.1188632325, 0.003780500759, 4763.96074),
            density_data=(10, 60, 0.2844),
            viscosity=(
                -129.8873045,
                4.030196204,
                10.01988059,
                0.06101649931,
                -2125.992963,
                9.169656538,
            ),
            viscosity_data=(15, 60, 0.4129),
        ),
        _fit(
            "ZnSO4",
            density=(19.39983263, 36.98105527, -0.08876578477, 0.001068931375, 2058.602177),
            density_data=(15, 60, 0.3677),
            viscosity=(
                13.59252627,
                1.35400381,
                10.55591243,
                0.003603424547,
                613.2229528,
                0.1958260734,
            ),
            viscosity_data=(15, 55, 0.318),
        ),
        _fit(
            "NiSO4",
            density=(-0.04014102372, 0.2227436832, -0.1443368173, 0.0009865178277, 3072.837623),
            density_data=(15, 60, 0.3533),
            viscosity=(
                26.18743999,
                1.886995855,
                5.310825589,
                0.01025193615,
                -0.3145880649,
                0.4146509396,
            ),
            viscosity_data=(15, 60, 0.3533),
        ),
        _fit(
            "CoSO4",
            density=(-41.40149774, 1325.764527, 0.01012136447, -0.0001491502558, -301.893147),
            density_data=(25, 75, 0.3305),
            viscosity=(26.3429174, 2.699515654, 5.190055249, 0.01292638692, -0.09959387042, 1.0),
            viscosity_data=(25, 75, 0.3305),
        ),
        _fit(
            "FeSO4",
            density=(-0.2247196502, 0.1211403503, 0.7357244667, -0.02186483663, 3325.112611),
            density_data=(15, 25, 0.2332),
            viscosity=(
                27.07358807,
                0.8847390029,
                0.8614297039,
                0.0051165008,
                7322.940317,
                3.924818568,
            ),
            viscosity_data=(25, 75, 0.2109),
        ),
        _fit(
            "MnSO4",
            density=(0.01644401692, 0.004087048821, -0.1106395315, 0.0019297948, 3484.636408),
            density_data=(20, 25, 0.364),
            viscosity=(
                24.03778544,
                2.134073331,
                6.472404056,
                0.007480813629,
                0.6739900704,
                -0.5388368091,
            ),
            viscosity_data=(20, 80, 0.3641),
        ),
        _fit(
            "CdSO4",
            density=(
                -1.043952889e-07,
                6.106982066e-08,
                -0.003760505467,
                0.004107502446,
                5007.691492,
            ),
            density_data=(25, 75, 0.2967),
            viscosity=(
                34.26819482,
                2.919249424,
                4.375038156,
                0.01231813702,
                -27.9663545,
                35.28466105,
            ),
            viscosity_data=(18, 75, 0.3574),
        ),
        _fit(
            "H2SO4",
            density=(70.83951523, 142.3526939, 0.6877945962, 0.006492996832, 1667.238646),
            density_data=(-11.15, 75, 0.782),
            viscosity=(
                7.776994775,
                1.234430568,
                1.916433926,
                0.005636315369,
                46.00653935,
                2.830719653,
            ),
            viscosity_data=(-10, 75, 0.782),
        ),
        _fit(
            "MgSO4",
            density=(98.12016631, 59.26576473, -0.03034049821, 0.0005036192286, 1763.759423),
            density_data=(0, 125, 0.2682),
            viscosity=(
                75.33223716,
                2.227989296,
                6.584415049,
                0.007845007616,
                1650.84455,
                5.488234596,
            ),
            viscosity_data=(15, 150, 0.3008),
        ),
        _fit(
            "Na2SO4",
            density=(4.450254495e-06, 9.120865196e-06, 0.08403583701, 0.004657675254, 4349.505139),
            density_data=(0, 125, 0.3252),
            viscosity=(
                26.51903056,
                1.574613889,
                3.496628457,
                0.01038795554,
                106.2252847,
                2.97377112,
            ),
            viscosity_data=(15, 150, 0.3313),
        ),
        _fit(
            "K2SO4",
            density=(7.105993695e-06, 4.655586628e-05, 0.3495668412, 0.007510536415, 4200.093778),
            density_data=(0, 98.67, 0.1515),
            viscosity=(
                18.96836066,
                0.2432088273,
                -3.215516109,
                0.000933793433,
                129432.4012,
                2.391917654,
            ),
            viscosity_data=(0, 89.5, 0.1547),
        ),
        _fit(
            "(NH4)2SO4",
            density=(618.2407507, 966.1281161, 0.6027062025, 0.001627902679, 667.5734206),
            density_data=(15, 55, 0.4292),
            viscosity=(
                11.96842221,
                2.605921453,
                1.908301282,
                0.007312916012,
                141.4593406,
                6.778378486,
            ),
            viscosity_data=(15, 60, 0.4629),
        ),
        _fit(
            "Fe2(SO4)3",
            density=(2894.559589, 2061.788206, 0.1629615697, 0.001485973682, -81.40622246),
            density_data=(15, 25, 0.3009),
            viscosity=(
                15.77325748,
                1.378396214,
                4.924040854,
                0.01783169232,
                -16.98016642,
                3.367111216,
            ),
            viscosity_data=(20, 50, 0.3009),
        ),
    )
}
