"""The first pit as found: perimeter, zones, members, stations with made-up bands, and its paper trail."""

from __future__ import annotations

from builders_site import BRIEF, CENTRES, CORNERS, FOOTING, HE, LENGTH, STEP, D, source

from ingest.model import OUTPUTS
from ingest.trail import Assumption, Finding, NotAssessed, Question, Reading
from sections import definition as d
from sections import model as m
from sections import proposal as proposal_rows


def deflection_band(distance: float) -> tuple[float, float]:
    """Made-up relief near a corner: a band that rises with the distance to it."""
    share = min(distance / 10.0, 1.0)
    return 0.55 + 0.37 * share, 0.90 + 0.19 * share


def word(low: float | None, high: float | None) -> str:
    if low is None or high is None:
        return "not_assessed"
    if low > 1.1:
        return "under_states"
    if high > 1.1:
        return "undecided"
    return "over_states" if low < 0.9 else "holds"


def to_corner(chainage: float) -> float:
    marks = (0.0, 30.0, 50.0, 80.0, 100.0)
    return min(abs(chainage - mark) for mark in marks)


def stations() -> proposal_rows.StationTable:
    chainage = tuple(i * STEP for i in range(int(LENGTH / STEP)))
    bands = [deflection_band(to_corner(c)) for c in chainage]
    blank = proposal_rows.StationOutput(
        low=(None,) * len(chainage),
        high=(None,) * len(chainage),
        verdict=("not_assessed",) * len(chainage),
        dominant=(None,) * len(chainage),
    )
    deflection = proposal_rows.StationOutput(
        low=tuple(b[0] for b in bands),
        high=tuple(b[1] for b in bands),
        verdict=tuple(word(*b) for b in bands),  # type: ignore[misc]
        dominant=("corner.class_table",) * len(chainage),
    )
    return proposal_rows.StationTable(
        chainage=chainage,
        floor=(-6.0,) * len(chainage),
        retained=(0.0,) * len(chainage),
        section=tuple(section_at(c) for c in chainage),
        outputs={o: deflection if o == "wall_deflection" else blank for o in OUTPUTS},
    )


def section_at(chainage: float) -> str | None:
    if to_corner(chainage) < 1.5:
        return None
    return "S1" if chainage < 30 or 50 < chainage < 80 else "S2"


def wall() -> m.Wall:
    return m.Wall(
        kind="contiguous", count=100, centres=CENTRES, diameter=D, top=0.0, toe=-12.0, continuity="jointed",
        structural=m.Structural(which="all", count=100, spacing=CENTRES), sources=(source("100"),),
    )  # fmt: skip


def member(kind: str, n: int, count: int, along: tuple[m.Along, ...], **more: object) -> m.Member:
    given = {
        "spacing": 5.0, "spacing_range": None, "inclination": 0.0, "skew": 0.0, "level": -1.5, "free_length": None,
        "bond_length": None, "sources": (source("201"),),
    }  # fmt: skip
    return m.Member(id=f"P1-{kind}-{n}", role=kind, count=count, along=along, **{**given, **more})  # type: ignore[arg-type]


