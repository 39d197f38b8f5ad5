"""What cannot be as it stands, said beside the figure and never cut off."""

from server.calculator.sum import Remark
from server.calculator.texts import N_, Said


def above_full_efficiency(efficiency_pct: float, u_pct: float = 0.0) -> list[Remark]:
    """Say so where an efficiency is above 100 %, and whether its doubt can explain it."""
    if efficiency_pct <= 100:
        return []
    if efficiency_pct - 2 * u_pct <= 100:
        text = N_(
            "The current efficiency is above 100 %%, by no more than twice its standard"
            " uncertainty of %(u)s %%."
        )
        return [Remark("note", Said(text, {"u": u_pct}))]
    text = N_(
        "A current efficiency of %(value)s %% cannot be: a weight, a count of cathodes, a time or"
        " the current is wrong. It is shown as it comes out."
    )
    return [Remark("warning", Said(text, {"value": efficiency_pct}))]
