"""The wheel works from any folder, and the lock files hold what pyproject.toml asks for."""

import re
import subprocess
import sys
import sysconfig
import tomllib
import zipfile
from importlib.metadata import packages_distributions
from pathlib import Path

import pytest
from packaging.requirements import Requirement
from packaging.version import Version

from tests.source import ROOT, imports

PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
OURS = {"server", "tests", ""}
LOCKS = ("requirements.lock", "requirements-dev.lock")


def run(*command: str | Path, cwd: Path) -> str:
    """What a command prints; the test fails with its words if it fails."""
    done = subprocess.run(
        [str(part) for part in command], cwd=cwd, capture_output=True, text=True, check=False
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout


def plain_name(name: str) -> str:
    """A distribution's name in its one spelling."""
    return re.sub("[-_.]+", "-", name).lower()


def locked(name: str) -> dict[str, Version]:
    """Packages of a lock file and their versions."""
    text = (ROOT / name).read_text(encoding="utf-8")
    return {
        package: Version(version)
        for package, version in re.findall(r"^([a-z0-9-]+)==(\S+)", text, re.MULTILINE)
    }


@pytest.fixture(scope="module")
def wheel(tmp_path_factory):
    """The wheel, built anew from this checkout."""
    folder = tmp_path_factory.mktemp("wheel")
    run(
        *(sys.executable, "-m", "pip", "wheel", "--quiet", "--no-deps", "--no-build-isolation"),
        *("--wheel-dir", folder, "."),
        cwd=ROOT,
    )
    return next(folder.glob("ampledger-*.whl"))


@pytest.fixture(scope="module")
def installed(wheel, tmp_path_factory):
    """A venv that holds the wheel and sees this one's libraries, but not this checkout."""
    venv = tmp_path_factory.mktemp("installed") / "venv"
    run(sys.executable, "-m", "venv", "--without-pip", venv, cwd=venv.parent)
    python = venv / "bin" / "python"
    run(
        *(sys.executable, "-m", "pip", "--python", python, "install", "--quiet", "--no-deps"),
        *("--no-index", wheel),
        cwd=venv.parent,
    )
    # A path in a .pth file is searched, but the .pth files that lie there are not read:
    # the checkout, which this venv holds by such a file, stays out.
    own = Path(run(python, "-c", "import sysconfig; print(sysconfig.get_path('purelib'))", cwd=venv)
               .strip())  # fmt: skip
    (own / "libraries.pth").write_text(sysconfig.get_path("purelib") + "\n")
    return venv


def test_the_wheel_holds_what_the_browser_and_the_database_need(wheel):
    names = set(zipfile.ZipFile(wheel).namelist())

    wanted = {
        f"server/{path.relative_to(ROOT).as_posix()}"
        for folder in ("templates", "static", "migrations")
        for path in (ROOT / folder).rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }
    wanted |= {p.relative_to(ROOT).as_posix() for p in (ROOT / "server/locale").rglob("*.po")}
    assert "server/locale/es/LC_MESSAGES/messages.po" in wanted
    assert wanted <= names


def test_the_wheel_holds_nothing_else(wheel):
    tops = {name.split("/")[0] for name in zipfile.ZipFile(wheel).namelist()}

    assert tops == {"server", f"ampledger-{PROJECT['version']}.dist-info"}


def test_the_command_works_from_any_folder(installed, tmp_path):
    words = run(installed / "bin" / "ampledger", "--help", cwd=tmp_path)

    for command in ("init", "import", "serve", "demo", "backup", "restore", "check", "recompute"):
        assert command in words


def test_an_installed_program_finds_its_own_files(installed, tmp_path):
    script = """
from server.settings import MIGRATIONS, STATIC, TEMPLATES
from server.storage.database import Database
database = Database("sqlite:///books.db")
database.upgrade()
database.close()
print(MIGRATIONS, STATIC, TEMPLATES, sep="\\n")
"""
    folders = run(installed / "bin" / "python", "-c", script, cwd=tmp_path).split()

    assert all(Path(folder).is_relative_to(installed) for folder in folders)
    assert (tmp_path / "books.db").exists()


def test_the_program_says_the_version_of_the_package():
    from server import __version__

    assert __version__ == PROJECT["version"]


@pytest.mark.parametrize("name", LOCKS)
def test_a_lock_names_every_file_by_its_hash_and_no_place_to_get_it(name):
    text = (ROOT / name).read_text(encoding="utf-8")

    packages = re.split(r"^(?=[a-z0-9])", text, flags=re.MULTILINE)[1:]
    assert all("--hash=sha256:" in package for package in packages)
    assert not re.search(r"https?:|--(extra-)?index-url|--find-links|file:", text)


def test_the_locks_hold_what_the_package_asks_for():
    extras = PROJECT["optional-dependencies"]
    wanted = {
        "requirements.lock": PROJECT["dependencies"] + extras["postgresql"],
        "requirements-dev.lock": PROJECT["dependencies"] + extras["postgresql"] + extras["dev"],
    }

    for name, requirements in wanted.items():
        versions = locked(name)
        for requirement in map(Requirement, requirements):
            assert versions[requirement.name] in requirement.specifier, f"{name}: {requirement}"


@pytest.mark.parametrize(
    ("folder", "extras"), [("server", ["postgresql"]), ("tests", ["postgresql", "dev"])]
)
def test_what_is_imported_is_asked_for(folder, extras):
    asked = [*PROJECT["dependencies"]]
    for extra in extras:
        asked += PROJECT["optional-dependencies"][extra]
    names = {plain_name(Requirement(requirement).name) for requirement in asked}
    homes = packages_distributions()

    strangers = {
        f"{found.place}: {top}"
        for found in imports(ROOT / folder)
        if not found.is_relative
        and (top := found.imported.split(".")[0]) not in {*sys.stdlib_module_names, *OURS}
        and not names & {plain_name(home) for home in homes.get(top, ())}
    }
    assert strangers == set()


def test_what_is_tested_is_what_is_deployed():
    tested = locked("requirements-dev.lock")

    assert {name: tested.get(name) for name in locked("requirements.lock")} == locked(
        "requirements.lock"
    )
