"""Every setting of the tool, read from the environment and checked when the program starts."""

from functools import lru_cache
from pathlib import Path
from typing import Annotated, Literal

from pydantic import Field, SecretStr
from pydantic_settings import BaseSettings, SettingsConfigDict

_PACKAGE = Path(__file__).resolve().parent


def shipped(folder: str) -> Path:
    """Where a folder that is shipped with the program lies: inside the package, or beside it."""
    inside = _PACKAGE / folder
    return inside if inside.is_dir() else _PACKAGE.parent / folder


TEMPLATES = shipped("templates")
STATIC = shipped("static")
MIGRATIONS = shipped("migrations")


class Settings(BaseSettings):
    """What a site may choose; each is set by an environment variable AMPLEDGER_<NAME>."""

    model_config = SettingsConfigDict(env_prefix="AMPLEDGER_", env_file=".env", extra="ignore")

    database_url: Annotated[
        str,
        Field(
            pattern=r"^(sqlite|postgresql)(\+\w+)?://",
            description="Where the books are kept: sqlite:///FILE, or postgresql://... for large "
            "sites.",
        ),
    ] = "sqlite:///ampledger.db"
    secret_key: Annotated[
        SecretStr | None,
        Field(
            min_length=32,
            description="Key that signs the sign-in cookies; left out, one is made with the "
            "database and kept there.",
        ),
    ] = None
    max_hold_h: Annotated[
        float,
        Field(
            gt=0,
            le=48,
            description="Hours for which a logged current holds when no newer one follows; what "
            "lies beyond is counted as estimated.",
        ),
    ] = 2.0
    future_tolerance_s: Annotated[
        int,
        Field(
            ge=0,
            le=86_400,
            description="Seconds by which a record may lie ahead of the server's clock before it "
            "is held.",
        ),
    ] = 300
    upload_max_mib: Annotated[
        int, Field(ge=1, le=1023, description="Largest file taken by upload or import, in MiB.")
    ] = 512
    unpacked_max_mib: Annotated[
        int,
        Field(ge=1, le=4096, description="Largest unpacked size of a spreadsheet file, in MiB."),
    ] = 512
    upload_folder: Annotated[
        Path | None,
        Field(
            description="Where uploaded files wait until somebody has looked at them; left out: "
            "beside the SQLite file, or in the system's temporary folder with PostgreSQL."
        ),
    ] = None
    session_h: Annotated[
        float,
        Field(gt=0, le=24 * 31, description="Hours after which a signed-in person signs in anew."),
    ] = 12.0
    secure_cookies: Annotated[
        Literal["auto", "always", "never"],
        Field(
            description="Whether cookies are sent over TLS only: 'auto' follows the scheme of "
            "the request as the proxy tells it."
        ),
    ] = "auto"
    password_memory_kib: Annotated[
        int, Field(ge=8, le=2**21, description="Memory that argon2id takes for a password, KiB.")
    ] = 65_536
    password_rounds: Annotated[
        int, Field(ge=1, le=100, description="Passes that argon2id makes over that memory.")
    ] = 3
    sign_in_tries: Annotated[
        int,
        Field(
            ge=1,
            le=1000,
            description="Wrong passwords for one name from one address before a pause is asked.",
        ),
    ] = 5
    language: Annotated[
        str, Field(description="Language of the pages where the browser asks for none we have.")
    ] = "en"
    log_format: Annotated[
        Literal["text", "json"], Field(description="How log lines are written.")
    ] = "text"
    log_level: Annotated[
        Literal["debug", "info", "warning", "error"], Field(description="Least level logged.")
    ] = "info"

    @property
    def max_hold_ms(self) -> int:
        """The longest hold of a logged current, ms."""
        return round(self.max_hold_h * 3_600_000)


@lru_cache
def settings() -> Settings:
    """The settings of this process, read once."""
    return Settings()
