"""The unit of a drawing: what it declares, whether its content bears that out, and what to ask when not."""

from __future__ import annotations

from ingest.dxf.measures import Measures, written_length
from ingest.errors import InputError
from ingest.record import record
from ingest.trail import Assumption, Finding, Question, Reading
from ingest.units import METRES, unit_name

INSUNITS: dict[int, str] = {
    1: "inch", 2: "foot", 3: "mile", 4: "mm", 5: "cm", 6: "m", 7: "km", 10: "yard", 12: "nm", 13: "um", 14: "dm",
    15: "dam", 16: "hm", 21: "us_survey_foot", 22: "us_survey_inch", 23: "us_survey_yard", 24: "us_survey_mile",
}  # fmt: skip
"""Values of $INSUNITS that a site may be drawn in (DXF reference, header variable INSUNITS); 0 is none."""
CANDIDATES = ("m", "mm", "inch", "foot", "cm")
METRIC = ("m", "cm", "mm")
FEET_AND_INCHES = ("3", "4")
"""Values of $LUNITS that show lengths in feet and inches; one drawing unit is then one inch."""


@record
class Declared:
    """Header variables as the file itself has them, None where it has none."""

    insunits: str | None = None
    lunits: str | None = None
    measurement: str | None = None
    """$MEASUREMENT: 1 for a drawing begun in metric units."""


@record
class DrawingUnit:
    """The unit chosen, and what is to be said about it."""

    name: str
    metres: float
    findings: tuple[Finding, ...] = ()
    questions: tuple[Question, ...] = ()
    assumptions: tuple[Assumption, ...] = ()


@record
class Vote:
    """What speaks for or against one unit."""

    unit: str
    points: int
    evidence: str
    decisive: bool = False
    """Whether something written says so, not only that sizes look right."""
    doors: bool = False


def find_unit(file: str, declared: Declared, length_unit: str | None, measures: Measures) -> DrawingUnit:
    """Settle the unit of a drawing.

    Args:
        file: File name, for the brief line.
        declared: What its header says.
        length_unit: The brief's unit, which overrides everything.
        measures: Lengths in drawing units.

    Returns:
        The unit. Without a plausible declaration the best supported unit is assumed and asked about.

    Raises:
        InputError: For a unit of the brief that is not known.
    """
    if length_unit is not None:
        try:
            name = unit_name(length_unit)
        except ValueError as fault:
            raise InputError(file, "length_unit", str(fault), f"use one of {', '.join(METRES)}") from None
        return DrawingUnit(name=name, metres=METRES[name])
    said = declared.insunits or ""
    code = int(said) if said.lstrip("-").isdigit() else 0
    stated = INSUNITS.get(code)
    votes = sorted(
        (_vote(unit, measures, declared) for unit in dict.fromkeys([*filter(None, [stated]), *CANDIDATES])),
        key=lambda vote: -vote.points,
    )
    best = votes[0]
    if stated is None:
        return _guessed(file, code, votes)
    own = next(vote for vote in votes if vote.unit == stated)
    written = any(vote.decisive for vote in votes) and not own.decisive
    doors = best.doors and not own.doors and best.points > own.points
    if own.points >= 0 and own.points >= best.points - 1 and not written and not doors:
        return DrawingUnit(name=stated, metres=METRES[stated])
    return _contradicted(file, code, own, votes, measures)


def _guessed(file: str, code: int, votes: list[Vote]) -> DrawingUnit:
    best = votes[0]
    said = f"$INSUNITS = {code}" if code else "the drawing declares no unit"
    text = f"{said}; {best.unit} is taken because {best.evidence or 'nothing in it tells the unit'}"
    return _asked(file, best.unit, "unit-missing", text, votes)


def _contradicted(file: str, code: int, own: Vote, votes: list[Vote], measures: Measures) -> DrawingUnit:
    """The declared unit against better evidence: it is left only for something written, or where it is absurd."""
    said = f"the drawing says {own.unit} ($INSUNITS = {code}), but {own.evidence or 'its sizes do not bear that out'}"
    written = next((vote for vote in votes if vote.decisive), None)
    others = [vote for vote in votes if vote is not own]
    size = (measures.extent() or 1.0) * METRES[own.unit]
    clear = others[0].points >= 3 and others[0].points >= others[1].points + 2
    taken = written or (others[0] if clear and not 1.0 <= size <= 50_000.0 else None)
    if taken is None:
        text = f"{said}; {own.unit} is kept, {others[0].unit} would fit better: {others[0].evidence}"
        return _asked(file, own.unit, "unit-implausible", text, votes)
    text = f"{said}; {taken.unit} is taken because {taken.evidence}"
    return _asked(file, taken.unit, "unit-implausible", text, votes)