def pit() -> m.Pit:
    zones = ((0.0, 30.0, "corner"), (30.0, 50.0, "corner"), (50.0, 80.0, "corner"), (80.0, 100.0, "corner"))
    return m.Pit(
        id="P1",
        closed=True,
        length=LENGTH,
        perimeter=CORNERS,
        ground_level=0.0,
        corners=tuple(
            m.Corner(at=at, point=p, interior_angle=90.0, kind="inside")
            for at, p in zip((0.0, 30.0, 50.0, 80.0), CORNERS, strict=True)
        ),
        runs=(m.Run(start=0.0, to=LENGTH, wall=wall()),),
        zones=tuple(
            m.Zone(
                id=f"P1-Z{n}", start=a, to=b, signature={"wall": "contiguous D 0.75", "floor": -6.0}, ended_by=why
            )
            for n, (a, b, why) in enumerate(zones, start=1)
        ),
        symmetry=(
            m.Axis(point=(115.0, 210.0), direction=90.0, overlap=1.0, complete=True),
            m.Axis(point=(115.0, 210.0), direction=0.0, overlap=1.0, complete=False, broken_by=("P1-footing-1",)),
        ),
        floors=(m.PitFloor(level=-6.0, dig_level=None, outline=CORNERS),),
        members=(
            member("strut", 1, 6, (
                m.Along(pit="P1", start=2.5, to=27.5, end="far"), m.Along(pit="P1", start=52.5, to=77.5, end="head")
            )),
            member("strut", 2, 4, (
                m.Along(pit="P1", start=32.5, to=47.5, end="far"), m.Along(pit="P1", start=82.5, to=97.5, end="head")
            )),
            member("waler", 1, 1, (m.Along(pit="P1", start=0.0, to=LENGTH, end="head"),), spacing=None),
        ),
        loads=(
            m.PitLoad(
                id="P1-footing-1", kind="footing", value=150.0, within_pit=False, points=FOOTING,
                sources=(source("310"),),
            ),
        ),
        receptors=(m.PitReceptor(id="P1-receptor-1", kind="building", points=FOOTING, distance=2.0),),
    )  # fmt: skip


def verdict(output: str, at: float) -> proposal_rows.Verdict:
    if output != "wall_deflection":
        return proposal_rows.Verdict(
            low=None, high=None, verdict="not_assessed", provisional=True, dominant=None, stage=None,
            sentence="No criterion speaks of this output: a waler runs along the wall, so neither class applies.",
        )  # fmt: skip
    low, high = deflection_band(to_corner(at))
    return proposal_rows.Verdict(
        low=low, high=high, verdict=word(low, high), provisional=True, dominant="corner.class_table",  # type: ignore[arg-type]
        stage="2", sentence=f"The real demand is {low:.2f} to {high:.2f} times the 2D value.",
    )  # fmt: skip


def section_wall(at: float, side: str, member_id: str) -> proposal_rows.SectionWall:
    return proposal_rows.SectionWall(
        pit="P1",
        at=at,
        side=side,
        member=member_id,
        verdicts={o: verdict(o, at) for o in OUTPUTS},  # type: ignore[arg-type]
    )


def chosen(definition: d.SectionDefinition) -> proposal_rows.ChosenSection:
    return proposal_rows.ChosenSection(
        id=definition.id, file=f"sections/{definition.id}.json", kind=definition.kind, line=definition.line,
        score=definition.score, severity={"depth": HE, "surcharge": 150.0}, walls=definition.walls,
        verdicts=definition.verdicts, represents=definition.represents,
    )  # fmt: skip


def trail() -> dict[str, object]:
    return {
        "questions": (
            Question(
                id="Q1",
                about="continuity of the wall along its length",
                readings=(
                    Reading(reading="jointed", evidence="separate piles 0.25 m apart", confidence=0.8),
                    Reading(reading="monolithic", evidence="a waler is drawn all round", confidence=0.2),
                ),
                brief_line='[[walls]] match = {layer = "WALL-PILES-CONTIGUOUS"}, continuity = "jointed"',
            ),
        ),
        "assumptions": (
            Assumption(
                id="A1", code="dig-allowance", about="dig level under the slab", text="No dig allowance was added.",
                basis="the brief gives none", sources=(source("levels.dig_allowance", "assumed", BRIEF),),
            ),
            Assumption(
                id="A2", code="stages", about="construction stages", text="The order of work follows the levels.",
                basis="no [[stages]] in the brief", confirm_by="contractor",
            ),
        ),
        "findings": (
            Finding(
                id="F1", code="water-missing", severity="check", where="P1", text="No water level was given.",
                sources=(),
            ),
        ),
        "not_assessed": (
            NotAssessed(
                what="overall and deep stability", why="outside the ratio of demands",
                what_to_do="check by a method of its own",
            ),
            NotAssessed(
                what="movements from pile installation and dewatering", why="no method in this tool",
                what_to_do="estimate from experience on like ground",
            ),
        ),
    }  # fmt: skip
