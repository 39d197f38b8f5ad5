"""What the scale weighed, and what it says of the current."""

from starlette.responses import Response

from server.accounts.lots import lot_results
from server.accounts.results import LotResult
from server.science.units import millimetres_from_metres, percent_from_share
from server.web.api.account_answers import known
from server.web.api.parameters import FromTime, SectionName, ToTime
from server.web.api.resource import problems, resource
from server.web.api.schemas import Outcomes
from server.web.api.schemas_plant import LotAnswer, Lots
from server.web.api.sent import SentLots, Taken
from server.web.api.sheet_schemas import body_of
from server.web.dependencies import DbSession, ThisHouse, requires
from server.web.moments import span_of

router = resource("records")


@router.post(
    "/lots",
    summary="Send lots",
    response_model=Outcomes,
    openapi_extra=body_of("lots"),
    responses=problems(413),
)
def post_lots(sent: SentLots, taken: Taken) -> Response:
    """Take lots in: which cells' crops were weighed, when they were pulled, and their mass."""
    return taken.take_in("lots", sent)


@router.get(
    "/lots",
    summary="Lots pulled in a period, each with its efficiency",
    dependencies=[requires("reader")],
    responses=problems(404),
)
def get_lots(
    db: DbSession, house: ThisHouse, section: SectionName, from_time: FromTime, to_time: ToTime
) -> Lots:
    """Answer each lot against the charge that its own cathodes received, the newest first."""
    from_ms, to_ms = span_of(from_time, to_time, house)
    found = lot_results(db, house, section, from_ms, to_ms)
    return Lots(
        section=section, from_ms=from_ms, to_ms=to_ms, lots=[_lot(result) for result in found]
    )


def _lot(result: LotResult) -> LotAnswer:
    return LotAnswer(
        lot=result.lot,
        cells=result.cells,
        weighed_at=result.weighed_ms,
        started_at=result.started_ms,
        pulled_at=result.pulled_ms,
        cathodes=result.cathodes,
        net_kg=result.net_kg,
        starter_kg=result.starter_kg,
        metal_kg=result.metal_kg,
        theoretical_kg=result.theoretical_kg,
        current_efficiency_pct=known(result.current_efficiency, percent_from_share),
        u_current_efficiency_pct=known(result.u_current_efficiency, percent_from_share),
        thickness_mm=known(result.thickness_m, millimetres_from_metres),
        is_impossible=result.is_impossible,
    )
