"""How open pages are told: at once, again after a change, with a beat between, and to an end."""

import asyncio
import threading
from contextlib import aclosing

import pytest

from server.web import live as live_module
from server.web.live import Live, live_token
from tests.factories import make_delivery, make_section

CHANGED = b"event: changed\ndata: "


@pytest.fixture
def live(database, session, monkeypatch):
    monkeypatch.setattr(live_module, "LOOK_EVERY_S", 0.05)
    make_section(session)
    live = Live(database)
    yield live
    live.stop()


async def next_change(events) -> bytes:
    async with asyncio.timeout(10):
        async for said in events:
            if said.startswith(CHANGED):
                return said.removeprefix(CHANGED).strip()
    raise AssertionError("the stream ended")


def test_a_listener_is_told_at_once_what_is_newest(live, session):
    async def listen():
        async with aclosing(live.events()) as events:
            return await next_change(events)

    assert asyncio.run(listen()).decode() == live_token(session)


def test_everyone_who_listens_is_told_of_a_change_and_once(live, session):
    async def listen():
        async with aclosing(live.events()) as one, aclosing(live.events()) as other:
            first = [await next_change(one), await next_change(other)]
            await asyncio.to_thread(make_delivery, session)
            second = [await next_change(one), await next_change(other)]
            looks = [t for t in threading.enumerate() if t.name == "live"]
            return first, second, len(looks)

    first, second, looks = asyncio.run(listen())

    assert first[0] == first[1] != second[0] == second[1]
    assert looks == 1


def test_a_quiet_line_is_kept_alive_by_a_beat(live, monkeypatch):
    monkeypatch.setattr(live_module, "BEAT_EVERY_S", 0.05)

    async def listen():
        async with aclosing(live.events()) as events:
            await next_change(events)
            return await anext(events)

    assert asyncio.run(listen()) == b": still here\n\n"


def test_a_stream_ends_after_a_time_so_that_it_is_asked_anew_who_listens(live, monkeypatch):
    monkeypatch.setattr(live_module, "LASTS_S", 0.1)
    monkeypatch.setattr(live_module, "BEAT_EVERY_S", 0.05)

    async def listen():
        return [said async for said in live.events()]

    assert asyncio.run(listen())[0] == b"retry: 5000\n\n"


def test_nobody_looks_once_the_last_listener_has_left(live):
    async def listen():
        async with aclosing(live.events()) as events:
            await next_change(events)

    asyncio.run(listen())

    for thread in threading.enumerate():
        if thread.name == "live":
            thread.join(5)
    assert live.listeners == 0
    assert "live" not in {thread.name for thread in threading.enumerate()}


def test_at_the_end_every_stream_ends(live):
    async def listen():
        events = live.events()
        await next_change(events)
        await asyncio.to_thread(live.stop)
        return [said async for said in events]

    assert asyncio.run(listen()) == []


def test_a_listener_holds_no_connection_to_the_database(live, database, session):
    session.close()

    async def listen():
        async with aclosing(live.events()) as events:
            await next_change(events)
            for _look in range(40):
                if database.engine.pool.checkedout() == 0:
                    return True
                await asyncio.sleep(0.01)
            return False

    assert asyncio.run(listen())


def test_while_the_books_cannot_be_reached_nothing_is_told_and_nothing_breaks(
    live, database, session, monkeypatch
):
    async def listen():
        async with aclosing(live.events()) as events:
            await next_change(events)
            with monkeypatch.context() as broken:
                broken.setattr(database, "read", _unreachable)
                await asyncio.sleep(0.2)
            await asyncio.to_thread(make_delivery, session)
            return await next_change(events)

    assert asyncio.run(listen()).decode() == live_token(session)


def _unreachable():
    raise OSError("the disk is gone")
