"""The shared parts of the pages in a real browser: seen, typed at, zoomed, and without script."""

import pytest
from playwright.sync_api import expect

from tests.fixtures.browser import PHONE, accessibility_faults
from tests.web.gallery import app

pytestmark = pytest.mark.browser

WEIGHT_OF_FIRST_VISIT = 700_000
WEIGHT_OF_A_PAGE = 40_000


@pytest.fixture
def gallery(serve):
    """Address of the gallery."""
    return serve(app()).url


def scroll_through(page):
    """Bring every figure near, so that it is drawn."""
    for figure in page.locator("[data-figure]").all():
        figure.scroll_into_view_if_needed()
        expect(figure).to_have_attribute("data-drawn", "")
    page.evaluate("scrollTo({top: 0, behavior: 'instant'})")


def x_range(page, key):
    return page.evaluate(
        "key => document.querySelector(`#${key} [data-figure]`).layout.xaxis.range.map(String)", key
    )


def zoom_in(page):
    box = page.locator("#efficiency .draglayer .nsewdrag").bounding_box()
    y = box["y"] + box["height"] / 2
    page.mouse.move(box["x"] + 200, y)
    page.mouse.down()
    page.mouse.move(box["x"] + 320, y, steps=4)
    page.mouse.up()


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("size", [{"width": 1440, "height": 900}, PHONE])
def test_every_part_is_drawn_and_no_fault_is_found(gallery, open_page, scheme, size):
    page = open_page(viewport=size, color_scheme=scheme)
    page.goto(f"{gallery}/gallery")
    scroll_through(page)

    assert accessibility_faults(page) == []
    assert page.evaluate("document.documentElement.scrollWidth") == size["width"]


def test_a_page_that_says_no_has_no_fault_of_its_own(gallery, open_page):
    page = open_page(fails_to_load=True)
    page.goto(f"{gallery}/nowhere")

    assert accessibility_faults(page) == []


def test_a_phone_gets_fields_large_enough_for_a_thumb(gallery, phone):
    phone.goto(f"{gallery}/gallery")

    for name in ("lot", "section", "weighed_at"):
        assert phone.locator(f"#field-{name}").bounding_box()["height"] >= 44
    assert phone.get_by_role("button", name="Log the lot").bounding_box()["height"] >= 44


def test_a_first_visit_and_the_next_stay_within_their_weight(gallery, page):
    sizes = {}
    page.on("response", lambda found: sizes.update({found.url: found.request.sizes()}))
    page.goto(f"{gallery}/gallery")
    scroll_through(page)
    page.wait_for_load_state("networkidle")

    bodies = {url: size["responseBodySize"] for url, size in sizes.items()}

    assert sum(bodies.values()) <= WEIGHT_OF_FIRST_VISIT
    fresh = {url: size for url, size in bodies.items() if "/static/" not in url}
    assert sum(fresh.values()) <= WEIGHT_OF_A_PAGE, fresh


def test_lines_take_the_colour_of_the_scheme(gallery, open_page):
    page = open_page(color_scheme="light")
    page.goto(f"{gallery}/gallery")
    scroll_through(page)
    line = page.locator("#energy .scatterlayer .js-line").last
    expect(line).to_have_css("stroke", "rgb(77, 83, 87)")

    page.emulate_media(color_scheme="dark")

    expect(line).to_have_css("stroke", "rgb(195, 199, 201)")


def test_zooming_in_offers_the_way_back(gallery, page):
    page.goto(f"{gallery}/gallery")
    scroll_through(page)
    whole = x_range(page, "efficiency")
    back = page.get_by_role("button", name="Show the whole period again")
    expect(back).to_have_count(0)

    zoom_in(page)
    back.click()

    assert x_range(page, "efficiency") == whole
    expect(back).to_have_count(0)


def test_what_was_zoomed_into_stays_when_the_window_changes(gallery, page):
    page.goto(f"{gallery}/gallery")
    scroll_through(page)
    zoom_in(page)
    zoomed = x_range(page, "efficiency")

    page.set_viewport_size({"width": 900, "height": 800})

    expect(page.locator("#efficiency .main-svg").first).to_have_attribute("width", "806")
    assert x_range(page, "efficiency") == zoomed


