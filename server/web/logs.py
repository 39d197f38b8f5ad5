"""How the server writes its log: one line for each event, as text or as JSON, without secrets.

No person's name, no token and no query of an address is written; a token that slips into a line
by another way is blacked out.
"""

import io
import logging
import re
import sys
from collections.abc import MutableMapping
from typing import Any

import structlog

from server.settings import Settings
from server.web.security import TOKEN_PREFIX

_TOKEN = re.compile(re.escape(TOKEN_PREFIX) + r"[\w-]{8,}")
_OURS = "ampledger"
_LEVELS = {"debug": 10, "info": 20, "warning": 30, "error": 40}


class _StandardError(io.StringIO):
    """Whatever is standard error at the moment of writing."""

    def write(self, text: str) -> int:
        return sys.stderr.write(text)

    def flush(self) -> None:
        sys.stderr.flush()


def set_up_logs(settings: Settings) -> None:
    """Write our own events and those of the libraries in the one form that the site has chosen."""
    shared: list[structlog.typing.Processor] = [
        structlog.contextvars.merge_contextvars,
        structlog.processors.add_log_level,
        structlog.processors.TimeStamper(fmt="iso", utc=True),
        structlog.processors.format_exc_info,
        without_tokens,
    ]
    is_json = settings.log_format == "json"
    ending: list[structlog.typing.Processor] = [
        structlog.processors.JSONRenderer()
        if is_json
        else structlog.dev.ConsoleRenderer(colors=False)
    ]
    structlog.configure(
        processors=[*shared, *ending],
        wrapper_class=structlog.make_filtering_bound_logger(_LEVELS[settings.log_level]),
        logger_factory=structlog.WriteLoggerFactory(file=_StandardError()),
    )
    handler = logging.StreamHandler(_StandardError())
    handler.set_name(_OURS)
    handler.setFormatter(
        structlog.stdlib.ProcessorFormatter(
            foreign_pre_chain=shared,
            processors=[structlog.stdlib.ProcessorFormatter.remove_processors_meta, *ending],
        )
    )
    root = logging.getLogger()
    root.handlers = [other for other in root.handlers if other.get_name() != _OURS] + [handler]
    root.setLevel(logging.WARNING)
    logging.getLogger("uvicorn").setLevel(max(_LEVELS[settings.log_level], logging.INFO))


def without_tokens(
    _logger: Any, _method: str, event: MutableMapping[str, Any]
) -> MutableMapping[str, Any]:
    """The event with every token in its words blacked out."""
    for name, value in event.items():
        if isinstance(value, str) and TOKEN_PREFIX in value:
            event[name] = _TOKEN.sub(f"{TOKEN_PREFIX}…", value)
    return event
