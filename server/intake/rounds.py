"""A round typed into a form: read in one dialect, asked about, and taken in whole or not at all."""

import re
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from zoneinfo import ZoneInfo

from sqlalchemy.orm import Session

from server.intake.errors import row_reason
from server.intake.results import RecordResult
from server.intake.sheets import records_chunk
from server.intake.sitting import IntakeSettings, Judged, Sitting, given_of
from server.intake.take_in import answers_of, take_in_records
from server.intake.times import AHEAD_MS, TimeReader, written
from server.storage.plant import House
from server.storage.turns import take_turn

SOURCE = "form"
KEEP, SUGGESTED = "keep", "suggested"
AT, CURRENT = "at", "current"

# English; pages translate them.
MIXED = "Decimal points and decimal commas are both typed in this form; use one of them throughout."
NOTHING = "Nothing was typed."
NO_NUMBER = "“{typed}” is not a number."

_NUMBER = re.compile(r"[+-]?(\d+([.,]\d*)?|[.,]\d+)", re.ASCII)


@dataclass(frozen=True)
class TypedRound:
    """A round as it was typed, word for word."""

    section: str
    at: str
    """Local time as a field of the browser gives it, with its offset where one was asked for."""
    current: str = ""
    volts: Mapping[int, str] = field(default_factory=dict)
    """By the number of the cell; blank where it was skipped."""
    answers: Mapping[int, str] = field(default_factory=dict)
    """KEEP or SUGGESTED for the readings that were asked about, by cell."""
    asked: Mapping[int, str] = field(default_factory=dict)
    """What was typed when it was asked about: the answer is to that alone."""

    def answer(self, number: int) -> str:
        """The answer that was given for what is typed now."""
        if self.asked.get(number) != self.volts.get(number, "").strip():
            return ""
        return self.answers.get(number, "")


@dataclass(frozen=True)
class Question:
    """A reading that is not believed as it stands."""

    typed: str
    reason: str
    suggested: str | None


@dataclass(frozen=True)
class RoundOutcome:
    """What became of a typed round; nothing is stored while there is a fault or a question."""

    at_ms: int | None = None
    decimal: str = "."
    faults: Mapping[str, str] = field(default_factory=dict)
    """By field: AT, CURRENT, the number of a cell, or nothing for the whole."""
    questions: Mapping[int, Question] = field(default_factory=dict)
    offsets: tuple[str, ...] = ()
    """The moments between which a local time that came twice has to be told."""
    stored: int = 0
    suspect: int = 0
    """Of those stored."""
    known: int = 0
    """Readings that were in the books already."""
    has_current: bool = False

    @property
    def is_taken(self) -> bool:
        """Whether the round is in the books."""
        return not self.faults and not self.questions


def take_in_round(
    session: Session,
    house: House,
    typed: TypedRound,
    sender: str,
    now_ms: int,
    settings: IntakeSettings,
) -> RoundOutcome:
    """Take in a round and the current typed with it, unless something is to be asked first."""
    decimal, faults = _dialect(typed)
    faults = _no_numbers(typed) | faults
    at_ms, fault, offsets = moment_typed(typed.at, house, now_ms, settings)
    if fault:
        faults[AT] = fault
    if not _texts(typed):
        faults[""] = NOTHING
    outcome = RoundOutcome(at_ms=at_ms, decimal=decimal, faults=faults, offsets=offsets)
    if faults or at_ms is None:
        return outcome
    take_turn(session)
    with session.begin_nested() as attempt:
        round_ = _Round(session, house, typed, written(at_ms, 0), sender, now_ms, settings)
        outcome = round_.taken(outcome)
        if not outcome.is_taken:
            attempt.rollback()
    return outcome


def moment_typed(
    text: str, house: House, now_ms: int, settings: IntakeSettings
) -> tuple[int | None, str, tuple[str, ...]]:
    """The moment of a local time that was typed, or what is wrong with it.

    Where the clock showed it twice, the two moments with their offsets are given as well.
    """
    latest_ms = now_ms + settings.future_tolerance_s * 1000 - AHEAD_MS
    moments, faults = TimeReader(ZoneInfo(house.time_zone), latest_ms).read([text.strip()])
    if not faults:
        return int(moments[0]), "", ()
    fault = faults[0]
    reason = row_reason(fault.code, column=AT, found=fault.found, expected=fault.expected)
    either = fault.expected.removeprefix("an offset, ").split(" or ")
    return None, reason, tuple(either) if fault.code == "time_twice" else ()


