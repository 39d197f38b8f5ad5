"""Every route asks for a role, and lets in that role and those above it alone."""

import re

import pytest
from fastapi.routing import iter_route_contexts
from sqlalchemy import select

from server.storage.people import ROLES, Person
from server.web import csrf
from server.web.api.openapi import role_of
from tests.factories import make_section


@pytest.fixture
def database_url(sqlite_url):
    """What is asked here does not depend on the database."""
    return sqlite_url


OPEN_ROUTES = {
    "get_health",
    "get_health_live",
    "head_health",
    "head_health_live",
    "openapi",
    "static",
    "sign_in",
    "sign_in_again",
    "sign_in_send",
    "sign_out",
}
"""Names of the routes that are open to whoever comes."""


def routes(app):
    """Every route with a role: (method, path with something in each place, role)."""
    for context in iter_route_contexts(app.routes):
        role = role_of(context)
        if role is not None:
            path = re.sub(r"{[^}]*}", "1", context.path)
            for method in sorted(context.methods):
                yield method, path, role


def test_every_route_asks_for_a_role(app):
    without = {
        context.name for context in iter_route_contexts(app.routes) if role_of(context) is None
    }

    assert without - OPEN_ROUTES == set()


def test_no_two_routes_share_a_name(app):
    names = [context.name for context in iter_route_contexts(app.routes)]

    assert sorted(names) == sorted(set(names))


def test_nobody_is_let_in_unknown(app, anonymous, session):
    make_section(session)

    let_in = [
        (method, path)
        for method, path, _ in routes(app)
        if anonymous.request(method, path).status_code not in (303, 401)
    ]

    assert let_in == []


@pytest.mark.parametrize("role", ROLES)
def test_a_role_is_let_in_where_it_may(app, client_of, session, role):
    make_section(session)
    client = client_of(role)
    for person in session.scalars(select(Person)):
        person.password_hash = app.state.site.passwords.hashed("correct horse battery")
    session.commit()

    wrong = []
    for method, path, needed in routes(app):
        may = ROLES.index(role) >= ROLES.index(needed)
        status = client.request(method, path).status_code
        if status >= 500 or (status == 403) == may:
            wrong.append((method, path, status))

    assert wrong == []


@pytest.mark.parametrize("role", ROLES)
def test_what_writes_by_cookie_takes_the_form_token(app, client_of, session, role):
    make_section(session)
    client = client_of(role)
    del client.headers[csrf.HEADER]

    wrote = [
        (method, path)
        for method, path, _ in routes(app)
        if method not in csrf.SAFE_METHODS and client.request(method, path).status_code != 403
    ]

    assert wrote == []
