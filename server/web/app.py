"""The application: its routes, what stands around them, and its errors."""

import importlib
import pkgutil
from collections.abc import AsyncIterator, Iterator
from contextlib import asynccontextmanager
from types import ModuleType
from typing import Any

from fastapi import APIRouter, FastAPI
from fastapi.routing import APIRoute
from starlette.middleware.gzip import GZipMiddleware

from server import __version__
from server import settings as site_settings
from server.settings import Settings
from server.storage.database import Database
from server.web import api, errors, pages, refusals
from server.web.api.openapi import DOCUMENT_PATH, document
from server.web.api.resource import PREFIX
from server.web.background import Background
from server.web.body_limit import BodyLimitMiddleware
from server.web.dependencies import MOST_FIELDS, MOST_FILES
from server.web.headers import HeadersMiddleware
from server.web.i18n import LanguageMiddleware
from server.web.logs import set_up_logs
from server.web.render import static_shelf
from server.web.request_log import RequestLogMiddleware, UnforeseenMiddleware
from server.web.site import Site, site

MOST_SENT_MIB = 8
"""Of JSON or a form without files: 20,000 readings and some more."""

TAKE_FILES = (f"{PREFIX}/imports", "/readings-in")
"""Beginnings of the paths that take files."""


def create_app(settings: Settings | None = None, database: Database | None = None) -> FastAPI:
    """The application on a site's settings and books.

    A database that is given is left open at the end; its tables must be there already.
    """
    here = site(settings or site_settings.settings(), database)
    app = FastAPI(
        title="Ampledger",
        version=__version__,
        openapi_url=DOCUMENT_PATH,
        docs_url=None,
        redoc_url=None,
        lifespan=_life(here, closes_database=database is None),
        generate_unique_id_function=_operation_id,
        form_limits={"max_fields": MOST_FIELDS, "max_files": MOST_FILES},
    )
    app.state.site = here
    # FastAPI documents this way of replacing its document; a type checker sees a method.
    app.openapi = lambda: document(app)  # type: ignore[method-assign]
    for router in (*_routers(api), *_routers(pages)):
        app.include_router(router)
    app.mount("/static", static_shelf(), name="static")
    errors.install(app)
    refusals.install(app)
    _surround(app, here)
    return app


def _life(here: Site, closes_database: bool) -> Any:
    @asynccontextmanager
    async def life(_app: FastAPI) -> AsyncIterator[None]:
        set_up_logs(here.settings)
        background = Background(here)
        background.start()
        yield
        here.live.stop()
        background.stop()
        if closes_database:
            here.database.close()

    return life


def _routers(package: ModuleType) -> Iterator[APIRouter]:
    """The router of each module of a package that has one, in the order of their names."""
    for found in pkgutil.iter_modules(package.__path__, f"{package.__name__}."):
        router = getattr(importlib.import_module(found.name), "router", None)
        if isinstance(router, APIRouter):
            yield router


def _operation_id(route: APIRoute) -> str:
    return route.name


def _surround(app: FastAPI, here: Site) -> None:
    """Put what every request passes around the routes, the innermost first."""
    upload_mib = here.settings.upload_max_mib + 1  # The form around the file takes some, too.
    app.add_middleware(UnforeseenMiddleware)
    app.add_middleware(
        BodyLimitMiddleware,
        most_mib=MOST_SENT_MIB,
        larger_at=dict.fromkeys(TAKE_FILES, upload_mib),
    )
    app.add_middleware(GZipMiddleware, minimum_size=500, compresslevel=5)
    app.add_middleware(LanguageMiddleware, otherwise=here.settings.language)
    app.add_middleware(HeadersMiddleware)
    app.add_middleware(RequestLogMiddleware, metrics=here.metrics)
