"""How sure the figures are: standard uncertainties of what the plant's instruments give.

The accuracies in a section's terms are limits of error, taken as rectangular (JCGM 100:2008,
4.3.7). One shunt, one scale and one meter serve every reading: their error does not average out.
"""

from dataclasses import dataclass

import numpy as np

from server.science.uncertainty.propagation import standard_from_limit
from server.storage.plant import SectionTerms

ESTIMATED_CURRENT = 0.1
"""Relative standard uncertainty of a current that was filled in over a gap (common practice)."""

STOCK_MODEL = 0.02
"""Relative standard uncertainty of the efficiency by which hanging metal is judged.

A cell's next crop differs from its last ones by a few per cent; over the cells of a section part
of that averages out (common practice; wide).
"""

STOCK_SHAPE = 0.005
"""Relative standard uncertainty of metal that hung then and has been weighed since.

Its crop is shared out by charge, but shorts take more late in its growth (common practice).
"""


@dataclass(frozen=True)
class Doubts:
    """Relative standard uncertainties of a section's instruments, and of its meter in volts."""

    current: float
    scale: float
    meter_v: float


def doubts_of(terms: SectionTerms) -> Doubts:
    """Standard uncertainties that follow from the accuracies in a section's terms."""
    return Doubts(
        current=float(standard_from_limit(terms.current_accuracy)),
        scale=float(standard_from_limit(terms.scale_accuracy)),
        meter_v=float(standard_from_limit(terms.meter_accuracy_v)),
    )


def root_sum(*parts: float) -> float:
    """Independent contributions added in quadrature (JCGM 100:2008, eq. 10)."""
    return float(np.sqrt(sum(part * part for part in parts)))
