"""Craig, Hoffman, Law and Hamer, J. Res. NBS 64A (1960) 381.

They dissolved silver in perchloric acid and found 1.117972 mg per coulomb, with an overall limit of
error of 0.000019 mg per coulomb. Looked up: the abstract, on a public page.
"""

import pytest

from server.science.constants import SILVER
from server.science.faraday import deposited_kg


def test_silver_moved_by_one_coulomb():
    assert deposited_kg(1.0, SILVER) * 1e6 == pytest.approx(1.117972, abs=0.000019)


def test_the_abridged_weight_of_silver_would_miss_it():
    # Computed here: 107.87 g/mol over F, in mg/C; the reason for keeping the full weight.
    assert abs(107.87e3 / 96485.33212 - 1.117972) > 0.000019
