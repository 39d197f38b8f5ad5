"""Product standards of cathode copper, zinc and nickel: every limit, in the edition named.

Looked up: EN 1978:1998 Cu-CATH-1 (an exchange's contract rules for grade A copper); ASTM
B115-00(2004), table 1 (a stored copy; editions of 2010 and later not checked); GB/T 467-2010 (notes
on the standard that reprint tables 1 and 2; the exchange's rules print bismuth as 0.0020 %, a
slip for 0.00020 %); zinc 99.995 and the differences of GB/T 470-2008 (an exchange's quality page);
the least zinc of ASTM B6 special high grade (first page of B6-00); ASTM B39-79, table 1 (stored
copies of several reapprovals). From memory: the element limits of ASTM B6 special high grade.
Limits carry no allowance for the error of measurement (ASTM B115, note to the table, looked up).
"""

import pytest

from server.science.product_grades import GRADES, exceeded

# Grade: mass parts per million, most.
SINGLE = {
    "en 1978 cu-cath-1": {
        "Ag": 25, "As": 5, "Bi": 2, "Fe": 10, "Pb": 5, "S": 15, "Sb": 4, "Se": 2, "Te": 2,
    },
    "gb/t 467 cu-cath-1": {
        "Ag": 25, "As": 5, "Bi": 2, "Fe": 10, "Pb": 5, "S": 15, "Sb": 4, "Se": 2, "Te": 2,
    },
    "gb/t 467 cu-cath-2": {
        "As": 15, "Sb": 15, "Bi": 5, "Fe": 25, "Pb": 20, "Sn": 10, "Ni": 20, "Zn": 20, "S": 25,
        "P": 10,
    },
    "astm b115 grade 1": {
        "Se": 2, "Te": 2, "Bi": 1, "Sb": 4, "Pb": 5, "As": 5, "Fe": 10, "Ni": 10, "Sn": 5, "S": 15,
        "Ag": 25,
    },
    "astm b115 grade 2": {
        "Se": 10, "Te": 5, "Bi": 3, "Sb": 15, "Pb": 40, "As": 15, "Fe": 25, "Ni": 20, "Sn": 10,
        "S": 25, "Ag": 70,
    },
    "zinc 99.995": {"Pb": 30, "Cd": 30, "Fe": 20, "Sn": 10, "Cu": 10, "Al": 10},
    "gb/t 470 zn99.995": {"Pb": 30, "Cd": 20, "Fe": 10, "Sn": 10, "Cu": 10, "Al": 10},
    "astm b6 special high grade": {"Pb": 30, "Fe": 30, "Cd": 30, "Al": 20, "Cu": 20, "Sn": 10},
    # Per cent in the standard: 0.15, 0.02, 0.03, 0.02, 0.01.
    "astm b39 nickel": {"Co": 1500, "Cu": 200, "C": 300, "Fe": 200, "S": 100},
}  # fmt: skip
TOGETHER = {
    "en 1978 cu-cath-1": {
        ("As", "Cd", "Cr", "Mn", "P", "Sb"): 15,
        ("Bi", "Se", "Te"): 3,
        ("Se", "Te"): 3,
        ("Co", "Fe", "Ni", "Si", "Sn", "Zn"): 20,
        ("Ag", "As", "Bi", "Cd", "Co", "Cr", "Fe", "Mn", "Ni", "P", "Pb", "S", "Sb", "Se", "Si",
         "Sn", "Te", "Zn"): 65,
    },
    "gb/t 467 cu-cath-1": {
        ("As", "Cd", "Cr", "Mn", "P", "Sb"): 15,
        ("Bi", "Se", "Te"): 3,
        ("Se", "Te"): 3,
        ("Co", "Fe", "Ni", "Si", "Sn", "Zn"): 20,
        ("Ag", "As", "Bi", "Cd", "Co", "Cr", "Fe", "Mn", "Ni", "P", "Pb", "S", "Sb", "Se", "Si",
         "Sn", "Te", "Zn"): 65,
    },
    "gb/t 467 cu-cath-2": {},
    "astm b115 grade 1": {
        ("Bi", "Se", "Te"): 3,
        ("Ag", "As", "Bi", "Fe", "Ni", "Pb", "S", "Sb", "Se", "Sn", "Te"): 65,
    },
    "astm b115 grade 2": {},
    "zinc 99.995": {("Al", "Cd", "Cu", "Fe", "Pb", "Sn"): 50},
    "gb/t 470 zn99.995": {("Al", "Cd", "Cu", "Fe", "Pb", "Sn"): 50},
    "astm b6 special high grade": {("Al", "Cd", "Cu", "Fe", "Pb", "Sn"): 100},
    "astm b39 nickel": {},
}  # fmt: skip
# Least of the metal, per cent, and what counts.
LEAST = {
    "gb/t 467 cu-cath-2": (99.95, {"Cu", "Ag"}),
    "astm b115 grade 2": (99.95, {"Cu", "Ag"}),
    "zinc 99.995": (99.995, {"Zn"}),
    "gb/t 470 zn99.995": (99.995, {"Zn"}),
    "astm b6 special high grade": (99.99, {"Zn"}),
    "astm b39 nickel": (99.8, {"Ni"}),
}
EDITIONS = {
    "en 1978 cu-cath-1": "EN 1978:1998",
    "gb/t 467 cu-cath-1": "GB/T 467-2010",
    "gb/t 467 cu-cath-2": "GB/T 467-2010",
    "astm b115 grade 1": "ASTM B115-00(2004)",
    "astm b115 grade 2": "ASTM B115-00(2004)",
    "gb/t 470 zn99.995": "GB/T 470-2008",
    "astm b6 special high grade": "ASTM B6-00",
    "astm b39 nickel": "ASTM B39-79",
}


