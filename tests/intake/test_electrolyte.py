import pytest

AT = "2024-03-05T06:00Z"


def sample(**given):
    return {"at": AT, "section": "EW1", "stream": "feed"} | given


def values(books):
    return books.rows(
        "SELECT revision, metal_g_l, acid_g_l, chloride_mg_l, temperature_degc"
        " FROM electrolyte_sample ORDER BY revision"
    )


def test_an_assay_is_kept_in_the_units_of_the_sheet(books):
    books.records("electrolyte", sample(metal_g_l=45.2, temperature_c=45))

    assert values(books) == [(0, 45.2, None, None, 45.0)]


@pytest.mark.parametrize(
    "given",
    [
        {},
        {"metal_g_l": -1},
        {"metal_g_l": "nan"},
        {"metal_g_l": "inf"},
        {"metal_g_l": 45, "stream": "bleed"},
        {"metal_g_l": "45 g"},
    ],
)
def test_an_assay_that_cannot_be_is_held(books, given):
    (result,) = books.records("electrolyte", sample(**given))

    assert result.status == "held"


def test_what_comes_later_completes_the_sample(books):
    books.records("electrolyte", sample(metal_g_l=45.2, acid_g_l=180))

    (result,) = books.records("electrolyte", sample(metal_g_l=45.2, chloride_mg_l=22))

    assert result.status == "stored"
    assert values(books)[-1] == (1, 45.2, 180.0, 22.0, None)


def test_a_part_of_what_is_known_is_known(books):
    books.records("electrolyte", sample(metal_g_l=45.2, acid_g_l=180))

    (result,) = books.records("electrolyte", sample(acid_g_l=180))

    assert result.status == "duplicate"


def test_another_value_is_held_though_it_comes_with_a_new_one(books):
    books.records("electrolyte", sample(metal_g_l=45.2))

    (result,) = books.records("electrolyte", sample(metal_g_l=42.5, chloride_mg_l=22))

    assert result.status == "held"
    assert "metal_g_l is stored here as 45.2" in result.reason


def test_a_correction_leaves_what_it_does_not_state(books):
    books.records("electrolyte", sample(metal_g_l=45.2, acid_g_l=180))

    books.records("electrolyte", sample(metal_g_l=42.5), reason="digits swapped")

    assert values(books)[-1] == (1, 42.5, 180.0, None, None)


def test_feed_and_spent_are_two_samples(books):
    books.records("electrolyte", sample(metal_g_l=45.2), sample(stream="spent", metal_g_l=35.0))

    assert books.rows("SELECT COUNT(*) FROM electrolyte_sample") == [(2,)]
