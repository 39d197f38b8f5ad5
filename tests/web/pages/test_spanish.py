import re

import pytest

from server.web.i18n import LANGUAGE_COOKIE
from tests.web.pages.running import rows_of, running_section, words_of

SPANISH = {"accept-language": "es-CL,es;q=0.9,en;q=0.8"}


def test_a_section_is_told_in_spanish_with_a_decimal_comma(client, session):
    running_section(session, low=(4,))

    page = client.get("/sections/EW1?from=2024-02-25&to=2024-03-05", headers=SPANISH)

    assert '<html lang="es">' in page.text
    by_lots = dict(row[:2] for row in rows_of(page, "Por los lotes"))
    assert by_lots["metal pesado"] == "13 338 kg"
    assert by_lots["eficiencia de corriente meta 93,0"] == "93,01 %"
    assert 'aria-label="Agujas de 10 celdas; con alerta: 4."' in page.text
    # What is drawn has its own way to write numbers; remarks of the account are in English.
    figures = re.sub(r"<(svg|script)\b.*?</\1>", "", page.text, flags=re.DOTALL)
    figures = re.sub(r'<p class="note">.*?</p>', "", figures, flags=re.DOTALL)
    content = figures.partition("<main")[2].partition("</main>")[0]
    assert re.findall(r"\d\.\d", content) == []


def test_today_is_told_in_spanish(client, session):
    running_section(session)

    said = words_of(client.get("/", headers=SPANISH))

    assert "Hoy Sección Lista de trabajo Historial de la vigilancia Lotes" in said
    assert "Electroobtención de cobre · 10 de 10 celdas en servicio" in said
    assert re.search(r"producción de cobre hoy, \d+ t en 7 días", said)


@pytest.mark.parametrize(
    ("headers", "expected"),
    [
        ({}, "en"),
        ({"accept-language": "ES"}, "es"),
        ({"accept-language": "pl, en;q=0.5"}, "en"),
        ({"accept-language": "en", "cookie": f"{LANGUAGE_COOKIE}=es"}, "es"),
        ({"accept-language": "es", "cookie": f"{LANGUAGE_COOKIE}=en"}, "en"),
    ],
)
def test_what_was_chosen_counts_before_what_the_browser_asks(anonymous, headers, expected):
    assert f'<html lang="{expected}">' in anonymous.get("/sign-in", headers=headers).text
