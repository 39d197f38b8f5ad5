"""A person's own page: their role, their password, their language."""

from typing import Annotated

from fastapi import APIRouter, Form, Request
from starlette.responses import RedirectResponse, Response

from server.storage.people import keep_password, person_with_id
from server.web.dependencies import Here, SignedInPerson, Standing, ThisSite, Who
from server.web.i18n import LANGUAGE_COOKIE, SOURCE_LANGUAGE, languages, locale, manner
from server.web.i18n import gettext as _
from server.web.pages.sign_in import address_of, lay_session, pause_words
from server.web.render import page
from server.web.role_words import role_meaning, role_name
from server.web.security import fault_of_password
from server.web.sign_in import is_secure, set_cookie, signed_in
from server.web.site import Site

_YEAR_S = 365 * 86_400
Faults = dict[str, str]
Text = Annotated[str, Form()]

router = APIRouter(include_in_schema=False)


@router.get("/me", name="own_page")
def own_page(request: Request, who: SignedInPerson, changed: bool = False) -> Response:
    """Show somebody's own page."""
    return _page(request, who, {}, changed)


@router.post("/me/password", name="own_password")
def own_password(
    request: Request,
    who: SignedInPerson,
    here: Here,
    site: ThisSite,
    present: Text = "",
    new: Text = "",
    again: Text = "",
) -> Response:
    """Change one's own password; every other session of this person ends."""
    faults = _faults(request, here, site, who, present, new, again)
    if faults:
        return _page(request, who, faults, status=422)
    return _changed(request, here, site, who, site.passwords.hashed(new))


@router.post("/me/language", name="own_language")
def own_language(
    request: Request, _who: SignedInPerson, site: ThisSite, language: Text = SOURCE_LANGUAGE
) -> Response:
    """Read the pages in another language from now on, in this browser."""
    response = RedirectResponse(request.url_for("own_page").path, 303)
    if language in languages():
        secure = is_secure(request, site.settings.secure_cookies)
        set_cookie(response, LANGUAGE_COOKIE, language, secure=secure, lasts_s=_YEAR_S)
    return response


def _page(
    request: Request, who: Who, faults: Faults, changed: bool = False, status: int = 200
) -> Response:
    context = {
        "role": role_name(who.role),
        "meaning": role_meaning(who.role),
        "faults": faults,
        "changed": changed,
        "languages": [(name, locale(name).get_display_name(name)) for name in languages()],
        "spoken": manner().language,
    }
    return page(request, "me.html", context, status_code=status)


def _faults(
    request: Request, here: Standing, site: Site, who: Who, present: str, new: str, again: str
) -> Faults:
    """What is wrong with a change of password, by field."""
    faults = {}
    if fault := fault_of_password(new, who.name):
        faults["new"] = fault
    elif new == present:
        faults["new"] = _("This is the password you have.")
    if new != again:
        faults["again"] = _("The two new passwords are not the same.")
    if fault := _fault_of_present(request, here, site, who, present):
        faults["present"] = fault
    return faults


def _fault_of_present(
    request: Request, here: Standing, site: Site, who: Who, present: str
) -> str | None:
    """What is wrong with the present password; wrong ones count as they do at sign-in."""
    assert who.signed_in is not None
    limit, address = site.sign_in_limit, address_of(request)
    if wait_ms := limit.wait_ms(who.name, address, here.now_ms):
        return pause_words(wait_ms)
    with site.database.read() as session:
        kept = person_with_id(session, who.signed_in.person_id).password_hash
    if not site.passwords.holds(present, kept):
        limit.was_wrong(who.name, address, here.now_ms)
        return _("This is not your present password.")
    return None


def _changed(request: Request, here: Standing, site: Site, who: Who, kept: str) -> Response:
    """Keep the new password; this session goes on under its new epoch."""
    assert who.signed_in is not None
    with site.database.write() as session:
        person = person_with_id(session, who.signed_in.person_id)
        keep_password(person, kept)
        own = signed_in(person.id, person.session_epoch, here.now_ms)
    response = RedirectResponse(f"{request.url_for('own_page').path}?changed=yes", 303)
    lay_session(response, request, site, here.key, own)
    return response