def _asked(file: str, unit: str, code: str, text: str, votes: list[Vote]) -> DrawingUnit:
    line = f'[files."{file}"]\nlength_unit = "{unit}"'
    shown = [vote for vote in votes if vote.unit == unit or vote.points >= votes[0].points - 1][:4]
    weights = [2.0 ** max(vote.points, -4) for vote in shown]
    readings = tuple(
        Reading(reading=vote.unit, evidence=vote.evidence or "no evidence", confidence=round(weight / sum(weights), 2))
        for vote, weight in zip(shown, weights, strict=True)
    )
    finding = Finding(id=f"{code}:{file}", code=code, severity="check", where=file, text=text)
    question = Question(id=f"{code}:{file}", about=f"unit of length of {file}", readings=readings, brief_line=line)
    assumption = Assumption(
        id=f"{code}:{file}", code=code, about=file, text=f"one drawing unit is one {unit}", basis=text
    )
    return DrawingUnit(
        name=unit, metres=METRES[unit], findings=(finding,), questions=(question,), assumptions=(assumption,)
    )


def _vote(unit: str, measures: Measures, declared: Declared) -> Vote:
    """Points for a unit; the ranges are common practice, no source, but a pit of 5 to 500 m."""
    metre = METRES[unit]
    notes: list[tuple[int, str]] = []
    extent = measures.extent()
    if extent is not None:
        size = extent * metre
        points = 2 if 5.0 <= size <= 500.0 else 1 if 2.0 <= size <= 2000.0 else -2
        notes.append((points, f"the drawing is then {size:.3g} m wide"))
    notes += _common("circles are then {:.3g} m across", measures.circles, metre, (0.3, 2.5), least=4)
    notes += _common("letters are then {:.2g} m high", measures.letters, metre, (0.04, 2.0), least=3)
    doors = [radius * metre for radius, count in measures.doors.items() if count > 1 and 0.6 <= radius * metre <= 1.1]
    notes += [(2, f"door swings are then {min(doors):.3g} m")] if doors else []
    if declared.measurement == "1" and unit in METRIC:
        notes.append((1, "it was begun in metric units"))
    shown = _written(unit, measures, declared.lunits)
    if shown:
        notes.append((4, shown))
    notes += _dimensions(measures, metre)
    points = sum(point for point, _ in notes)
    words = [text for point, text in notes if (point > 0) == (points > 0)]
    decisive = any(point >= 4 for point, _ in notes)
    return Vote(unit=unit, points=points, evidence=", ".join(words), decisive=decisive, doors=bool(doors))


def _written(unit: str, measures: Measures, lunits: str | None) -> str:
    """What the drawing says by the way it shows lengths, "" for nothing."""
    total = sum(measures.shown_in.values())
    if total and measures.shown_in.get(unit, 0) * 2 > total:
        feet = " in feet and inches or" if unit == "inch" else ""
        return f"its dimensions are shown{feet} with the mark of the {unit}"
    if not total and lunits in FEET_AND_INCHES and unit == "inch":
        return "it shows lengths in feet and inches"
    return ""


def _common(
    words: str, sizes: dict[float, int], metre: float, fair: tuple[float, float], *, least: int
) -> list[tuple[int, str]]:
    """A point when most of the sizes met are fair ones."""
    total = sum(sizes.values())
    if total < least:
        return []
    middle = sorted(size for size, count in sizes.items() for _ in range(min(count, 1000)))
    median = middle[len(middle) // 2] * metre
    return [(1 if fair[0] <= median <= fair[1] else 0, words.format(median))]


def _dimensions(measures: Measures, metre: float) -> list[tuple[int, str]]:
    """Points when dimension texts that name their unit agree with what they measure."""
    stated = [(length, written_length(text), text) for length, text in measures.dimensions]
    known = [(length, said, text) for length, said, text in stated if said]
    if not known:
        return []
    agree = [(length, text) for length, said, text in known if abs(length * metre / said - 1.0) < 0.02]
    if len(agree) * 2 > len(known):
        length, text = agree[0]
        return [(4, f'the dimension "{text}" measures {length:.6g} units')]
    return [(-2, f'the dimension "{known[0][2]}" would measure {known[0][0] * metre:.4g} m')]
