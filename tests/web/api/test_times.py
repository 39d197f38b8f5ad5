"""Moments as the API writes them."""

import numpy as np

from server.web.api.times import all_written, written


def test_a_moment_is_utc_and_ends_in_z():
    assert written(1_709_640_000_000) == "2024-03-05T12:00:00Z"


def test_milliseconds_are_written_where_there_are_some():
    assert written(1_709_640_000_007) == "2024-03-05T12:00:00.007Z"


def test_many_moments_are_written_alike():
    assert all_written(np.array([0, 250])) == [
        "1970-01-01T00:00:00.000Z",
        "1970-01-01T00:00:00.250Z",
    ]


def test_no_moments_are_no_texts():
    assert all_written(np.empty(0, np.int64)) == []
