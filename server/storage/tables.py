"""Every table in one place, for migrations and tests to compare with."""

from server.storage import (
    deliveries,
    derived,
    flag_acts,
    flags,
    people,
    plant,
    readings,
    records,
    short_days,
    watch_rows,
)
from server.storage.base import Base

METADATA = Base.metadata
MODULES = (
    deliveries,
    derived,
    flag_acts,
    flags,
    people,
    plant,
    readings,
    records,
    short_days,
    watch_rows,
)
