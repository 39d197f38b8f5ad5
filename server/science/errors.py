"""What can be wrong with numbers: each error names the quantity, the value found, the allowed."""

from collections.abc import Iterable
from difflib import get_close_matches


class ScienceError(ValueError):
    """Any refusal of an input by the arithmetic, and the base of the others."""

    def __init__(self, quantity: str, found: object, allowed: str) -> None:
        """Keep the quantity's name, the value found and a phrase saying what is allowed."""
        super().__init__(quantity, found, allowed)
        self.quantity = quantity
        self.found = found
        self.allowed = allowed

    def __str__(self) -> str:
        """Say all three in one line."""
        return f"{self.quantity}: found {self.found}, allowed is {self.allowed}"


class OutOfRange(ScienceError):
    """A number outside what the quantity can be, such as a negative mass."""

    def __init__(self, quantity: str, found: float, allowed: str) -> None:
        """Keep the offending number, the worst one where there are several."""
        super().__init__(quantity, float(found), allowed)


class WrongShape(ScienceError):
    """Arrays that do not belong together, such as more times than readings."""


class UnknownName(ScienceError):
    """A metal or process that is not in the table, with the names that come near."""

    def __init__(self, quantity: str, found: str, known: Iterable[str]) -> None:
        """Keep the unknown name and look up the near ones among the known."""
        self.known = tuple(known)
        lowered = {name.lower(): name for name in self.known}
        close = get_close_matches(found.strip().lower(), lowered, n=3, cutoff=0.6)
        self.near = tuple(lowered[name] for name in close)
        super().__init__(quantity, found, ", ".join(self.known))

    def __reduce__(self) -> tuple[type["UnknownName"], tuple[str, object, tuple[str, ...]]]:
        """Let the error travel between processes with the names it was made from."""
        return type(self), (self.quantity, self.found, self.known)

    def __str__(self) -> str:
        """Offer the near names, or all of them when none is near."""
        if self.near:
            return f"{self.quantity}: {self.found!r} is not known; near it: {', '.join(self.near)}"
        return f"{self.quantity}: {self.found!r} is not known; known are {self.allowed}"
