import pytest

from server.figures.trend_line import HEIGHT, WIDTH, trend_line


def numbers(points):
    return [tuple(float(part) for part in pair.split(",")) for pair in points.split()]


def test_a_fall_is_drawn_from_the_top_to_the_bottom():
    line = trend_line([0, 50, 100], [2.03, 2.03, 1.87], None)

    assert numbers(line.points) == [(4.0, 4.0), (WIDTH / 2, 4.0), (WIDTH - 4.0, HEIGHT - 4.0)]
    assert (line.last_x, line.last_y) == (WIDTH - 4.0, HEIGHT - 4.0)
    assert (line.low_volts, line.high_volts) == (1.87, 2.03)


def test_what_was_expected_is_in_the_drawing():
    line = trend_line([0, 100], [1.87, 1.87], 2.03)

    assert line.expected_y == pytest.approx(4.0)
    assert line.last_y == pytest.approx(HEIGHT - 4.0)


def test_noise_does_not_fill_the_drawing():
    heights = [y for _, y in numbers(trend_line([0, 1, 2], [2.030, 2.032, 2.031], None).points)]

    assert max(heights) - min(heights) < 4


@pytest.mark.parametrize("count", [0, 1])
def test_one_reading_is_no_line(count):
    assert trend_line([1] * count, [2.0] * count, 2.0) is None
