"""The made-up people of a made-up tankhouse, and passwords nobody could guess."""

import secrets
from dataclasses import dataclass

# No vowels, so that no words come out, and nothing that looks like something else.
LETTERS = "bcdfghjkmnpqrtvwxyz2346789"
GROUPS = 3
LETTERS_PER_GROUP = 4


@dataclass(frozen=True)
class Person:
    """Somebody who signs in: the name typed, the name shown, the role."""

    user_name: str
    full_name: str
    role: str


DEMO_PEOPLE = (
    Person("mira", "Mira Hollander", "operator"),
    Person("tomas", "Tomas Quell", "planner"),
    Person("ines", "Ines Arbour", "superintendent"),
)


def random_password() -> str:
    """A new password such as ``k7mq-x3zt-9hvd``, 56 bits from the system's own randomness."""
    groups = (
        "".join(secrets.choice(LETTERS) for _ in range(LETTERS_PER_GROUP)) for _ in range(GROUPS)
    )
    return "-".join(groups)
