import pytest
from sqlalchemy.exc import DatabaseError
from typer.main import get_command

from server import cli
from server.intake.errors import FileRefused
from server.storage.errors import Conflict

OF_THE_CONTRACT = {
    "init": {"--plant"},
    "import": set(),
    "serve": {"--host", "--port"},
    "demo": set(),
    "user add": {"--role"},
    "token new": {"--role"},
    "backup": set(),
    "restore": set(),
    "check": set(),
    "recompute": set(),
}


def commands():
    """Every command with its options."""
    found = {}

    def walk(group, before):
        for name, command in group.commands.items():
            if hasattr(command, "commands"):
                walk(command, f"{before}{name} ")
            else:
                options = {option for p in command.params for option in p.opts}
                found[before + name] = (command, options)

    walk(get_command(cli.app), "")
    return found


@pytest.mark.parametrize(("name", "options"), OF_THE_CONTRACT.items())
def test_every_command_of_the_contract_is_there(name, options):
    assert options <= commands()[name][1]


def test_every_command_says_what_it_does():
    assert [name for name, (command, _) in commands().items() if not command.help] == []


@pytest.mark.parametrize(
    ("error", "status"),
    [
        (Conflict("this is so already"), 2),
        (FileRefused("missing", file="x.csv"), 2),
        (DatabaseError("SELECT 1", {}, Exception("disk is full")), 1),
        (PermissionError(13, "Permission denied", "books.db"), 1),
    ],
)
def test_an_error_that_people_can_mend_is_one_line(monkeypatch, capsys, error, status):
    def fail(**_given):
        raise error

    monkeypatch.setattr(cli, "app", fail)

    with pytest.raises(SystemExit) as ended:
        cli.main(["check"])

    said = capsys.readouterr().err
    assert ended.value.code == status
    assert said.startswith("ampledger: ")
    assert said.count("\n") == 1


def test_an_error_of_ours_is_not_hidden(monkeypatch):
    def fail(**_given):
        raise ZeroDivisionError

    monkeypatch.setattr(cli, "app", fail)

    with pytest.raises(ZeroDivisionError):
        cli.main(["check"])
