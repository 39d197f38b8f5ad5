"""The browser of the tests sees what a person's browser would, and says what is wrong."""

import asyncio

import pytest

from tests.fixtures.browser import accessibility_faults

PLAIN = (
    "<!doctype html><html lang='en'>"
    "<head><title>Round</title><link rel='icon' href='data:,'></head>"
    "<body><main><h1>Round</h1>%s</main></body></html>"
)


@pytest.mark.browser
def test_a_faultless_page_has_no_accessibility_fault(page):
    page.set_content(PLAIN % "<p>All cells read.</p>")

    assert accessibility_faults(page) == []


@pytest.mark.browser
def test_a_picture_without_words_is_an_accessibility_fault(page):
    page.set_content(PLAIN % "<img src='data:image/gif;base64,R0lGODlhAQABAAAAACw='>")

    assert any(fault.startswith("image-alt") for fault in accessibility_faults(page))


@pytest.mark.browser
def test_a_phone_is_as_wide_as_a_phone(phone):
    phone.set_content(
        PLAIN.replace("<head>", "<head><meta name='viewport' content='width=device-width'>") % ""
    )

    assert phone.evaluate("innerWidth") == 390


def test_a_test_without_a_browser_may_run_a_loop_of_its_own():
    async def answer():
        return 42

    assert asyncio.run(answer()) == 42
