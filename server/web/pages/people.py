"""People and the tokens of programs: who may do what."""

from dataclasses import dataclass, field
from typing import Annotated

from fastapi import APIRouter, Form, Path, Request
from sqlalchemy.orm import Session
from starlette.responses import RedirectResponse, Response

from server.storage.errors import Conflict
from server.storage.people import (
    ROLES,
    LastSuperintendent,
    Person,
    add_person,
    add_token,
    change_role,
    disable,
    enable,
    keep_password,
    people,
    person_with_id,
    revoke_token,
    tokens,
)
from server.web.dependencies import DbSession, Now, Superintendent, ThisSite, WriteSession
from server.web.i18n import gettext as _
from server.web.render import page
from server.web.role_words import role_choices, role_meaning, role_name
from server.web.security import new_password, new_token, token_hash
from server.web.typed import one_line

_LONGEST_NAME = 60
_ONCE = {"cache-control": "no-store"}
Faults = dict[str, str]
Text = Annotated[str, Form()]
RowId = Annotated[int, Path(ge=1, lt=2**53)]

router = APIRouter(include_in_schema=False)


@dataclass(frozen=True)
class Said:
    """What the page has to say besides what it shows: a secret, once, or what is wrong."""

    secret: str = ""
    secret_of: str = ""
    secret_is: str = ""
    """password or token."""
    refusal: str = ""
    faults: Faults = field(default_factory=dict)
    typed: Faults = field(default_factory=dict)


@router.get("/people", name="people")
def show_people(request: Request, _who: Superintendent, db: DbSession) -> Response:
    """Show everyone, and every token."""
    return _page(request, db, Said())


@router.post("/people", name="person_add")
def person_add(
    request: Request,
    who: Superintendent,
    now_ms: Now,
    site: ThisSite,
    name: Text = "",
    role: Text = "",
) -> Response:
    """Add somebody; their password is made here and shown once."""
    name, password = one_line(name, _LONGEST_NAME + 1), new_password()
    kept = site.passwords.hashed(password)
    with site.database.write() as session:
        faults = _faults("name", name, "role", role)
        try:
            if not faults:
                add_person(session, name, role, kept, now_ms, who.sender)
        except Conflict:
            faults = {"name": _("There is somebody of this name already.")}
        typed = {"name": name, "role": role}
        said = Said(faults=faults, typed=typed) if faults else Said(password, name, "password")
        return _page(request, session, said, 422 if faults else 200)


@router.post("/people/{person_id}", name="person_change")
def person_change(
    request: Request,
    person_id: RowId,
    _who: Superintendent,
    site: ThisSite,
    action: Text = "",
    role: Text = "",
) -> Response:
    """Give somebody another role or a new password, or let them sign in no more, or again."""
    password = new_password() if action == "password" else ""
    kept = site.passwords.hashed(password) if password else ""
    with site.database.write() as session:
        person = person_with_id(session, person_id)
        if refusal := _change(session, person, action, role, kept):
            return _page(request, session, Said(refusal=refusal), 409)
        if password:
            return _page(request, session, Said(password, person.name, "password"))
    return RedirectResponse(f"{request.url_for('people').path}#person-{person_id}", 303)


@router.post("/tokens", name="token_add")
def token_add(
    request: Request,
    who: Superintendent,
    db: WriteSession,
    now_ms: Now,
    token_name: Text = "",
    token_role: Text = "",
) -> Response:
    """Make a token for a program; it is shown once."""
    name, token = one_line(token_name, _LONGEST_NAME + 1), new_token()
    faults = _faults("token_name", name, "token_role", token_role)
    try:
        if not faults:
            add_token(db, name, token_role, token_hash(token), now_ms, who.sender)
    except Conflict:
        faults = {"token_name": _("There is a token of this name already, perhaps a revoked one.")}
    typed = {"token_name": name, "token_role": token_role}
    said = Said(faults=faults, typed=typed) if faults else Said(token, name, "token")
    return _page(request, db, said, 422 if faults else 200)


@router.post("/tokens/{token_id}/revoke", name="token_revoke")
def token_revoke(
    request: Request, token_id: RowId, _who: Superintendent, db: WriteSession, now_ms: Now
) -> Response:
    """Make a token good for nothing."""
    revoke_token(db, token_id, now_ms)
    return RedirectResponse(f"{request.url_for('people').path}#tokens", 303)


def _page(request: Request, session: Session, said: Said, status: int = 200) -> Response:
    context = {
        "people": people(session),
        "tokens": tokens(session),
        "said": said,
        "roles": role_choices(),
        "meanings": [(role_name(role), role_meaning(role)) for role in ROLES],
        "role_name": role_name,
    }
    return page(request, "people.html", context, status_code=status, headers=_ONCE)


def _change(session: Session, person: Person, action: str, role: str, kept: str) -> str:
    """Do what was asked; answers why not, where it cannot be done."""
    try:
        match action:
            case "role" if role in ROLES:
                change_role(session, person, role)
            case "password":
                keep_password(person, kept)
            case "disable":
                disable(session, person)
            case "enable":
                enable(person)
            case _:
                return _("Nothing was changed: the form did not say what to do.")
    except LastSuperintendent:
        return _(
            "%(name)s is the last superintendent who can sign in; give somebody else that role"
            " first."
        ) % {"name": person.name}
    return ""


def _faults(name_field: str, name: str, role_field: str, role: str) -> Faults:
    """What is wrong with a new name and its role, by field."""
    faults = {}
    if not name:
        faults[name_field] = _("A name is needed.")
    elif len(name) > _LONGEST_NAME:
        faults[name_field] = _("Use at most %(most)d letters and signs.") % {"most": _LONGEST_NAME}
    if role not in ROLES:
        faults[role_field] = _("Choose a role.")
    return faults
