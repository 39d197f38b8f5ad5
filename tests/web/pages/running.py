"""A small section that has run for eight days, for the pages that show it."""

import html
import re
from typing import Any

import httpx
from sqlalchemy.orm import Session

from server.storage.plant import SectionPlan
from tests.factories import (
    DAY_MS,
    HOUR_MS,
    NOW_MS,
    keep_books,
    make_current,
    make_delivery,
    make_lot,
    make_readings,
    make_section,
)

RUN_MS = 8 * DAY_MS + HOUR_MS
NET_KG = 6669.0
"""What 36 kA plate in seven days at 93.0 %."""


def running_section(
    session: Session,
    *,
    low: tuple[int, ...] = (),
    net_kg: float = NET_KG,
    last_ms: int = NOW_MS,
    **given: Any,
) -> SectionPlan:
    """EW1: hourly current of 36 kA, three rounds a day, one crop of each of its first two cells.

    The cells in `low` read far under the limit in the last two rounds.
    """
    section = make_section(session, **{"name": "EW1"} | given)
    hours = range(last_ms - RUN_MS, last_ms + 1, HOUR_MS)
    make_current(session, section.id, hours, [36_000.0] * len(hours))
    delivery = make_delivery(session, source="round.csv", sender="ana")
    rounds = range(last_ms - RUN_MS + 6 * HOUR_MS, last_ms, 8 * HOUR_MS)
    for number, cell_id in enumerate(section.cell_ids, start=1):
        level = 2.03 + 0.004 * (number % 5 - 2)
        volts = [level + 0.001 * (place % 3 - 1) for place in range(len(rounds))]
        if number in low:
            volts[-2:] = [1.80, 1.79]
        make_readings(session, cell_id, rounds, volts, delivery=delivery)
    for cell in ("1", "2"):
        pulled_ms = last_ms - DAY_MS - HOUR_MS
        make_lot(
            session,
            section.id,
            name=f"L-{cell}",
            cells=cell,
            pulled_ms=pulled_ms,
            started_ms=pulled_ms - 7 * DAY_MS,
            net_kg=net_kg,
        )
    keep_books(session)
    return section


def words_of(page: httpx.Response) -> str:
    """The text of a page: no markup, plain spaces, one between any two words."""
    text = html.unescape(re.sub(r"<[^>]+>", " ", page.text))
    return re.sub(r"\s+", " ", text).strip()


def rows_of(page: httpx.Response, caption: str) -> list[list[str]]:
    """The body of the table whose caption begins with these words, cell by cell."""
    tables = re.findall(r"<table.*?</table>", page.text, re.DOTALL)
    table = next(t for t in tables if re.search(rf"<caption[^>]*>\s*{re.escape(caption)}", t))
    body = re.search(r"<tbody>(.*?)</tbody>", table, re.DOTALL)
    assert body
    return [
        [
            re.sub(r"\s+", " ", html.unescape(re.sub(r"<[^>]+>", " ", cell))).strip()
            for cell in re.findall(r"<t[hd][^>]*>(.*?)</t[hd]>", row, re.DOTALL)
        ]
        for row in re.findall(r"<tr>(.*?)</tr>", body[1], re.DOTALL)
    ]
