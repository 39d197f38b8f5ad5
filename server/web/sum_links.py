"""Links that carry the inputs of a sum: what differs from what would be filled in, and no more."""

from collections.abc import Mapping, Sequence
from urllib.parse import urlencode

from server.calculator.inputs import InputFault, InputsWrong
from server.calculator.sum import Basis, Sum
from server.calculator.texts import N_, Said
from server.calculator.work_out import PutIn, given
from server.web.filters import number_typed


def basis_query(basis: Basis) -> dict[str, str]:
    """The parameters that choose this section or process."""
    if basis.section is not None:
        return {"section": basis.section.name}
    kind = basis.process
    if kind.name != "other":
        return {"process": kind.name}
    return {
        "process": kind.name,
        "metal": kind.metal.symbol,
        "electrons": str(kind.metal.electrons),
    }


def query_of(a_sum: Sum, basis: Basis, inputs: Sequence[PutIn]) -> dict[str, str]:
    """The parameters that give this sum again."""
    chosen = {}
    if a_sum.option and basis.choice != next(iter(a_sum.option.choices(basis.process)), ""):
        chosen = {a_sum.option.key: basis.choice}
    typed = {key: number_typed(value) for key, value in given(inputs).items()}
    return basis_query(basis) | chosen | typed


def with_query(path: str, query: Mapping[str, str]) -> str:
    """An address with its parameters."""
    return f"{path}?{urlencode(query)}" if query else path


def asked_once(pairs: list[tuple[str, str]]) -> dict[str, str]:
    """The parameters of an address, each of which may stand there once.

    Raises
    ------
    InputsWrong
        If one stands there twice.
    """
    asked: dict[str, str] = {}
    for key, value in pairs:
        if key in asked:
            what = Said(N_("%(key)s is given more than once."), {"key": key})
            raise InputsWrong([InputFault(key, what, value, Said(N_("one value")))])
        asked[key] = value
    return asked
