"""Fixtures for every test; each lies with its like in tests/fixtures/."""

pytest_plugins = [
    "tests.fixtures.guards",
    "tests.fixtures.databases",
    "tests.fixtures.browser",
    "tests.fixtures.served",
    "tests.fixtures.program",
]