def _texts(typed: TypedRound) -> dict[str, str]:
    """What was typed as a number, by field; blanks are left out."""
    texts = {CURRENT: typed.current} | {str(n): text for n, text in typed.volts.items()}
    return {name: text.strip() for name, text in texts.items() if text.strip()}


def _no_numbers(typed: TypedRound) -> dict[str, str]:
    """A fault at each field that holds no number."""
    return {
        name: NO_NUMBER.format(typed=text)
        for name, text in _texts(typed).items()
        if not _NUMBER.fullmatch(text)
    }


def _dialect(typed: TypedRound) -> tuple[str, dict[str, str]]:
    """The decimal sign of the form; where both are typed, a fault at each of the fewer ones."""
    texts = {name: text for name, text in _texts(typed).items() if _NUMBER.fullmatch(text)}
    commas = [name for name, text in texts.items() if "," in text]
    points = [name for name, text in texts.items() if "." in text]
    if commas and points:
        fewer = commas if len(commas) <= len(points) else points
        return ".", dict.fromkeys(fewer, MIXED)
    return ("," if commas else "."), {}


@dataclass(frozen=True)
class _Round:
    """A round on its way in."""

    session: Session
    house: House
    typed: TypedRound
    at: str
    sender: str
    now_ms: int
    settings: IntakeSettings

    def taken(self, outcome: RoundOutcome) -> RoundOutcome:
        """Store the current, judge the voltages by it, and store them where nothing is asked."""
        current = self.typed.current.strip().replace(",", ".")
        if current:
            section = self.typed.section
            result = self._stored(
                "current", [{"at": self.at, "section": section, "current_ka": current}]
            )[0]
            if result.status == "held":
                return replace(outcome, faults={CURRENT: result.reason or ""})
        values = {
            number: text.strip().replace(",", ".")
            for number, text in self.typed.volts.items()
            if text.strip()
        }
        if not values:
            return replace(outcome, has_current=True)
        faults, questions = self._judged(values)
        meant = {
            number: question.suggested
            for number, question in questions.items()
            if question.suggested and self.typed.answer(number) == SUGGESTED
        }
        if meant:
            values |= meant
            faults, questions = self._judged(values)
        asked = {n: q for n, q in questions.items() if self.typed.answer(n) != KEEP}
        if faults or asked:
            return replace(outcome, faults=faults, questions=asked)
        results = self._stored("volts", self._records(values))
        return replace(
            outcome,
            has_current=bool(current),
            stored=sum(result.status in ("stored", "suspect") for result in results),
            suspect=sum(result.status == "suspect" for result in results),
            known=sum(result.status == "duplicate" for result in results),
        )

    def _records(self, values: Mapping[int, str]) -> list[dict[str, object]]:
        return [
            {"at": self.at, "section": self.typed.section, "cell": number, "volts": text}
            for number, text in values.items()
        ]

    def _stored(self, kind: str, records: list[dict[str, object]]) -> list[RecordResult]:
        return take_in_records(
            self.session,
            self.house,
            kind,
            records,
            self.sender,
            self.now_ms,
            self.settings,
            source=SOURCE,
        )

    def _judged(self, values: Mapping[int, str]) -> tuple[dict[str, str], dict[int, Question]]:
        """Faults by cell, and what is not believed, of voltages that are not stored yet."""
        numbers = list(values)
        given = given_of(self.house, self.now_ms, self.settings, "")
        sitting = Sitting("volts", given, self.settings, file=SOURCE)
        chunk = records_chunk("volts", self._records(values), file=SOURCE)
        judged = sitting.judge(self.session, chunk, sitting.read(chunk))
        answers = answers_of(judged, [None] * len(numbers))
        faults = {
            str(number): answer.reason or ""
            for number, answer in zip(numbers, answers, strict=True)
            if answer.status == "held"
        }
        return faults, _questions(judged, numbers, values)


def _questions(
    judged: Judged, numbers: list[int], values: Mapping[int, str]
) -> dict[int, Question]:
    questions = {}
    for place, doubt in sorted(judged.verdicts.doubts.items()):
        number = numbers[int(judged.rows.index[place])]
        questions[number] = Question(values[number], doubt.reason, doubt.suggested)
    return questions
