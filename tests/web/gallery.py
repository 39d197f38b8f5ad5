"""Every shared part of the pages with made-up data, served the way the real pages are."""

from dataclasses import dataclass
from datetime import date
from types import SimpleNamespace
from typing import Annotated, Any

import numpy as np
from fastapi import FastAPI, Form, Request
from fastapi.responses import JSONResponse, RedirectResponse, Response
from jinja2 import ChoiceLoader, FileSystemLoader
from starlette.middleware.gzip import GZipMiddleware

from server.figures.layout import Axis, Band, Outage, Target, Window
from server.figures.trends import Bars, Line, trend
from server.web import csrf, errors, render
from server.web.headers import HeadersMiddleware
from server.web.i18n import LanguageMiddleware
from tests.source import ROOT

KEY = "a key for the gallery alone, of enough letters"
NONCE = "nonce"
ZONE = "America/Santiago"
DAY_MS = 86_400_000
NOW_MS = 1_772_521_920_000
"""2026-03-03 04:12 -03:00"""
ROUTES = (
    "today", "sections", "worklist", "worklist_record", "lots", "log_shift", "readings_in",
    "calculator", "setup", "people", "own_page", "sign_in",
)  # fmt: skip


@dataclass(frozen=True)
class Flag:
    """As much of a flag as a line of the list shows."""

    cell: int
    kind: str
    tier: str
    evidence: str


FLAGS = [
    (
        Flag(
            40,
            "short",
            "act",
            "11 mV under what its neighbours say since Tuesday's night round. 0.6 to 1.2 kA. "
            "24 kg of copper a day.",
        ),
        "$ 221 a day",
    ),
    (
        Flag(17, "short", "act", "Growing over four rounds; deposit is 5.6 days old."),
        "$ 130 a day",
    ),
    (
        Flag(71, "drift high", "act", "1.6 mV a day for 18 days, steady. Contacts first."),
        "$ 19 a day",
    ),
    (Flag(8, "suspect reading", "look", "Twenty times the last one: a slipped point?"), ""),
]


def figures() -> dict[str, Any]:
    """The five kinds of figure over sixty days, with an outage and a gap."""
    rng = np.random.default_rng(20260303)
    window = Window(NOW_MS - 60 * DAY_MS, NOW_MS, ZONE)
    outages = [Outage(NOW_MS - 41 * DAY_MS, NOW_MS - 39 * DAY_MS)]
    days = np.arange(60, dtype=np.int64) * DAY_MS + window.from_ms
    efficiency = 92.6 + rng.normal(0, 0.35, 60).cumsum() * 0.3
    efficiency[19:21] = np.nan
    energy = 1900 + rng.normal(0, 12, 60)
    energy[19:21] = np.nan
    tonnes = np.where(np.isnan(efficiency), 0.0, 34.5 + rng.normal(0, 1.2, 60))
    hours = np.arange(60 * 24, dtype=np.int64) * 3_600_000 + window.from_ms
    amps = 36.1 + rng.normal(0, 0.15, hours.size)
    amps[19 * 24 : 21 * 24] = 0.0
    amps[900:1000] -= 4.0
    reads = np.arange(180, dtype=np.int64) * 8 * 3_600_000 + window.from_ms
    volts = 2.02 + rng.normal(0, 0.012, 180)
    volts[150:] -= np.linspace(0, 0.25, 30)
    volts[30] = 2.24
    volts[57:63] = np.nan
    return {
        "efficiency": trend(
            window,
            Axis("Current efficiency", "%", 1),
            [Line("efficiency", days, efficiency, u_values=np.full(60, 0.4))],
            targets=[Target(92.0, "target 92.0")],
            outages=outages,
        ),
        "efficiency_days": list(zip(days.tolist(), (efficiency / 100).tolist(), strict=True))[-14:],
        "energy": trend(
            window,
            Axis("Specific energy", "kWh/t", 0),
            [Line("energy", days, energy)],
            targets=[Target(1950.0, "target 1\u2009950")],
            outages=outages,
        ),
        "mass": trend(
            window,
            Axis("Cathode mass", "t", 1, starts_at_zero=True),
            [Bars("metal", days, days + DAY_MS, tonnes)],
            outages=outages,
        ),
        "current": trend(
            window,
            Axis("Current", "kA", 1, starts_at_zero=True),
            [Line("current", hours, amps, shape="steps")],
            outages=outages,
        ),
        "voltage": trend(
            window,
            Axis("Voltage", "V", 3),
            [Line("voltage", reads, volts)],
            band=Band(1.818, 2.222),
            marks_outside=True,
            outages=outages,
        ),
    }


def app() -> FastAPI:
    """The gallery as an application with the middleware of the real one."""
    environment = render.environment()
    own = FileSystemLoader(ROOT / "tests" / "web")
    if not isinstance(environment.loader, ChoiceLoader):
        environment.loader = ChoiceLoader([environment.loader, own])
    gallery = FastAPI(docs_url=None, redoc_url=None, openapi_url=None)
    errors.install(gallery)
    for route in ROUTES:
        gallery.add_api_route(f"/{route}", lambda: Response(), name=route)
    gallery.add_api_route("/gallery", _gallery, name="gallery")
    gallery.add_api_route("/figure.json", lambda: JSONResponse(figures()["voltage"]))
    gallery.add_api_route("/echo", _echo, methods=["POST"])
    gallery.add_api_route("/upload", _upload, methods=["GET", "POST"])
    gallery.add_api_route("/upload/taken", lambda: Response("taken"), name="taken")
    gallery.add_api_route("/sign_in", _echo, methods=["POST"], name="sign_in_send")
    gallery.add_api_route("/sign_out", _echo, methods=["POST"], name="sign_out")
    gallery.mount("/static", render.static_shelf(), name="static")
    gallery.add_middleware(GZipMiddleware, minimum_size=500, compresslevel=5)
    gallery.add_middleware(LanguageMiddleware)
    gallery.add_middleware(HeadersMiddleware)
    return gallery


def framed(request: Request) -> None:
    """Lay the frame that a dependency of the real pages lays."""
    request.state.frame = render.Frame(
        tankhouse="Sample House",
        zone=ZONE,
        now_ms=NOW_MS,
        shift="night",
        person="M. Rojas",
        role="planner",
        form_token=lambda: csrf.form_token(NONCE, KEY),
    )


def _gallery(request: Request) -> Response:
    framed(request)
    period = SimpleNamespace(
        from_day=date(2026, 1, 2),
        to_day=date(2026, 3, 3),
        earliest=date(2025, 11, 1),
        latest=date(2026, 3, 3),
        kept={},
        presets=[("7 days", "?days=7", False), ("60 days", "?days=60", True)],
        earlier_url="?before",
        later_url=None,
    )
    context = {"now_ms": NOW_MS, "period": period, "flags": FLAGS, **figures()}
    return render.page(request, "gallery.html", context)


def _echo(csrf_token: Annotated[str, Form()] = "") -> Response:
    is_ours = csrf.is_ours(csrf_token, NONCE, KEY)
    return Response("ours" if is_ours else "not ours", media_type="text/plain")


async def _upload(request: Request) -> Response:
    framed(request)
    faults = []
    if request.method == "POST":
        async with request.form() as form:
            sheet = form["sheets"]
            assert not isinstance(sheet, str)
            if str(sheet.filename).endswith(".csv"):
                return RedirectResponse("/upload/taken", 303)
            faults = [("sheets", f"{sheet.filename} is no sheet.")]
    status = 422 if faults else 200
    return render.page(request, "gallery_upload.html", {"faults": faults}, status_code=status)
