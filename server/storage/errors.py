"""What can go wrong on the way to the tables."""


class StorageError(Exception):
    """Anything that storage has to say no to."""


class NotFound(StorageError):
    """Something asked for by name or number is not in the books."""

    def __init__(self, what: str, name: object, known: str = "") -> None:
        self.what, self.name, self.known = what, name, known
        super().__init__(f"there is no {what} {name!r}" + (f"; {known}" if known else ""))


class Conflict(StorageError):
    """What is asked contradicts what is already in the books."""


class NoPlant(StorageError):
    """The database holds no tankhouse yet."""

    def __init__(self) -> None:
        super().__init__("this database holds no tankhouse yet: run `ampledger init --plant FILE`")
