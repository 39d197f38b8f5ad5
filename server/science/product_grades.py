"""Product standards of cathode metal: their limits, and which of them an assay exceeds."""

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from server.science.arrays import not_negative
from server.science.errors import UnknownName


@dataclass(frozen=True)
class SumLimit:
    """A limit on several elements together."""

    name: str
    elements: tuple[str, ...]
    limit_ppm: float


@dataclass(frozen=True)
class Grade:
    """Limits of one grade in one edition of a standard, mass parts per million.

    `limits_ppm` holds the elements limited one by one, `below_ppm` those that the standard wants
    less than their figure, `sums` those limited together. `least_ppm` is the least of the elements
    `counted`, the metal itself and what the standard counts with it; None where it sets none.
    Standards are revised, so the edition stands with the limits, and `status` says how these came
    here. `cathodes_per_sample` is how many cathodes one drilled sample stands for, where the
    standard says it.
    """

    key: str
    title: str
    edition: str
    status: str
    limits_ppm: Mapping[str, float]
    sums: tuple[SumLimit, ...] = ()
    below_ppm: Mapping[str, float] = field(default_factory=dict)
    least_ppm: float | None = None
    counted: tuple[str, ...] = ()
    cathodes_per_sample: int | None = None


@dataclass(frozen=True)
class Breach:
    """One limit that an assay exceeds: its name, what was found, the limit."""

    name: str
    found_ppm: float
    limit_ppm: float


@dataclass(frozen=True)
class Verdict:
    """Limits exceeded, and limits that could not be judged with the elements missing for each."""

    breaches: tuple[Breach, ...]
    not_judged: Mapping[str, tuple[str, ...]]

    @property
    def is_within(self) -> bool | None:
        """Tell whether every limit is met; None where none is exceeded but some are not judged."""
        if self.breaches:
            return False
        return None if self.not_judged else True


# Judgement: decimals added in binary miss their sum by less than this, and no assay reads so fine.
ROUNDING_PPM = 1e-6
# Groups of EN 1978 and GB/T 467, whose elements are limited together: looked up with the limits.
ARSENIC_GROUP = ("As", "Cd", "Cr", "Mn", "P", "Sb")
# As above.
IRON_GROUP = ("Co", "Fe", "Ni", "Si", "Sn", "Zn")
# As above.
GRADE_A_ELEMENTS = ("Ag", "Bi", "Pb", "S", "Se", "Te", *ARSENIC_GROUP, *IRON_GROUP)
# As above; the two standards have the same groups.
GRADE_A_SUMS = (
    SumLimit("As + Cd + Cr + Mn + P + Sb", ARSENIC_GROUP, 15.0),
    SumLimit("Bi + Se + Te", ("Bi", "Se", "Te"), 3.0),
    SumLimit("Se + Te", ("Se", "Te"), 3.0),
    SumLimit("Co + Fe + Ni + Si + Sn + Zn", IRON_GROUP, 20.0),
    SumLimit("sum of all", GRADE_A_ELEMENTS, 65.0),
)
# As above.
GRADE_A_LIMITS: dict[str, float] = {
    "Ag": 25.0, "As": 5.0, "Bi": 2.0, "Fe": 10.0, "Pb": 5.0, "S": 15.0, "Sb": 4.0, "Se": 2.0,
    "Te": 2.0,
}  # fmt: skip
# ASTM B115-00(2004), table 1, grade 1: looked up in a stored copy.
B115_GRADE_1_LIMITS: dict[str, float] = {
    "Ag": 25.0, "As": 5.0, "Bi": 1.0, "Fe": 10.0, "Ni": 10.0, "Pb": 5.0, "S": 15.0, "Sb": 4.0,
    "Se": 2.0, "Sn": 5.0, "Te": 2.0,
}  # fmt: skip
# EN 1179 Z1, ISO 752 ZN-1 and ASTM B6 LME grade, identical: looked up on an exchange's page.
ZINC_99_995_LIMITS: dict[str, float] = {
    "Al": 10.0, "Cd": 30.0, "Cu": 10.0, "Fe": 20.0, "Pb": 30.0, "Sn": 10.0,
}  # fmt: skip
# ASTM B6, special high grade, table 1: from memory.
ZINC_SHG_LIMITS: dict[str, float] = {
    "Al": 20.0, "Cd": 30.0, "Cu": 20.0, "Fe": 30.0, "Pb": 30.0, "Sn": 10.0,
}  # fmt: skip
# ASTM B39-79, table 1: nine elements, each less than 0.005 %; looked up in stored copies.
NICKEL_TRACES = ("P", "Mn", "Si", "As", "Pb", "Sb", "Bi", "Sn", "Zn")

