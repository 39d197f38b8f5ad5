"""Two made-up tankhouses, each made once: one whose truth is known, one to look at."""

import pytest

from server.demo.house import House, demo_house, truth_house

# A Tuesday at 13:17 UTC, with seconds and milliseconds that fit no grid.
NOW_MS = 1_790_687_841_250


@pytest.fixture(scope="session")
def known() -> House:
    """Sixty days of three sections under a clean scale."""
    return truth_house()


@pytest.fixture(scope="session")
def demo() -> House:
    """The tankhouse of `ampledger demo`."""
    return demo_house(NOW_MS)
