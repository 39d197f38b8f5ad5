"""A made-up tankhouse with known truth, its books kept once for all tests of the accounts."""

import csv
import io
import shutil
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest
from sqlalchemy.orm import Session

from server.demo.house import House as MadeUpHouse
from server.demo.house import truth_house
from server.demo.sheets import plant_toml, sheet_text
from server.storage.database import Database
from server.storage.plant import House
from tests.accounts import books

SHEETS = ("current.csv", "outages.csv", "lots.csv", "volts.csv")


@dataclass(frozen=True)
class KeptHouse:
    """A made-up house, and the books that were kept from its sheets alone."""

    made_up: MadeUpHouse
    house: House
    session: Session


def sheets_of(made_up: MadeUpHouse) -> dict[str, list[dict[str, str]]]:
    """The sheets of a made-up house as rows."""
    return {name: list(csv.DictReader(io.StringIO(sheet_text(made_up, name)))) for name in SHEETS}


@pytest.fixture(scope="session", params=[11, 12])
def truth(
    request: pytest.FixtureRequest, sqlite_template: Path, tmp_path_factory: pytest.TempPathFactory
) -> Iterator[KeptHouse]:
    """Sixty days of three sections, with their books; of two seeds in turn."""
    path = tmp_path_factory.mktemp("truth") / "books.db"
    shutil.copyfile(sqlite_template, path)
    made_up = truth_house(request.param)
    database = Database(f"sqlite:///{path}")
    with Session(database.engine) as session:
        house = books.keep(session, plant_toml(made_up), sheets_of(made_up))
        yield KeptHouse(made_up, house, session)
    database.close()
