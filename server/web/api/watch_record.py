"""How often the watch was right, and how much it asks of whoever works its list."""

from server.science.units import percent_from_share
from server.watch.life import DAY_MS
from server.watch.load import LEAST_DAYS, AlarmLoad, LoadFigure, alarm_load
from server.watch.record import LATELY_MS, Bin, Counted, Rightness, watch_record
from server.web.api.parameters import FromIfAny, ToIfAny
from server.web.api.resource import resource
from server.web.api.schemas_flags import (
    CalibrationAnswer,
    CountedAnswer,
    LoadAnswer,
    LoadFigureAnswer,
    RightAnswer,
    TargetAnswer,
    WatchRecordAnswer,
)
from server.web.dependencies import DbSession, Now, ThisHouse, requires
from server.web.moments import moment_of, span_checked

router = resource("flags")


@router.get(
    "/watch/record",
    summary="The watch's own record, and the load it makes",
    dependencies=[requires("reader")],
)
def get_watch_record(
    db: DbSession,
    house: ThisHouse,
    now_ms: Now,
    from_time: FromIfAny = None,
    to_time: ToIfAny = None,
) -> WatchRecordAnswer:
    """Answer hits and false calls by kind and tier, and the alarm load over a period.

    The period is that of the load, by default the thirty days before `to`, and `to` is now; what
    was right is told of all flags raised before `to`, and of the last ninety days.
    """
    to_ms = moment_of(to_time, house, "query.to") if to_time else now_ms
    first_ms = to_ms - LEAST_DAYS * DAY_MS
    from_ms = moment_of(from_time, house, "query.from") if from_time else first_ms
    span_checked(from_ms, to_ms, to_time or "")
    record = watch_record(db, to_ms)
    return WatchRecordAnswer(
        at=to_ms,
        lately_days=LATELY_MS // DAY_MS,
        lately=[_counted(line) for line in record.lately],
        overall=[_counted(line) for line in record.overall],
        calibration=None
        if record.calibration is None
        else [_calibration(part) for part in record.calibration],
        load=_load(alarm_load(db, from_ms, to_ms)),
    )


def _right(right: Rightness | None) -> RightAnswer | None:
    if right is None:
        return None
    low, high = percent_from_share(right.low), percent_from_share(right.high)
    return RightAnswer(
        pct=float(percent_from_share(right.share)), low_pct=float(low), high_pct=float(high)
    )


def _counted(line: Counted) -> CountedAnswer:
    return CountedAnswer(
        kind=line.kind,
        tier=line.tier,
        raised=line.raised,
        hits=line.hits,
        false_calls=line.false_calls,
        something_else=line.something_else,
        not_looked_at=line.not_looked_at,
        right=_right(line.right),
    )


def _calibration(part: Bin) -> CalibrationAnswer:
    stated = None if part.stated is None else float(percent_from_share(part.stated))
    return CalibrationAnswer(
        from_=part.low,
        to=part.high,
        flags=part.flags,
        hits=part.hits,
        stated_pct=stated,
        right=_right(part.right),
    )


def _load(load: AlarmLoad) -> LoadAnswer:
    return LoadAnswer(
        from_=load.from_ms,
        to=load.to_ms,
        is_long_enough=load.is_long_enough,
        raised=load.raised,
        figures=[_figure(figure) for figure in load.figures],
    )


def _figure(figure: LoadFigure) -> LoadFigureAnswer:
    target = figure.target
    return LoadFigureAnswer(
        name=figure.name,
        value=figure.value,
        target=None
        if target is None
        else TargetAnswer(acceptable=target.acceptable, most=target.most, status=target.status),
    )
