"""Which section or process a sum is worked out for, as it was asked."""

from collections.abc import Mapping
from dataclasses import replace

from sqlalchemy.orm import Session

from server.calculator.inputs import InputFault, InputsWrong, number_of
from server.calculator.plant_values import section_basis
from server.calculator.sum import Basis, Sum
from server.calculator.texts import N_, Said
from server.calculator.typical import process_names, typical_basis
from server.science.constants import METALS
from server.science.errors import ScienceError, UnknownName
from server.storage.plant import House

BASIS_KEYS = ("section", "process", "metal", "electrons")
"""Keys of an address that say what a sum is worked out for."""


def basis_keys(a_sum: Sum) -> tuple[str, ...]:
    """Those keys, and the one of the sum's option."""
    return (*BASIS_KEYS, a_sum.option.key) if a_sum.option else BASIS_KEYS


def chosen_basis(
    session: Session, house: House, a_sum: Sum, asked: Mapping[str, str], now_ms: int
) -> Basis:
    """The section or process that was asked for; the first section where neither was.

    Raises
    ------
    NotFound
        If the house has no such section.
    InputsWrong
        If there is no such process, metal or choice, or they contradict each other.
    """
    basis = _section_or_process(session, house, a_sum, asked, now_ms)
    if a_sum.option is None:
        return basis
    choices = a_sum.option.choices(basis.process)
    key, found = a_sum.option.key, asked.get(a_sum.option.key, "").strip()
    if found and found not in choices:
        raise InputsWrong([_unknown(key, found, (), list(choices))])
    return replace(basis, choice=found or next(iter(choices), ""))


def _section_or_process(
    session: Session, house: House, a_sum: Sum, asked: Mapping[str, str], now_ms: int
) -> Basis:
    of_process = [key for key in BASIS_KEYS[1:] if asked.get(key, "").strip()]
    if asked.get("section", "").strip():
        if of_process:
            what = N_("A section has its process already; leave %(key)s out.")
            key = of_process[0]
            raise InputsWrong([InputFault(key, Said(what, {"key": key}), asked[key])])
        plan = house.section(asked["section"].strip())
        return section_basis(session, house, plan, now_ms, a_sum.needs)
    if not of_process:
        return section_basis(session, house, house.sections[0], now_ms, a_sum.needs)
    metal = asked.get("metal", "").strip() or None
    name = asked.get("process", "").strip() or "other"
    try:
        return typical_basis(house, now_ms, name, metal, _electrons(asked))
    except UnknownName as error:
        key = "process" if error.quantity == "process" else "metal"
        known = process_names() if key == "process" else list(METALS)
        raise InputsWrong([_unknown(key, str(error.found), error.near, known)]) from error
    except ScienceError as error:
        key = error.quantity if error.quantity in BASIS_KEYS else "process"
        what = N_("%(key)s does not go with this process; expected is %(allowed)s.")
        said = Said(what, {"key": key, "allowed": error.allowed})
        found = asked.get(key, "")
        expected = Said("%(allowed)s", {"allowed": error.allowed})
        raise InputsWrong([InputFault(key, said, found, expected)]) from error


def _electrons(asked: Mapping[str, str]) -> int | None:
    text = asked.get("electrons", "").strip()
    if not text:
        return None
    value = number_of(text)
    if value is None or value != int(value) or not 1 <= value <= 8:
        what = Said(N_("“%(found)s” is no number of electrons."), {"found": text})
        expected = Said(N_("a whole number from 1 to 8"))
        raise InputsWrong([InputFault("electrons", what, text, expected)])
    return int(value)


def _unknown(key: str, found: str, near: tuple[str, ...], known: list[str]) -> InputFault:
    what = Said(N_("There is no %(key)s “%(found)s” here."), {"key": key, "found": found})
    if not known:
        return InputFault(key, what, found, Said(N_("nothing: there is no choice here")))
    if near:
        return InputFault(key, what, found, Said(N_("perhaps %(near)s"), {"near": ", ".join(near)}))
    return InputFault(key, what, found, Said(N_("one of %(keys)s"), {"keys": ", ".join(known)}))
