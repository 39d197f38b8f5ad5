import json
import re

import pytest
from jinja2 import UndefinedError
from starlette.requests import Request

from server.web import render
from server.web.i18n import speaking


def written(source: str, **context: object) -> str:
    return render.environment().from_string(source).render(**context)


def test_every_value_is_escaped():
    assert written("{{ name }}", name="<b>&") == "&lt;b&gt;&amp;"


def test_a_name_nobody_gave_is_an_error():
    with pytest.raises(UndefinedError, match="section"):
        written("{{ section }}")


def test_texts_are_translated_and_take_values():
    assert written("{{ _('Cell %(number)s', number=3) }}") == "Cell 3"


def test_a_figure_stands_in_the_page_as_data():
    page = written(
        "<script type='application/json'>{{ figure | figure_json }}</script>",
        figure={"name": "</script>"},
    )

    assert json.loads(re.search(r">(.*)</script>$", page).group(1)) == {"name": "</script>"}


def test_a_frame_is_empty_until_someone_lays_it():
    request = Request({"type": "http", "headers": []})

    assert render.frame_of(request) == render.Frame()


def test_templates_know_language_zone_and_marks():
    with speaking("es", "America/Santiago"):
        page = written("{{ language() }} {{ zone() }} {{ mark('low') }} {{ no_data() }}")

    assert page == "es America/Santiago ▼ sin datos"


@pytest.mark.parametrize(
    ("source", "expected"),
    [
        (
            "{% from 'parts/fields.html' import number_field %}"
            "{{ number_field('net_kg', 'Net', 12.5, unit='kg', error='Too light.', hint='h') }}",
            (
                'for="field-net_kg"',
                'id="field-net_kg"',
                'value="12.5"',
                'aria-invalid="true"',
                'aria-describedby="fault-net_kg hint-net_kg"',
                '<p class="fault" id="fault-net_kg">Too light.</p>',
                'inputmode="decimal"',
            ),
        ),
        (
            "{% from 'parts/fields.html' import choice_field %}"
            "{{ choice_field('role', 'Role', [('reader', 'Reader'), ('planner', 'Planner')],"
            " 'planner') }}",
            ('<option value="planner" selected>Planner</option>',),
        ),
        (
            "{% from 'parts/fields.html' import text_field %}"
            "{{ text_field('why', 'Why', '', required=true, maxlength=200, readonly=false) }}",
            (" required", ' maxlength="200"'),
        ),
        (
            "{% from 'parts/facts.html' import fact %}{{ fact('no data', 'efficiency') }}",
            ('class="missing"',),
        ),
        (
            "{% from 'parts/flag.html' import marked %}{{ marked('high', 'drifting', 'look') }}",
            ('class="high watched"', "▲", "drifting"),
        ),
        (
            "{% from 'parts/time.html' import moment %}{{ moment(0) }} {{ moment(none) }}",
            ('<time datetime="1970-01-01T00:00:00+00:00">Thu 1 Jan 1970 00:00</time> no data',),
        ),
    ],
)
def test_parts_hold_what_is_theirs(source, expected):
    page = written(source)

    for piece in expected:
        assert piece in page


def test_a_field_without_fault_is_not_called_invalid():
    page = written("{% from 'parts/fields.html' import text_field %}{{ text_field('lot', 'Lot') }}")

    assert "aria-invalid" not in page
    assert "aria-describedby" not in page
