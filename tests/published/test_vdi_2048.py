"""VDI 2048 part 1 (2000), example of annex A: the flows of feed water, steam and condensate.

Looked up: measured flows, 95 % confidences (1.96 standard uncertainties), correlations and balances
in two public test suites that reproduce the example (equations A1 to A34); flows, corrections and
confidences after reconciliation are theirs: of one with the confidences first given, to their
digits; of the other with 2.5 kg/s for both boilers and without correlations, to six. Whether the
guideline prints more digits is not known here.
"""

import numpy as np
import pytest

from server.science.uncertainty.reconcile import reconciled

# Steam of two boilers, feed water of two pumps, losses, main condensate, three bleeds, condensate
# of the heaters, and steam for deaeration, kg/s.
MEASURED = [46.241, 45.668, 44.575, 44.319, 0.525, 69.978, 10.364, 3.744, 4.391, 18.498, 2.092]
CONFIDENCE = [0.800, 0.790, 0.535, 0.532, 0.105, 0.854, 0.168, 0.058, 0.058, 0.205, 0.272]
# Steam against feed water, feed water against condensate, bleeds against heaters.
BALANCES = np.array(
    [
        [1, 1, -1, -1, 0.4, 0, 0, 0, 0, 0, 0],
        [0, 0, 1, 1, -1, -1, -1, -1, -1, 0, 0],
        [0, 0, 0, 0, 0, 0, 1, 1, 1, -1, 0],
    ]
)
CORRELATION = np.eye(11)
CORRELATION[0, 1] = CORRELATION[1, 0] = 0.2
CORRELATION[2, 3] = CORRELATION[3, 2] = 0.4


def uncertainties(confidence):
    """Standard uncertainties of 95 % confidences."""
    return np.array(confidence) / 1.96


def test_flows_and_confidences():
    result = reconciled(BALANCES, MEASURED, uncertainties(CONFIDENCE), CORRELATION)

    assert result.adjustments == pytest.approx(
        [
            *(-1.27651079357085, -1.25002785826582, 0.350904047191697, 0.348096449940544),
            *(0.00134787242233519, 0.575060829315, 0.0117829833264503, 0.00140440603423252),
            *(0.00140440603423252, 0.0155917953949165, 0.0),
        ],
        rel=1e-9,
        abs=1e-12,
    )
    assert result.values[0] == pytest.approx(44.9644892064291, rel=1e-12)
    assert result.standard_uncertainties * 1.96 == pytest.approx(
        [
            *(0.575626570589129, 0.572817587480311, 0.404463177421466, 0.402919370199657),
            *(0.104623410451298, 0.559872848891984, 0.133003389109488, 0.056695251568643),
            *(0.056695251568643, 0.137102511396334, 0.272),
        ],
        rel=1e-9,
    )


def test_sums_that_nobody_measures_are_worked_out():
    # The same with the four sums of equations A1 to A4 as flows without a meter.
    sums = np.zeros((7, 15))
    sums[0, [0, 1, 4, 11]] = 1, 1, -0.2, -1
    sums[1, [2, 3, 4, 12]] = 1, 1, -0.6, -1
    sums[2, [4, 5, 6, 7, 8, 13]] = 0.4, 1, 1, 1, 1, -1
    sums[3, [6, 7, 8, 14]] = 1, 1, 1, -1
    sums[4, [11, 12]] = sums[5, [12, 13]] = 1, -1
    sums[6, [9, 14]] = -1, 1
    related = np.eye(15)
    related[:11, :11] = CORRELATION
    unknown = np.full(4, np.nan)

    result = reconciled(
        sums,
        np.append(MEASURED, unknown),
        np.append(uncertainties(CONFIDENCE), unknown),
        related,
    )

    assert result.values[11:] == pytest.approx(
        [89.2771917736789, 89.2771917736789, 89.2771917736788, 18.5135917953949], rel=1e-12
    )
    assert result.values[:4] == pytest.approx(
        [44.9644892064291, 44.4179721417342, 44.9259040471917, 44.6670964499405], rel=1e-12
    )
    assert result.observable.all()
    assert result.redundant.tolist() == [True] * 10 + [False] * 5
    assert result.degrees_of_freedom == 3


def test_steam_for_deaeration_is_in_no_balance():
    result = reconciled(BALANCES, MEASURED, uncertainties(CONFIDENCE), CORRELATION)

    assert not result.redundant[10]
    assert np.isnan(result.scores[10])
    assert result.values[10] == 2.092


def test_less_trust_in_the_boilers_and_no_correlation():
    trust = [2.5, 2.5, *CONFIDENCE[2:]]

    result = reconciled(BALANCES, MEASURED, uncertainties(trust))

    assert result.values == pytest.approx(
        [
            *(44.6918, 44.1188, 44.6385, 44.3818, 0.524194, 69.997),
            *(10.364, 3.744, 4.391, 18.499, 2.092),
        ],
        abs=6e-4,
    )
    assert result.standard_uncertainties * 1.96 == pytest.approx(
        [
            *(1.78991, 1.78991, 0.471702, 0.469808, 0.104563, 0.566796),
            *(0.133016, 0.0566957, 0.0566957, 0.137122, 0.272),
        ],
        rel=5e-6,
    )
    # The local quality there is the correction over 1.96 of its deviation, which is taken as at
    # least the root of a tenth of the variance measured: so for the losses and two bleeds.
    quality = np.array(
        [
            *(0.887628, 0.887628, 0.251487, 0.251487, 0.0242626, 0.0297734),
            *(0.000342739, 0.00022856, 0.00022856, 0.00684795),
        ]
    )
    tenth = np.abs(result.adjustments[:10]) / np.array(trust[:10]) * np.sqrt(10)
    assert np.minimum(np.abs(result.scores[:10]) / 1.96, tenth) == pytest.approx(quality, rel=5e-5)
    assert (tenth < np.abs(result.scores[:10]) / 1.96).nonzero()[0].tolist() == [4, 7, 8]