# Every grade here, by key; the source of each stands in its edition and status.
GRADES: dict[str, Grade] = {
    grade.key: grade
    for grade in (
        Grade(
            "en 1978 cu-cath-1",
            "Copper, EN 1978 Cu-CATH-1 (grade A)",
            "EN 1978:1998",
            "looked up in an exchange's contract rules that quote it",
            GRADE_A_LIMITS,
            GRADE_A_SUMS,
        ),
        Grade(
            "gb/t 467 cu-cath-1",
            "Copper, GB/T 467 Cu-CATH-1 (grade A)",
            "GB/T 467-2010",
            "looked up in notes on the standard; an exchange's rules print bismuth tenfold, a slip",
            GRADE_A_LIMITS,
            GRADE_A_SUMS,
        ),
        Grade(
            "gb/t 467 cu-cath-2",
            "Copper, GB/T 467 Cu-CATH-2 (standard copper no. 1)",
            "GB/T 467-2010",
            "looked up in notes on the standard",
            {"As": 15.0, "Bi": 5.0, "Fe": 25.0, "Ni": 20.0, "P": 10.0, "Pb": 20.0, "S": 25.0,
             "Sb": 15.0, "Sn": 10.0, "Zn": 20.0},
            least_ppm=999_500.0,
            counted=("Cu", "Ag"),
        ),
        Grade(
            "astm b115 grade 1",
            "Copper, ASTM B115 cathode grade 1",
            "ASTM B115-00(2004)",
            "looked up in a stored copy of its table 1; later editions not checked",
            B115_GRADE_1_LIMITS,
            (
                SumLimit("Se + Te + Bi", ("Se", "Te", "Bi"), 3.0),
                SumLimit("total", tuple(B115_GRADE_1_LIMITS), 65.0),
            ),
        ),
        Grade(
            "astm b115 grade 2",
            "Copper, ASTM B115 cathode grade 2",
            "ASTM B115-00(2004)",
            "looked up in a stored copy of its table 1; later editions not checked",
            {"Ag": 70.0, "As": 15.0, "Bi": 3.0, "Fe": 25.0, "Ni": 20.0, "Pb": 40.0, "S": 25.0,
             "Sb": 15.0, "Se": 10.0, "Sn": 10.0, "Te": 5.0},
            least_ppm=999_500.0,
            counted=("Cu", "Ag"),
        ),
        Grade(
            "zinc 99.995",
            "Zinc 99.995, EN 1179 Z1, ISO 752 ZN-1, ASTM B6 LME grade",
            "as listed by an exchange; the three are identical",
            "looked up on the exchange's quality page",
            ZINC_99_995_LIMITS,
            (SumLimit("total", tuple(ZINC_99_995_LIMITS), 50.0),),
            least_ppm=999_950.0,
            counted=("Zn",),
        ),
        Grade(
            "gb/t 470 zn99.995",
            "Zinc, GB/T 470 Zn99.995",
            "GB/T 470-2008",
            "cadmium and iron looked up on an exchange's quality page; the rest as zinc 99.995",
            ZINC_99_995_LIMITS | {"Cd": 20.0, "Fe": 10.0},
            (SumLimit("total", tuple(ZINC_99_995_LIMITS), 50.0),),
            least_ppm=999_950.0,
            counted=("Zn",),
        ),
        Grade(
            "astm b6 special high grade",
            "Zinc, ASTM B6 special high grade",
            "ASTM B6-00",
            "least zinc looked up in the standard's first page; limits from memory",
            ZINC_SHG_LIMITS,
            (SumLimit("total", tuple(ZINC_SHG_LIMITS), 100.0),),
            least_ppm=999_900.0,
            counted=("Zn",),
        ),
        Grade(
            "astm b39 nickel",
            "Nickel, ASTM B39",
            "ASTM B39-79",
            "looked up in stored copies of several reapprovals",
            {"C": 300.0, "Co": 1500.0, "Cu": 200.0, "Fe": 200.0, "S": 100.0},
            below_ppm=dict.fromkeys(NICKEL_TRACES, 50.0),
            least_ppm=998_000.0,
            counted=("Ni",),
            cathodes_per_sample=60,
        ),
    )
}  # fmt: skip


