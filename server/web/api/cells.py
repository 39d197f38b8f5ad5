"""The cells of a section as they are now."""

from server.accounts.results import CellState
from server.accounts.state import cell_states
from server.science.units import percent_from_share
from server.web.api.account_answers import known
from server.web.api.parameters import SectionName
from server.web.api.resource import problems, resource
from server.web.api.schemas_plant import CellAnswer, Cells
from server.web.dependencies import DbSession, Now, ThisHouse, requires

router = resource("plant")


@router.get(
    "/cells",
    summary="The cells of a section, each with its state now",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_cells(db: DbSession, house: ThisHouse, now_ms: Now, section: SectionName) -> Cells:
    """Answer the last reading, the deposit and the worst open flag of every cell."""
    states = cell_states(db, house, section, now_ms)
    return Cells(at=now_ms, cells=[_cell(section, state) for state in states])


def _cell(section: str, state: CellState) -> CellAnswer:
    return CellAnswer(
        section=section,
        cell=state.number,
        state=state.state,
        volts=state.volts,
        read_at=state.read_ms,
        deposit_started_at=state.deposit_started_ms,
        deposit_kg=state.deposit_kg,
        last_efficiency_pct=known(state.last_efficiency, percent_from_share),
        flag_kind=state.flag_kind,
        flag_tier=state.flag_tier,
        flag_raised_at=state.flag_raised_ms,
        evidence=state.evidence,
    )
