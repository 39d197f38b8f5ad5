import gzip
import json
import re

import brotli
import httpx
import pytest
from plotly.offline import get_plotlyjs
from starlette.applications import Starlette
from starlette.routing import Mount

from server.settings import STATIC
from server.web.static_files import StaticShelf

LONG = "body { color: black; }\n" * 100


@pytest.fixture
def folder(tmp_path):
    """A style sheet, two scripts of which one has compressed twins, and a hidden file."""
    for name, text in {"css/a.css": LONG, "js/a.js": "a()", "vendor/b.js": LONG}.items():
        path = tmp_path / name
        path.parent.mkdir(exist_ok=True)
        path.write_text(text, encoding="utf-8")
    (tmp_path / "vendor/b.js.br").write_bytes(brotli.compress(LONG.encode()))
    (tmp_path / "vendor/b.js.gz").write_bytes(gzip.compress(LONG.encode()))
    (tmp_path / ".secret").write_text("no", encoding="utf-8")
    return tmp_path


@pytest.fixture
def shelf(folder):
    return StaticShelf(folder)


@pytest.fixture
def client(shelf, client_for) -> httpx.Client:
    return client_for(Starlette(routes=[Mount("/static", shelf)]))


def test_a_file_under_its_hash_is_kept_for_good(shelf, client):
    found = client.get(shelf.url("css/a.css"))

    assert found.text == LONG
    assert found.headers["content-type"] == "text/css; charset=utf-8"
    assert "immutable" in found.headers["cache-control"]


def test_scripts_beside_each_other_share_their_hash(shelf, folder):
    (folder / "js/b.js").write_text("b()", encoding="utf-8")

    assert re.fullmatch(r"/static/[0-9a-f]{10}/js/a\.js", shelf.url("js/a.js"))
    assert shelf.url("js/a.js").rpartition("/")[0] == shelf.url("js/b.js").rpartition("/")[0]


def test_another_content_has_another_address(shelf, folder):
    script, sheet = shelf.url("js/a.js"), shelf.url("css/a.css")
    (folder / "js/a.js").write_text("b()", encoding="utf-8")

    changed = StaticShelf(folder)

    assert changed.url("js/a.js") != script
    assert changed.url("css/a.css") == sheet


def test_without_its_hash_a_file_is_asked_for_anew(client):
    assert client.get("/static/css/a.css").headers["cache-control"] == "public, no-cache"


def test_an_address_of_yesterday_gives_today_s_file_for_now(client):
    found = client.get("/static/0123456789/css/a.css")

    assert found.status_code == 200
    assert "immutable" not in found.headers["cache-control"]


def test_what_the_browser_has_is_not_sent_again(shelf, client):
    url = shelf.url("css/a.css")
    etag = client.get(url).headers["etag"]

    again = client.get(url, headers={"if-none-match": f'"other", W/{etag}'})

    assert (again.status_code, again.content) == (304, b"")


@pytest.mark.parametrize(
    ("path", "accepted", "coding"),
    [
        ("vendor/b.js", "gzip, deflate, br", "br"),
        ("vendor/b.js", "gzip", "gzip"),
        ("vendor/b.js", "br;q=0, gzip;q=0.5", "gzip"),
        ("vendor/b.js", "identity", None),
        ("css/a.css", "gzip, br", "gzip"),
        ("js/a.js", "gzip, br", None),
    ],
)
def test_files_travel_compressed_as_the_browser_can_take_them(
    shelf, client, path, accepted, coding
):
    found = client.get(shelf.url(path), headers={"accept-encoding": accepted})

    assert found.headers.get("content-encoding") == coding
    assert found.headers["vary"] == "Accept-Encoding"
    assert found.text == ("a()" if path == "js/a.js" else LONG)


def test_compressed_twins_and_hidden_files_are_no_files_of_their_own(client):
    for path in ("vendor/b.js.br", ".secret", "css", "../secret", "css/none.css", ""):
        assert client.get(f"/static/{path}").status_code == 404


def test_nothing_can_be_written(client):
    assert client.post("/static/css/a.css").status_code == 405


def test_the_head_alone_has_no_body(client):
    found = client.head("/static/css/a.css")

    assert (found.status_code, found.content) == (200, b"")


def test_a_file_that_is_not_there_has_no_address(shelf):
    with pytest.raises(LookupError, match=r"none\.css"):
        shelf.url("css/none.css")


def test_plotly_draws_what_its_python_package_describes():
    head = (STATIC / "vendor/plotly-cartesian.min.js").read_text(encoding="utf-8")[:400]
    bundle = get_plotlyjs()[:400]
    version = re.compile(r"plotly\.js (?:\(cartesian - minified\) )?v([\d.]+)")

    assert version.search(head).group(1) == version.search(bundle).group(1)


def test_the_vendor_folder_says_the_version_it_holds():
    head = (STATIC / "vendor/plotly-cartesian.min.js").read_text(encoding="utf-8")[:400]
    about = (STATIC / "vendor/README.md").read_text(encoding="utf-8")

    assert re.search(r"v([\d.]+)", head).group(1) in about


def test_the_compressed_twins_are_the_same_file():
    path = STATIC / "vendor/plotly-cartesian.min.js"
    content = path.read_bytes()

    assert brotli.decompress(path.with_name(path.name + ".br").read_bytes()) == content
    assert gzip.decompress(path.with_name(path.name + ".gz").read_bytes()) == content


def test_a_first_visit_is_light_even_without_brotli():
    shelf = StaticShelf(STATIC)

    sizes = {
        name: len(kept.compressed.get("gzip", kept.content))
        for name, kept in shelf._files.items()
        if not name.endswith((".md", ".txt"))
    }

    assert sum(sizes.values()) < 640_000, json.dumps(sizes, indent=1)
