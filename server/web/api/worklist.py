"""What to see to first."""

from server.watch.worklist import worklist
from server.web.api.flag_answers import work_item_answer
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
    """Answer the flags that are open, or were at a moment: to act on first, costliest first."""
    at_ms = moment_of(at, house, "query.at") if at else now_ms
    return Worklist(items=[work_item_answer(item) for item in worklist(db, house, at_ms)])
