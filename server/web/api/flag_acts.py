"""What people do about flags."""

from server.watch.acts import Meant, Wanted, act_on, life_now
from server.web.act_words import refused
from server.web.api.flag_answers import flag_answer
from server.web.api.resource import problems, resource
from server.web.api.schemas_flags import FlagActSent, FlagAnswer
from server.web.dependencies import Now, Planner, ThisHouse, WriteSession
from server.web.moments import moment_of
from server.web.typed import one_line

router = resource("flags")


@router.post(
    "/flags/acts",
    summary="Do something about a flag",
    response_model=FlagAnswer,
    responses=problems(404, 409),
)
def post_flag_act(
    sent: FlagActSent, who: Planner, db: WriteSession, house: ThisHouse, now_ms: Now
) -> FlagAnswer:
    """Mark a flag as seen, worked on, shelved for a time or closed; answers how it stands then."""
    raised_ms = moment_of(sent.raised_at, house, "body.raised_at")
    until_ms = moment_of(sent.until, house, "body.until") if sent.until else None
    wanted = Wanted(sent.act, until_ms, one_line(sent.reason), one_line(sent.assigned_to, 200))
    meant = Meant(sent.section, sent.cell, sent.kind, raised_ms)
    with refused():
        flag = act_on(db, house, meant, wanted, who.sender, now_ms)
    return flag_answer(flag, life_now(db, house, flag, now_ms))
