"""Which limits of a product grade an assay exceeds, and which it leaves open."""

import math

import pytest

from server.science.errors import OutOfRange, UnknownName
from server.science.product_grades import GRADES, exceeded, grade

GRADE_A = GRADES["en 1978 cu-cath-1"]
B115_2 = GRADES["astm b115 grade 2"]
NICKEL = GRADES["astm b39 nickel"]
ZINC = GRADES["zinc 99.995"]
CLEAN_A = dict.fromkeys(GRADE_A.sums[-1].elements, 0.0)


def breached(verdict):
    """Names of the limits exceeded."""
    return [breach.name for breach in verdict.breaches]


def test_a_clean_assay_meets_everything():
    verdict = exceeded(CLEAN_A, GRADE_A)

    assert verdict.breaches == ()
    assert verdict.not_judged == {}
    assert verdict.is_within is True


@pytest.mark.parametrize(("symbol", "limit"), GRADE_A.limits_ppm.items())
def test_a_value_equal_to_its_limit_passes(symbol, limit):
    verdict = exceeded(CLEAN_A | {symbol: limit}, GRADE_A)

    assert verdict.breaches == ()


@pytest.mark.parametrize(("symbol", "limit"), GRADE_A.limits_ppm.items())
def test_a_value_just_above_its_limit_does_not(symbol, limit):
    verdict = exceeded(CLEAN_A | {symbol: math.nextafter(limit, 1e6)}, GRADE_A)

    assert breached(verdict) == [symbol]
    assert verdict.breaches[0].limit_ppm == limit
    assert verdict.is_within is False


def test_elements_within_their_limits_may_exceed_them_together():
    # 2.0 + 2.0 + 1.9 of 3 together, and 3.9 of 3 for two of them.
    verdict = exceeded(CLEAN_A | {"Bi": 2.0, "Se": 2.0, "Te": 1.9}, GRADE_A)

    assert breached(verdict) == ["Bi + Se + Te", "Se + Te"]
    assert verdict.breaches[0].found_ppm == pytest.approx(5.9)


def test_a_sum_equal_to_its_limit_passes_though_its_parts_round():
    # By hand 15.0; added one after the other in binary the parts may end a little above it.
    assay = CLEAN_A | {"As": 4.7, "Cd": 3.3, "Cr": 2.1, "Mn": 1.9, "P": 2.9, "Sb": 0.1}

    assert exceeded(assay, GRADE_A).breaches == ()


def test_the_sum_of_all_counts_every_element():
    assay = CLEAN_A | {"Ag": 25.0, "S": 15.0, "Pb": 5.0, "Fe": 10.0, "Ni": 10.0, "Mn": 0.5}

    assert breached(exceeded(assay, GRADE_A)) == ["sum of all"]


def test_an_element_not_assayed_is_not_judged_and_said():
    assay = {symbol: ppm for symbol, ppm in CLEAN_A.items() if symbol not in ("Pb", "Cd")}

    verdict = exceeded(assay, GRADE_A)

    assert verdict.breaches == ()
    assert verdict.not_judged == {
        "Pb": ("Pb",),
        "As + Cd + Cr + Mn + P + Sb": ("Cd",),
        "sum of all": ("Pb", "Cd"),
    }
    assert verdict.is_within is None


def test_a_sum_exceeded_without_its_missing_elements_is_exceeded():
    verdict = exceeded({"As": 5.0, "Sb": 4.0, "Mn": 6.5}, GRADE_A)

    assert "As + Cd + Cr + Mn + P + Sb" in breached(verdict)
    assert "As + Cd + Cr + Mn + P + Sb" not in verdict.not_judged


def test_a_missing_number_counts_as_not_assayed():
    verdict = exceeded(CLEAN_A | {"Fe": float("nan")}, GRADE_A)

    assert verdict.not_judged["Fe"] == ("Fe",)


def test_silver_counts_with_the_copper_where_the_standard_says_so():
    clean = dict.fromkeys(B115_2.limits_ppm, 0.0)

    passes = exceeded(clean | {"Cu": 999_450.0, "Ag": 50.0}, B115_2)
    fails = exceeded(clean | {"Cu": 999_450.0, "Ag": 49.0}, B115_2)

    assert passes.breaches == ()
    assert breached(fails) == ["least Cu + Ag"]
    assert fails.breaches[0].found_ppm == 999_499.0


def test_a_purity_not_stated_is_not_judged():
    verdict = exceeded(dict.fromkeys(ZINC.limits_ppm, 1.0), ZINC)

    assert verdict.not_judged == {"least Zn": ("Zn",)}


def test_traces_that_must_lie_below_fail_at_their_figure():
    clean = dict.fromkeys([*NICKEL.limits_ppm, *NICKEL.below_ppm], 0.0) | {"Ni": 999_000.0}

    assert exceeded(clean | {"Pb": 49.9, "Co": 1500.0}, NICKEL).breaches == ()
    assert breached(exceeded(clean | {"Pb": 50.0}, NICKEL)) == ["Pb"]


def test_elements_that_the_grade_does_not_limit_are_passed_over():
    assert exceeded(CLEAN_A | {"Au": 900.0}, GRADE_A).is_within is True


def test_zinc_may_meet_one_standard_and_not_another():
    assay = dict.fromkeys(ZINC.limits_ppm, 0.0) | {"Zn": 999_955.0, "Cd": 25.0, "Fe": 15.0}

    assert exceeded(assay, ZINC).is_within is True
    assert breached(exceeded(assay, GRADES["gb/t 470 zn99.995"])) == ["Cd", "Fe"]


def test_a_negative_assay_is_refused_by_name():
    with pytest.raises(OutOfRange, match="assay_ppm of Bi"):
        exceeded({"Bi": -0.1}, GRADE_A)


@pytest.mark.parametrize("key", GRADES)
def test_a_grade_is_found_by_its_key_in_any_capitals(key):
    assert grade(f" {key.upper()} ") is GRADES[key]


def test_an_unknown_grade_is_refused_with_a_near_one():
    with pytest.raises(UnknownName, match="astm b39 nickel"):
        grade("astm b39 nickle")


@pytest.mark.parametrize("known", GRADES.values(), ids=GRADES)
def test_a_grade_names_its_edition_and_the_status_of_its_figures(known):
    assert known.edition
    assert "looked up" in known.status or "from memory" in known.status


@pytest.mark.parametrize("known", GRADES.values(), ids=GRADES)
def test_no_single_limit_is_wider_than_a_sum_that_holds_it(known):
    for together in known.sums:
        for symbol in together.elements:
            assert known.limits_ppm.get(symbol, 0.0) <= together.limit_ppm
