"""Pictures of every page of the demo, at a desk and on a phone; run by `make pictures`.

They are for looking at before a change is sent in, and lie in build/pictures/. The picture of
README.md is taken anew with `make pictures README=1`.
"""

import argparse
import os
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from playwright.sync_api import Browser, sync_playwright

from server import clock
from server.settings import Settings
from server.storage.database import Database
from server.storage.people import person_named
from server.storage.plant import house
from server.web.app import create_app
from server.web.sign_in import SESSION_COOKIE, cookie_text, signed_in
from tests.factories import KEY
from tests.fixtures.browser import DESK, FLAGS, PHONE, chromium_path
from tests.fixtures.served import LiveServer
from tests.source import ROOT

PERSON = "ines"
README_PICTURE = ROOT / "tests" / "pictures" / "section.png"
PLAIN_PAGES = (
    "/", "/sections", "/lots", "/log-shift", "/readings-in", "/readings-in/held",
    "/readings-in/suspects", "/setup", "/people", "/me", "/api", "/calculator",
    "/calculator/cell-voltage", "/calculator/short-current", "/worklist", "/worklist/record",
)  # fmt: skip


@contextmanager
def demo_house() -> Iterator[tuple[LiveServer, dict[str, Any], list[str]]]:
    """The demo, served: where, the cookie of its superintendent, and its pages."""
    with tempfile.TemporaryDirectory(prefix="ampledger-pictures-") as folder:
        subprocess.run(
            [sys.executable, "-m", "server", "demo", "--no-serve"],
            cwd=folder,
            env=os.environ | {"PYTHONPATH": str(ROOT)},
            check=True,
        )
        url = f"sqlite:///{Path(folder) / 'ampledger-demo.db'}"
        database = Database(url)
        with database.read() as session:
            sections = [section.name for section in house(session).sections]
            person = person_named(session, PERSON)
            assert person is not None
            who = signed_in(person.id, person.session_epoch, clock.now_ms())
        server = LiveServer(create_app(Settings(database_url=url, secret_key=KEY), database))
        cookie = {"name": SESSION_COOKIE, "value": cookie_text(who, KEY), "url": server.url}
        of_sections = [f"/sections/{name}" for name in sections]
        try:
            yield server, cookie, [*PLAIN_PAGES, *of_sections, f"{of_sections[0]}/cells/17"]
        finally:
            server.stop()
            database.close()


def picture(
    browser: Browser, address: str, cookie: dict[str, Any], path: Path, **options: Any
) -> None:
    """Take one picture, of the whole page unless only what a screen shows is wanted."""
    whole = options.pop("whole", True)
    context = browser.new_context(service_workers="block", locale="en-GB", **options)
    context.add_cookies([cookie])
    page = context.new_page()
    # What an open page listens to is never idle.
    page.route("**/events", lambda route: route.abort())
    page.goto(address, wait_until="networkidle")
    page.screenshot(path=path, full_page=whole)
    context.close()


def main() -> None:
    """Take the pictures."""
    parser = argparse.ArgumentParser(prog="python -m tests.pictures")
    parser.add_argument("--readme", action="store_true", help="only the picture of README.md")
    only_readme = parser.parse_args().readme
    folder = ROOT / "build" / "pictures"
    with sync_playwright() as playwright, demo_house() as (server, cookie, pages):
        browser = playwright.chromium.launch(executable_path=chromium_path(), args=FLAGS)
        if only_readme:
            address = server.url + next(page for page in pages if page.startswith("/sections/"))
            desk = {"width": 1440, "height": 1000}
            picture(browser, address, cookie, README_PICTURE, viewport=desk, whole=False)
            return
        folder.mkdir(parents=True, exist_ok=True)
        for page in pages:
            name = page.strip("/").replace("/", "-").replace(" ", "-").lower() or "today"
            picture(browser, server.url + page, cookie, folder / f"{name}-desk.png", viewport=DESK)
            picture(
                *(browser, server.url + page, cookie, folder / f"{name}-phone.png"),
                viewport=PHONE,
                has_touch=True,
                is_mobile=True,
            )
    sys.stdout.write(f"{2 * len(pages)} pictures in {folder.relative_to(ROOT)}/\n")


if __name__ == "__main__":
    main()
