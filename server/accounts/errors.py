"""What can be wrong with what the books are asked for."""


class AccountsError(Exception):
    """Anything that the books cannot answer."""


class WrongPeriod(AccountsError):
    """A period that ends before it begins, or has no length."""

    def __init__(self, from_ms: int, to_ms: int) -> None:
        self.from_ms, self.to_ms = from_ms, to_ms
        super().__init__(f"the period ends ({to_ms}) before it begins ({from_ms})")
