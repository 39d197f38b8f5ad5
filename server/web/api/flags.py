"""What the watch says of the cells."""

from typing import Annotated

from fastapi import Query

from server.watch.flags import flags_between
from server.watch.lives import lives
from server.web.api.flag_answers import flag_answer
from server.web.api.parameters import FromTime, SectionIfAny, ToTime
from server.web.api.resource import problems, resource
from server.web.api.schemas_flags import Flags, Tier
from server.web.dependencies import DbSession, Now, ThisHouse, requires
from server.web.moments import span_of

router = resource("flags")

OnlyOpen = Annotated[bool, Query(alias="open", description="Only flags that are open still.")]


@router.get(
    "/flags",
    summary="Flags whose life touches a period",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_flags(
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    from_time: FromTime,
    to_time: ToTime,
    section: SectionIfAny = None,
    open_only: OnlyOpen = False,
    tier: Tier | None = None,
) -> Flags:
    """Answer every flag that was open at some moment of the period, as it stands now."""
    from_ms, to_ms = span_of(from_time, to_time, house)
    found = flags_between(db, house, from_ms, to_ms, section, open_only, tier)
    stands = lives(db, house, found, now_ms)
    return Flags(flags=[flag_answer(*pair) for pair in zip(found, stands, strict=True)])