def grade(key: str) -> Grade:
    """The grade of a key, capitals or not.

    Parameters
    ----------
    key : str
        Key of a grade, such as ``en 1978 cu-cath-1``.

    Returns
    -------
    Grade
        Its limits, with edition and status.

    Raises
    ------
    UnknownName
        If no grade has that key; it offers the near ones.

    Source
    ------
    Each grade names its own.

    Example
    -------
    >>> grade("EN 1978 Cu-CATH-1").limits_ppm["Bi"]
    2.0
    """
    wanted = key.strip().lower()
    if wanted not in GRADES:
        raise UnknownName("product grade", key, GRADES)
    return GRADES[wanted]


def exceeded(assay_ppm: Mapping[str, float], grade: Grade) -> Verdict:
    """Limits of a grade that an assay exceeds, and those that it leaves open.

    A value equal to its limit passes, unless the standard wants less than the figure; nothing is
    allowed for the error of the analysis, because the standards allow nothing. An element that
    was not assayed is not judged, which is said. A sum with missing elements is exceeded when the
    others alone exceed it, and not judged otherwise.

    Parameters
    ----------
    assay_ppm : mapping of str to float
        Mass parts per million by chemical symbol; not negative. NaN counts as not assayed, and
        elements that the grade does not limit are passed over.
    grade : Grade
        The grade.

    Returns
    -------
    Verdict
        Breaches in the order of the standard, and the missing elements of each limit not judged.

    Raises
    ------
    OutOfRange
        If a value is negative or infinite.

    Source
    ------
    ASTM B115-00(2004), table 1: limits carry no allowance for the error of measurement.

    Example
    -------
    >>> verdict = exceeded({"Bi": 2.0, "Se": 1.5, "Te": 0.2}, GRADES["en 1978 cu-cath-1"])
    >>> [breach.name for breach in verdict.breaches]
    ['Bi + Se + Te']
    >>> verdict.not_judged["Fe"]
    ('Fe',)
    """
    found = {
        symbol: float(not_negative(f"assay_ppm of {symbol}", ppm))
        for symbol, ppm in assay_ppm.items()
    }
    known = {symbol: ppm for symbol, ppm in found.items() if not math.isnan(ppm)}
    breaches: list[Breach] = []
    not_judged: dict[str, tuple[str, ...]] = {}
    if grade.least_ppm is not None:
        name = "least " + " + ".join(grade.counted)
        missing = tuple(symbol for symbol in grade.counted if symbol not in known)
        purity = sum(known.get(symbol, 0.0) for symbol in grade.counted)
        if missing:
            not_judged[name] = missing
        elif purity < grade.least_ppm - ROUNDING_PPM:
            breaches.append(Breach(name, purity, grade.least_ppm))
    for symbol, limit in (dict(grade.limits_ppm) | dict(grade.below_ppm)).items():
        if symbol not in known:
            not_judged[symbol] = (symbol,)
        elif known[symbol] > limit or (symbol in grade.below_ppm and known[symbol] == limit):
            breaches.append(Breach(symbol, known[symbol], limit))
    for together in grade.sums:
        missing = tuple(symbol for symbol in together.elements if symbol not in known)
        total = sum(known.get(symbol, 0.0) for symbol in together.elements)
        if total > together.limit_ppm + ROUNDING_PPM:
            breaches.append(Breach(together.name, total, together.limit_ppm))
        elif missing:
            not_judged[together.name] = missing
    return Verdict(tuple(breaches), not_judged)
