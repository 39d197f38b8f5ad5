"""Style sheets, scripts and pictures, served from memory under addresses that never change meaning.

An address holds a hash of the content of its folder (`/static/4f0c1a2b/css/parts.css`), so that a
browser keeps what it has for a year and fetches anew only what is new. Imports between the scripts
are relative and stay within the same hash. Files that lie beside a `.br` or `.gz` twin are sent
compressed by it; other text is compressed once, when it is first read.
"""

import gzip
import hashlib
import mimetypes
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path

from starlette.datastructures import Headers
from starlette.responses import PlainTextResponse, Response
from starlette.types import Receive, Scope, Send

_HASH_LENGTH = 10
_FOREVER = "public, max-age=31536000, immutable"
_ASK_AGAIN = "public, no-cache"
_TWINS = {".br": "br", ".gz": "gzip"}
_WORTH_COMPRESSING = 400
_TYPES = {
    ".css": "text/css; charset=utf-8",
    ".js": "text/javascript; charset=utf-8",
    ".svg": "image/svg+xml",
    ".txt": "text/plain; charset=utf-8",
    ".md": "text/plain; charset=utf-8",
    ".webmanifest": "application/manifest+json",
}


@dataclass(frozen=True)
class Kept:
    """One file: its content as it is, and compressed."""

    content: bytes
    media_type: str
    etag: str
    compressed: dict[str, bytes]


class StaticShelf:
    """Serves a folder of files; mounted as an application of its own."""

    def __init__(self, folder: Path, mounted_at: str = "/static") -> None:
        self._folder = folder
        self._mounted_at = mounted_at

    def url(self, path: str) -> str:
        """Address of a file, with the hash of its folder.

        Raises
        ------
        LookupError
            If there is no such file.
        """
        if path not in self._files:
            raise LookupError(f"there is no file {path!r} in {self._folder.name}/")
        return f"{self._mounted_at}/{self._hashes[_first_folder(path)]}/{path}"

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request."""
        await self._answer(scope)(scope, receive, send)

    def _answer(self, scope: Scope) -> Response:
        if scope["method"] not in ("GET", "HEAD"):
            return PlainTextResponse("Method Not Allowed", 405, {"allow": "GET, HEAD"})
        asked = scope["path"].removeprefix(scope.get("root_path", "")).lstrip("/")
        first, _slash, rest = asked.partition("/")
        is_hashed = rest in self._files and self._hashes[_first_folder(rest)] == first
        kept = self._files.get(rest if is_hashed else asked)
        if kept is None and rest in self._files and len(first) == _HASH_LENGTH:
            kept = self._files[rest]  # An old page asks for what has changed since: give today's.
        if kept is None:
            return PlainTextResponse("Not Found", 404)
        return _response(kept, Headers(scope=scope), _FOREVER if is_hashed else _ASK_AGAIN)

    @cached_property
    def _files(self) -> dict[str, Kept]:
        files: dict[str, Kept] = {}
        for path in sorted(self._folder.rglob("*")):
            if path.is_file() and path.suffix not in _TWINS and not path.name.startswith("."):
                files[path.relative_to(self._folder).as_posix()] = _kept(path)
        return files

    @cached_property
    def _hashes(self) -> dict[str, str]:
        """One hash for each folder at the top."""
        digests: dict[str, hashlib._Hash] = {}
        for name, kept in self._files.items():
            digest = digests.setdefault(_first_folder(name), hashlib.sha256())
            digest.update(name.encode() + b"\0" + kept.etag.encode() + b"\0")
        return {folder: digest.hexdigest()[:_HASH_LENGTH] for folder, digest in digests.items()}


def _first_folder(path: str) -> str:
    folder, slash, _rest = path.partition("/")
    return folder if slash else ""


def _kept(path: Path) -> Kept:
    content = path.read_bytes()
    media_type = _TYPES.get(path.suffix) or mimetypes.guess_type(path.name)[0]
    compressed: dict[str, bytes] = {}
    for suffix, coding in _TWINS.items():
        twin = path.with_name(path.name + suffix)
        if twin.is_file():
            compressed[coding] = twin.read_bytes()
    if not compressed and path.suffix in _TYPES and len(content) >= _WORTH_COMPRESSING:
        compressed["gzip"] = gzip.compress(content, mtime=0)
    digest = hashlib.sha256(content).hexdigest()[:20]
    return Kept(content, media_type or "application/octet-stream", f'"{digest}"', compressed)


def _response(kept: Kept, asked: Headers, caching: str) -> Response:
    headers = {"etag": kept.etag, "cache-control": caching, "vary": "Accept-Encoding"}
    if kept.etag in [tag.strip().removeprefix("W/") for tag in _listed(asked, "if-none-match")]:
        return Response(status_code=304, headers=headers)
    content = kept.content
    accepted = {
        name.partition(";")[0].strip()
        for name in _listed(asked, "accept-encoding")
        if "q=0" not in name.replace(" ", "").split(";")[1:]
    }
    for coding in ("br", "gzip"):
        if coding in accepted and coding in kept.compressed:
            headers["content-encoding"] = coding
            content = kept.compressed[coding]
            break
    return Response(content, headers=headers, media_type=kept.media_type)


def _listed(headers: Headers, name: str) -> list[str]:
    return headers.get(name, "").split(",")
