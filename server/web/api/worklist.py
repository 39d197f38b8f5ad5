"""What to see to first."""

from server.watch.planned import planned_stops
from server.watch.worklist import worklist
from server.web.api.flag_answers import planned_answer, work_item_answer
from server.web.api.parameters import AtTime
from server.web.api.resource import resource
from server.web.api.schemas_flags import Worklist
from server.web.dependencies import DbSession, Now, ThisHouse, requires
from server.web.moments import moment_of

router = resource("flags")


@router.get(
    "/worklist",
    summary="Open flags in the order in which to see to them",
    dependencies=[requires("reader")],
)
def get_worklist(db: DbSession, house: ThisHouse, now_ms: Now, at: AtTime = None) -> Worklist:
    """Answer the flags that are open, or were at a moment: to act on first, costliest first.

    Also cells that deserve a planned stop, with what the repair should bring in a month.
    """
    at_ms = moment_of(at, house, "query.at") if at else now_ms
    items = worklist(db, house, at_ms)
    return Worklist(
        items=[work_item_answer(item) for item in items],
        planned=[planned_answer(stop) for stop in planned_stops(db, house, items, at_ms)],
    )
