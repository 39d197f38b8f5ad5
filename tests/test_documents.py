"""README.md and DEVELOPERS.md say what is true: settings, commands, examples, folders, links."""

import os
import re
import subprocess
import sys
import tomllib
from typing import Literal, get_args, get_origin

import pytest

from server.settings import Settings
from tests.source import ROOT

README = (ROOT / "README.md").read_text(encoding="utf-8")
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
MAKEFILE = (ROOT / "Makefile").read_text(encoding="utf-8")


def settings_table() -> str:
    """Every setting with its default and its sentence, as README.md prints it."""
    lines = ["| setting | default | what it is |", "|---|---|---|"]
    for name, field in Settings.model_fields.items():
        default = "" if field.default is None else f"`{field.default}`"
        words = str(field.description)
        if get_origin(field.annotation) is Literal:
            choices = ", ".join(f"`{choice}`" for choice in get_args(field.annotation))
            words += f" One of {choices}."
        lines.append(f"| `AMPLEDGER_{name.upper()}` | {default} | {words} |")
    return "\n".join(lines)


def examples() -> dict[str, str]:
    """The example files of README.md, by their names."""
    found = re.findall(r"<!-- example: (\S+) -->\n```\w+\n(.*?)```", README, re.DOTALL)
    return dict(found)


def folders_of_the_house() -> set[str]:
    """Every folder that a newcomer may ask about; the mirror of `server/` explains itself."""
    listed = subprocess.run(
        ["git", "ls-files", "--cached", "--others", "--exclude-standard"],
        cwd=ROOT,
        check=True,
        capture_output=True,
        text=True,
    ).stdout.split()
    parents = {"/".join(name.split("/")[:-1]) for name in listed}
    return {
        folder
        for folder in parents
        if folder
        and not re.search("(vendor|locale)/", folder)
        and not (folder.startswith("tests/") and (ROOT / "server" / folder[6:]).is_dir())
    }


def test_the_readme_lists_every_setting():
    written = README.split("<!-- settings -->\n")[1].split("\n<!-- end of settings -->")[0]

    assert written == settings_table()


def test_the_readme_shows_every_sheet():
    from server.intake.columns import SHEETS

    assert set(examples()) == {"plant.toml"} | {f"{name}.csv" for name in SHEETS}


def test_the_readmes_plant_and_sheets_go_in_whole(tmp_path):
    for name, text in examples().items():
        path = tmp_path / ("plant.toml" if name == "plant.toml" else f"sheets/{name}")
        path.parent.mkdir(exist_ok=True)
        path.write_text(text, encoding="utf-8")

    for command in (["init", "--plant", "plant.toml"], ["import", "sheets"], ["check"]):
        done = subprocess.run(
            [sys.executable, "-m", "server", *command],
            cwd=tmp_path,
            env=os.environ | {"PYTHONPATH": str(ROOT)},
            capture_output=True,
            text=True,
            check=False,
        )
        assert done.returncode == 0, done.stdout + done.stderr


@pytest.mark.parametrize("document", [README, DEVELOPERS])
def test_the_make_commands_named_are_there(document):
    named = set(re.findall(r"(?:`|^ {4})make ([a-z-]+)", document, re.MULTILINE))
    there = set(re.findall(r"^([a-z-]+):", MAKEFILE, re.MULTILINE))

    assert named
    assert named <= there


def test_every_make_command_is_explained_by_make_itself():
    there = set(re.findall(r"^([a-z-]+):", MAKEFILE, re.MULTILINE)) - {"help", "clean"}

    assert there == set(re.findall(r'echo "make ([a-z-]+)', MAKEFILE))


@pytest.mark.parametrize("name", ["README.md", "DEVELOPERS.md", "CHANGELOG.md"])
def test_every_link_leads_somewhere(name):
    text = (ROOT / name).read_text(encoding="utf-8")
    headings = {
        re.sub(r"[^a-z0-9 -]", "", heading.lower()).replace(" ", "-")
        for heading in re.findall(r"^#+ (.+)$", text, re.MULTILINE)
    }

    broken = [
        target
        for target in re.findall(r"\]\(([^)\s]+)\)", text)
        if not target.startswith("https://")
        and not (target.startswith("#") and target[1:] in headings)
        and not (not target.startswith("#") and (ROOT / target.split("#")[0]).exists())
    ]
    assert broken == []


def test_every_folder_has_its_caption():
    missing = {folder for folder in folders_of_the_house() if f"`{folder}/`" not in DEVELOPERS}

    assert missing == set()


def test_no_caption_is_for_a_folder_that_is_gone():
    captions = set(re.findall(r"^\| `([^`]+)/` \|", DEVELOPERS, re.MULTILINE))

    assert {folder for folder in captions if not (ROOT / folder).is_dir()} == set()


def test_every_library_chosen_has_its_reason():
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    extras = project["optional-dependencies"]
    names = {
        re.match(r"[a-z0-9-]+", requirement).group()
        for requirement in (*project["dependencies"], *extras["postgresql"], *extras["dev"])
    }

    assert {name for name in names if f"`{name}" not in DEVELOPERS} == set()
