"""The books of a section, or of the whole tankhouse, over a period."""

from server.accounts.account import house_account, section_account
from server.web.api.account_answers import account_answer, house_account_answer
from server.web.api.parameters import FromTime, SectionIfAny, ToTime
from server.web.api.resource import problems, resource
from server.web.api.schemas_account import AccountAnswer, HouseAccountAnswer
from server.web.dependencies import DbSession, ThisHouse, requires
from server.web.moments import span_of

router = resource("accounts")


@router.get(
    "/accounts",
    summary="Charge, metal, efficiency and energy of a period",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_accounts(
    db: DbSession,
    house: ThisHouse,
    from_time: FromTime,
    to_time: ToTime,
    section: SectionIfAny = None,
) -> AccountAnswer | HouseAccountAnswer:
    """Answer the account of a section; without one, of the house with all its sections."""
    from_ms, to_ms = span_of(from_time, to_time, house)
    if section is None:
        return house_account_answer(house_account(db, house, from_ms, to_ms))
    return account_answer(section_account(db, house, section, from_ms, to_ms))
