"""The one Jinja environment, and what every page is given besides its own data."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from jinja2 import Environment, FileSystemLoader, StrictUndefined, pass_context
from jinja2.runtime import Context
from markupsafe import Markup
from starlette.datastructures import URL
from starlette.requests import Request
from starlette.responses import HTMLResponse
from starlette.templating import Jinja2Templates

from server.figures.encode import as_json
from server.settings import STATIC, TEMPLATES
from server.storage.people import ROLES
from server.web import filters, i18n
from server.web.static_files import StaticShelf


@dataclass(frozen=True)
class Frame:
    """What stands around every page: the tankhouse, the time there, and who is signed in."""

    tankhouse: str = ""
    zone: str = "UTC"
    now_ms: int | None = None
    shift: str = ""
    person: str = ""
    role: str = ""
    form_token: Callable[[], str] = str
    """Gives a token for one form; each call under another mask."""

    def may(self, role: str) -> bool:
        """Whether the person may do what takes that role: what they may not is not offered."""
        return self.role in ROLES and ROLES.index(self.role) >= ROLES.index(role)


def page(
    request: Request,
    template: str,
    context: Mapping[str, Any] | None = None,
    *,
    status_code: int = 200,
    headers: Mapping[str, str] | None = None,
) -> HTMLResponse:
    """A page from its template, in the language of the request and the zone of the tankhouse.

    What stands around it is taken from `request.state.frame`, where a dependency has laid it.
    """
    frame = frame_of(request)
    with i18n.speaking(zone=frame.zone):
        return templates().TemplateResponse(
            request,
            template,
            {**(context or {}), "frame": frame},
            status_code=status_code,
            headers=headers,
        )


def frame_of(request: Request) -> Frame:
    """What stands around this page; an empty frame where nobody is known yet."""
    frame = getattr(request.state, "frame", None)
    return frame if isinstance(frame, Frame) else Frame()


@lru_cache
def static_shelf() -> StaticShelf:
    """The files of `static/`, read once."""
    return StaticShelf(STATIC)


@lru_cache
def templates() -> Jinja2Templates:
    """Starlette's way to a template response, on our environment."""
    return Jinja2Templates(env=environment())


@lru_cache
def environment() -> Environment:
    """The one environment: every value escaped, every name known, every text translated."""
    env = Environment(
        loader=FileSystemLoader(TEMPLATES),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        auto_reload=False,
        extensions=["jinja2.ext.i18n"],
    )
    # Jinja2 adds this method when the extension is loaded; its stubs do not know.
    env.install_gettext_callables(  # type: ignore[attr-defined]
        i18n.gettext,
        i18n.ngettext,
        newstyle=True,
        pgettext=i18n.pgettext,
        npgettext=i18n.npgettext,
    )
    env.filters.update(filters.FILTERS)
    env.filters["figure_json"] = figure_json
    env.globals.update(
        url_for=url_for,
        static_url=static_shelf().url,
        language=lambda: i18n.manner().language,
        zone=lambda: i18n.manner().zone,
        plotly_locale=lambda: i18n.plotly_locale(i18n.manner().language),
        mark=filters.MARKS.__getitem__,
        no_data=filters.no_data,
    )
    return env


@pass_context
def url_for(context: Context, name: str, /, **path_params: Any) -> URL:
    """Address of a route on this server, without its host: right behind any proxy."""
    return URL(context["request"].url_for(name, **path_params).path)


def figure_json(figure: dict[str, Any]) -> Markup:
    """A figure as JSON for a script element; nothing in it can end the element."""
    return Markup(as_json(figure))  # noqa: S704 - as_json escapes <, > and &