def test_every_grade_is_held_to_its_print():
    assert GRADES.keys() == SINGLE.keys() == TOGETHER.keys()


@pytest.mark.parametrize(("key", "limits"), SINGLE.items())
def test_limits_of_single_elements(key, limits):
    assert GRADES[key].limits_ppm == limits


@pytest.mark.parametrize(("key", "limits"), TOGETHER.items())
def test_limits_of_elements_together(key, limits):
    found = {tuple(sorted(part.elements)): part.limit_ppm for part in GRADES[key].sums}

    assert found == {tuple(sorted(elements)): limit for elements, limit in limits.items()}


@pytest.mark.parametrize("key", GRADES)
def test_the_least_of_the_metal(key):
    per_cent, counted = LEAST.get(key, (None, set()))

    least = GRADES[key].least_ppm
    assert (least is None) == (per_cent is None)
    assert least is None or least / 1e4 == pytest.approx(per_cent, rel=1e-12)
    assert set(GRADES[key].counted) == counted


@pytest.mark.parametrize(("key", "edition"), EDITIONS.items())
def test_editions(key, edition):
    assert GRADES[key].edition == edition


def test_nine_traces_of_nickel_must_lie_below():
    traces = GRADES["astm b39 nickel"].below_ppm

    # 0.005 % each.
    assert set(traces) == {"P", "Mn", "Si", "As", "Pb", "Sb", "Bi", "Sn", "Zn"}
    assert set(traces.values()) == {50.0}


def test_one_nickel_cathode_in_sixty_is_drilled():
    # ASTM B39-79, 6.1.1.1.
    assert GRADES["astm b39 nickel"].cathodes_per_sample == 60


def test_copper_of_the_purity_that_refineries_state_is_grade_a():
    # Looked up: 99.996 % cathode in a university homework; spread over the elements by hand,
    # 12 silver, 8 sulfur, 5 iron, 3 nickel, 1 each of lead, antimony, arsenic, 40 ppm at most.
    assay = dict.fromkeys(GRADES["en 1978 cu-cath-1"].sums[-1].elements, 0.0)
    assay |= {"Ag": 12.0, "S": 8.0, "Fe": 5.0, "Ni": 3.0, "Pb": 1.0, "Sb": 1.0, "As": 1.0}

    verdict = exceeded(assay, GRADES["en 1978 cu-cath-1"])

    assert verdict.is_within is True