def test_the_value_is_read_off_where_the_pointer_is(gallery, page):
    page.goto(f"{gallery}/gallery")
    scroll_through(page)

    page.locator("#energy .draglayer .nsewdrag").hover(position={"x": 120, "y": 60})

    expect(page.locator("#energy .hoverlayer")).to_contain_text("kWh/t")


def test_the_table_says_what_the_figure_shows(gallery, page):
    page.goto(f"{gallery}/gallery")

    page.get_by_text("Show as a table").click()

    table = page.get_by_role("table", name="Current efficiency times are local, America/Santiago")
    expect(table.get_by_role("row")).to_have_count(15)


def test_a_figure_that_cannot_be_fetched_says_so(gallery, open_page):
    page = open_page(fails_to_load=True)
    page.route("**/figure.json", lambda route: route.fulfill(status=503))
    page.goto(f"{gallery}/gallery")

    page.locator("#fetched").scroll_into_view_if_needed()

    expect(page.locator("#fetched .failed")).to_be_visible()


def test_without_script_everything_can_be_read_and_sent(gallery, open_page):
    page = open_page(fails_to_load=True, java_script_enabled=False)
    page.goto(f"{gallery}/gallery")
    page.get_by_text("Show as a table").click()
    expect(page.locator("#efficiency tbody tr").first).to_be_visible()
    page.locator("#field-password").fill("x")
    page.locator("#field-sheets").set_input_files(__file__)

    page.get_by_role("button", name="Log the lot").click()

    expect(page.locator("body")).to_have_text("ours")


def test_a_form_that_asks_once_more_is_sent_after_yes_alone(gallery, open_page):
    page = open_page(fails_to_load=True)
    page.goto(f"{gallery}/gallery")
    page.locator("#field-password").fill("x")
    page.locator("#field-sheets").set_input_files(__file__)

    page.get_by_role("button", name="Log the lot").click()
    expect(page.get_by_role("dialog", name="Weigh this lot in?")).to_be_visible()
    expect(page.locator("dialog").get_by_role("button", name="Leave it")).to_be_focused()
    page.keyboard.press("Enter")
    expect(page.locator("dialog")).to_be_hidden()
    assert page.url.endswith("/gallery")

    page.get_by_role("button", name="Log the lot").click()
    page.get_by_role("button", name="Yes").click()
    expect(page.locator("body")).to_have_text("ours")


def test_the_keyboard_reaches_the_content_first(gallery, page):
    page.goto(f"{gallery}/gallery")

    page.keyboard.press("Tab")
    expect(page.get_by_role("link", name="Skip to the content")).to_be_focused()
    page.keyboard.press("Enter")

    assert page.evaluate("document.activeElement.id") == "content"


def test_the_clock_in_the_header_goes_on(gallery, page):
    page.clock.install(time=1_800_000_000)
    page.goto(f"{gallery}/gallery")
    clock = page.locator("[data-clock]")
    expect(clock).to_have_text("04:12")

    page.clock.run_for("03:00")

    expect(clock).to_have_text("04:15")


def test_an_upload_shows_how_far_it_is_and_goes_where_it_is_sent(gallery, open_page):
    page = open_page(fails_to_load=True)
    page.goto(f"{gallery}/upload")
    page.locator("#field-sheets").set_input_files(
        files=[{"name": "volts.csv", "mimeType": "text/csv", "buffer": b"1" * 2_000_000}]
    )

    page.get_by_role("button", name="Send").click()

    page.wait_for_url("**/upload/taken")


def test_an_upload_with_a_fault_shows_the_page_that_came_back(gallery, open_page):
    page = open_page(fails_to_load=True)
    page.goto(f"{gallery}/upload")
    page.locator("#field-sheets").set_input_files(
        files=[{"name": "volts.txt", "mimeType": "text/plain", "buffer": b"no"}]
    )

    page.get_by_role("button", name="Send").click()

    expect(page.get_by_role("alert")).to_contain_text("volts.txt is no sheet")
    expect(page.locator("main")).to_be_focused()
