"""Example objects for the export tests, written by hand: the rectangular first pit, and a pit that shows every mark.

first pit: wall axis (100, 200) to (130, 220), 100 contiguous piles D 0.75 m at 1.00 m, one level of struts at -1.50,
footing 3.0 x 2.0 m behind the north wall. Figures: A = pi D^2/4 = 0.441786 m2, I = pi D^4/64 = 0.0155316 m4 (geometry);
E = 33e6 kPa (C30/37, EN 1992-1-1 table 3.1, recalled); CHS 508x16 A = pi (0.508^2 - 0.476^2)/4 = 0.0247306 m2,
E = 210e6 kPa (EN 1993-1-1 cl. 3.2.6, recalled), so EA = 5193429.65 kN and at 5 m EA' = 1038685.93 kN/m.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import pi

from ingest.model import (
    GOVERNING,
    OUTPUTS,
    BarSection,
    Borehole,
    Frame,
    InputFile,
    Layer,
    Limits,
    Load,
    Pile,
    Plate,
    Registered,
    Site,
    Support,
    Waler,
)
from ingest.trail import Assumption, Finding, LedgerEntry, NotAssessed, Question, Reading, Source
from sections import definition as d
from sections import model as m

D, CENTRES, E_CONCRETE, E_STEEL = 0.75, 1.0, 33.0e6, 210.0e6
PILE_A, PILE_I = pi * D**2 / 4, pi * D**4 / 64
CHS_A = pi * (0.508**2 - 0.476**2) / 4
STRUT_EA = E_STEEL * CHS_A
DRAWING = "first_pit.dxf"
BRIEF = "first_pit.toml"
CORNERS = ((100.0, 200.0), (130.0, 200.0), (130.0, 220.0), (100.0, 220.0))
LENGTH, STEP = 100.0, 0.5
HE = 6.0


@dataclass(frozen=True, kw_only=True)
class Job:
    """What the engine hands over to the export room."""

    site: Site
    proposal: m.Proposal
    definitions: tuple[d.SectionDefinition, ...]


def source(item: str, how: str = "read", file: str = DRAWING) -> Source:
    return Source(file=file, item=item, how=how)  # type: ignore[arg-type]


def point_at(chainage: float) -> tuple[float, float]:
    """Point of the first pit's wall axis at a chainage."""
    c = chainage % LENGTH
    if c <= 30:
        return (100 + c, 200.0)
    if c <= 50:
        return (130.0, 200 + c - 30)
    if c <= 80:
        return (130 - (c - 50), 220.0)
    return (100.0, 220 - (c - 80))


# --- site ---------------------------------------------------------------------------------------------------------


def struts() -> tuple[Support, ...]:
    bar = BarSection(designation="CHS 508x16", A=CHS_A, diameter=0.508)
    across = [((x, 220.0, -1.5), (x, 200.0, -1.5)) for x in (102.5, 107.5, 112.5, 117.5, 122.5, 127.5)]
    along = [((100.0, y, -1.5), (130.0, y, -1.5)) for y in (202.5, 207.5, 212.5, 217.5)]
    return tuple(
        Support(
            id=f"strut-{n}", role="strut", head=head, far=far, section=bar, EA=STRUT_EA, layer="STRUTS", waler=True,
            sources=(source(f"2{n:02X}"),),
        )
        for n, (head, far) in enumerate(across + along, start=1)
    )  # fmt: skip


def piles() -> tuple[Pile, ...]:
    return tuple(
        Pile(
            id=f"pile-{n}", centre=point_at(float(n)), diameter=D, kind="contiguous", top=0.0, toe=-12.0,
            layer="WALL-PILES-CONTIGUOUS", sources=(source(f"1{n:02X}"),),
        )
        for n in range(100)
    )  # fmt: skip


FOOTING = ((113.5, 222.0), (116.5, 222.0), (116.5, 224.0), (113.5, 224.0))


def site(title: str = "First pit (invented)") -> Site:
    return Site(
        name=title,
        date="2026-01-15",
        inputs=(
            InputFile(
                file=DRAWING, sha256="ab" * 32, kind="dxf", schema_or_version="AC1032", length_unit="m",
                registered=Registered(),
            ),
            InputFile(
                file=BRIEF, sha256="cd" * 32, kind="brief", schema_or_version="TOML", length_unit="m", registered=None
            ),
        ),
        frame=Frame(),
        ground_level=0.0,
        formation=-6.0,
        wall_top=0.0,
        piles=piles(),
        supports=struts(),
        walers=(Waler(id="waler-1", points=(*CORNERS, CORNERS[0]), level=-1.5, sources=(source("300"),)),),
        plates=(Plate(id="footing-1", role="footing", outline=FOOTING, top=-0.5, underside=-1.0),),
        loads=(Load(id="load-1", kind="footing", value=150.0, points=FOOTING, level=-1.0, sources=(source("310"),)),),
        boreholes=(
            Borehole(
                id="BH1",
                location=(120.0, 228.0, 0.0),
                layers=(Layer(top=0.0, base=-3.0, code="MG"), Layer(top=-3.0, base=-20.0, code="CLAY")),
                water=None,
            ),
        ),
    )  # fmt: skip


# --- proposal -----------------------------------------------------------------------------------------------------


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


def stations() -> m.StationTable:
    chainage = tuple(i * STEP for i in range(int(LENGTH / STEP)))
    bands = [deflection_band(to_corner(c)) for c in chainage]
    blank = m.StationOutput(
        low=(None,) * len(chainage),
        high=(None,) * len(chainage),
        verdict=("not_assessed",) * len(chainage),
        dominant=(None,) * len(chainage),
    )
    deflection = m.StationOutput(
        low=tuple(b[0] for b in bands),
        high=tuple(b[1] for b in bands),
        verdict=tuple(word(*b) for b in bands),  # type: ignore[misc]
        dominant=("corner.class_table",) * len(chainage),
    )
    return m.StationTable(
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


def verdict(output: str, at: float) -> m.Verdict:
    if output != "wall_deflection":
        return m.Verdict(
            low=None, high=None, verdict="not_assessed", provisional=True, dominant=None, stage=None,
            sentence="No criterion speaks of this output: a waler runs along the wall, so neither class applies.",
        )  # fmt: skip
    low, high = deflection_band(to_corner(at))
    return m.Verdict(
        low=low, high=high, verdict=word(low, high), provisional=True, dominant="corner.class_table",  # type: ignore[arg-type]
        stage="2", sentence=f"The real demand is {low:.2f} to {high:.2f} times the 2D value.",
    )  # fmt: skip


def section_wall(at: float, side: str, member_id: str) -> m.SectionWall:
    return m.SectionWall(
        pit="P1",
        at=at,
        side=side,
        member=member_id,
        verdicts={o: verdict(o, at) for o in OUTPUTS},  # type: ignore[arg-type]
    )


def chosen(definition: d.SectionDefinition) -> m.ChosenSection:
    return m.ChosenSection(
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


# --- section definitions -------------------------------------------------------------------------------------------


def wall_member(n: int, side: str, x: float) -> d.SectionMember:
    EA, EI = E_CONCRETE * PILE_A, E_CONCRETE * PILE_I
    return d.SectionMember(
        id=f"P1-wall-{n}", role="wall", side=side, material="C30", form="beam", points=((x, 0.0), (x, -12.0)),  # type: ignore[arg-type]
        ends=(d.End(to="ground", at=(x, -12.0), joint="free"),),
        real=d.RealMember(EA_kN=EA, EI_kNm2=EI, length=12.0, spacing=CENTRES, diameter=D, centres=CENTRES,
                          count=30, E_kPa=E_CONCRETE, weight_kN_per_m=25 * PILE_A),
        section=d.PerMetre(EA_kN_per_m=EA / CENTRES, EI_kNm2_per_m=EI / CENTRES,
                           weight_kN_per_m2=25 * PILE_A / CENTRES, thickness=D * 3**0.5 / 2,
                           E_kPa=EA / CENTRES / (D * 3**0.5 / 2)),
        smear=(
            d.Smear(quantity="axial stiffness", real_key="EA_kN", section_key="EA_kN_per_m", factor=1 / CENTRES,
                    parts=d.SmearParts(per_spacing=1 / CENTRES)),
            d.Smear(quantity="bending stiffness", real_key="EI_kNm2", section_key="EI_kNm2_per_m", factor=1 / CENTRES,
                    parts=d.SmearParts(per_spacing=1 / CENTRES)),
        ),
        back=(
            d.Back(quantity="M", from_unit="kNm/m", factor=CENTRES, gives="moment of one pile", unit="kNm",
                   valid_if="piles of one size at equal centres; the mean over one bay of supports"),
            d.Back(quantity="V", from_unit="kN/m", factor=CENTRES, gives="shear of one pile", unit="kN"),
        ),
        sources=(source("100"),),
    )  # fmt: skip


def strut_member(n: int, x0: float, x1: float, walls: tuple[str, str]) -> d.SectionMember:
    spacing = 5.0
    return d.SectionMember(
        id=f"P1-strut-{n}", role="strut", side="both", material="S355", form="bar",
        points=((x0, -1.5), (x1, -1.5)),
        ends=(d.End(to=walls[0], at=(x0, -1.5), joint="pinned"), d.End(to=walls[1], at=(x1, -1.5), joint="pinned")),
        real=d.RealMember(EA_kN=STRUT_EA, length=x1 - x0, spacing=spacing, skew=0.0, inclination=0.0,
                          count=6 if n == 1 else 4, diameter=0.508, E_kPa=E_STEEL),
        section=d.PerMetre(EA_kN_per_m=STRUT_EA / spacing, resists="compression",
                           k_effective_kN_per_m_per_m=STRUT_EA / spacing / (x1 - x0)),
        smear=(
            d.Smear(quantity="axial stiffness", real_key="EA_kN", section_key="EA_kN_per_m", factor=1 / spacing,
                    parts=d.SmearParts(per_spacing=1 / spacing)),
        ),
        back=(
            d.Back(quantity="N", from_unit="kN/m", factor=spacing, gives="axial force of one strut", unit="kN",
                   also=(d.AlsoGives(gives="thrust along the waler", factor=0.0),), valid_if="equal spacing"),
        ),
        sources=(source("201"),), assumptions=("A2",),
    )  # fmt: skip


def ground(width: float) -> d.Ground:
    def strip(name: str, top: float, base: float) -> d.GroundLayer:
        ring = ((0.0, top), (width, top), (width, base), (0.0, base))
        return d.GroundLayer(id=name, material=name, outlines=(ring,))

    return d.Ground(
        surface=((0.0, 0.0), (width, 0.0)),
        layers=(strip("made ground", 0.0, -3.0), strip("stiff clay", -3.0, -24.0)),
        water=(),
        nearest_borehole=8.0,
    )


def materials() -> dict[str, d.SectionMaterial]:
    return {
        "made ground": d.SectionMaterial(
            kind="soil", unit_weight=18.0, phi=28.0, standing={"unit_weight": "given", "phi": "given", "E": "missing"}
        ),
        "stiff clay": d.SectionMaterial(
            kind="soil", unit_weight=20.0, su=((-3.0, 60.0), (-24.0, 165.0)), E=((-3.0, 24.0e3), (-24.0, 66.0e3)),
            nu=0.5, standing={"unit_weight": "given", "su": "given", "E": "assumed", "nu": "assumed"},
        ),
        "C30": d.SectionMaterial(kind="concrete", E=((0.0, E_CONCRETE),), unit_weight=25.0, standing={"E": "assumed"}),
        "S355": d.SectionMaterial(kind="steel", E=((0.0, E_STEEL),), standing={"E": "assumed"}),
    }  # fmt: skip


def stages(x0: float, x1: float, members: tuple[str, str, str], loads: tuple[str, ...]) -> tuple[d.SectionStage, ...]:
    def box(top: float, base: float) -> d.Curve:
        return ((x0, top), (x1, top), (x1, base), (x0, base))

    left, right, strut = members
    return (
        d.SectionStage(id="0", order=0, text="Stress in the ground before work", level=None, loads_on=loads),
        d.SectionStage(id="1", order=1, text="Install the walls", level=None, install=(left, right)),
        d.SectionStage(id="2", order=2, text="Dig to 0.5 m below the struts", level=-2.0, dig=(box(0.0, -2.0),)),
        d.SectionStage(id="3", order=3, text="Place the struts", level=-2.0, install=(strut,)),
        d.SectionStage(id="4", order=4, text="Dig to formation", level=-6.0, dig=(box(-2.0, -6.0),)),
    )


def criteria(wall_id: str, at: float) -> tuple[m.Band, ...]:
    low, high = deflection_band(to_corner(at))
    return (
        m.Band(
            code="corner.class_table", mechanism="corner", output="wall_deflection", wall=wall_id, low=low, high=high,
            assessed=True, basis="range over 45 computed cases of one class", reference="own oracle, class table",
            inputs={"distance to corner, m": to_corner(at), "excavated depth, m": HE, "class": "jointed"},
            sentence=f"{to_corner(at):.1f} m from the nearer corner at {HE:.1f} m depth the corner props the wall.",
        ),
        m.Band(
            code="corner.class_table", mechanism="corner", output="wall_moment_excavated_face", wall=wall_id, low=None,
            high=None, assessed=False, basis="", reference="own oracle, class table", inputs={},
            sentence="Not assessed: a waler runs along the wall, so it is of neither class.",
        ),
    )  # fmt: skip


def footing_load(x: float) -> d.SectionLoad:
    return d.SectionLoad(
        id="P1-footing-1", kind="footing", direction="down", at=((x, -1.0), (x + 2.0, -1.0)),
        real=d.LoadValue(value=150.0, unit="kPa"), section=d.LoadValue(value=78.3, unit="kPa"),
        alternatives=(
            d.Alternative(name="pressure_kept", value=150.0, unit="kPa", keeps="pressure under the footing",
                          loses="its end: too much thrust on the wall"),
            d.Alternative(name="equal_effect", value=78.3, unit="kPa", keeps="thrust on the wall",
                          loses="bearing pressure"),
            d.Alternative(name="absent", value=0.0, unit="kPa", keeps="sections away from the footing",
                          loses="the footing"),
        ),
        sources=(source("310"),),
    )  # fmt: skip


def section(n: int, line: tuple[m.Point, m.Point], span: float, ats: tuple[float, float]) -> d.SectionDefinition:
    x0, x1 = 18.0, 18.0 + span
    left, right = (1, 3) if n == 1 else (4, 2)
    ids = (f"P1-wall-{left}", f"P1-wall-{right}", f"P1-strut-{n}")
    loads = (footing_load(x1 + 2.0),) if n == 1 else ()
    walls = (section_wall(ats[0], "left", ids[0]), section_wall(ats[1], "right", ids[1]))
    around = ((0.0, 30.0), (50.0, 80.0)) if n == 1 else ((30.0, 50.0), (80.0, 100.0))
    facts = trail()
    return d.SectionDefinition(
        id=f"S{n}", kind="plane_strain", line=line, score=None,
        represents=tuple(
            m.Represents(pit="P1", start=a + 1.5, to=b - 1.5, provisional=GOVERNING[1:]) for a, b in around
        ),
        verdicts={o: verdict(o, ats[0]) for o in OUTPUTS}, walls=walls,
        half=d.Half(is_half=False, at_x=None, basis="the footing breaks the symmetry" if n == 1 else "not halved"),
        axis=None,
        extent=d.Extent(x=(0.0, 36.0 + span), z=(-24.0, 0.0), left="roller", right="roller", base="fixed",
                        basis="3 He behind each wall, 2 He below the toe (judgement)"),
        materials=materials(), ground=ground(36.0 + span),
        members=(wall_member(left, "left", x0), wall_member(right, "right", x1),
                 strut_member(n, x0, x1, (ids[0], ids[1]))),
        loads=loads, stages=stages(x0, x1, ids, tuple(one.id for one in loads)),
        criteria=criteria(ids[0], ats[0]) + criteria(ids[1], ats[1]),
        balance=d.Balance(
            horizontal=(d.BalanceLine(text="thrust of the footing on the right wall", value=-61.2, unit="kN/m"),
                        d.BalanceLine(text="left to the ground behind the left wall", value=61.2, unit="kN/m")),
            vertical=(d.BalanceLine(text="no inclined support: nothing to close", value=0.0, unit="kN/m"),),
        ),
        implied=(
            d.Implied(about="P1-footing-1", quantity="load", real=900.0, implied=None, ratio=1.92, grade="serious",
                      do_in_inputs="use equal_effect for the wall", read_outputs="settlement of the footing is high"),
            d.Implied(about=ids[2], quantity="stiffness", real=STRUT_EA, implied=STRUT_EA, ratio=1.0, grade="fair",
                      do_in_inputs="none", read_outputs="multiply the force by 5.0 m"),
        ),
        actions_without_twin=(
            d.Action(name="horizontal bending of the waler", size=None, unit="kNm", at=f"ch {ats[0]:.1f}"),
            d.Action(name="change of wall movement along the wall", size=0.012, unit="m per m", at="3 m from corners"),
        ),
        **facts,  # type: ignore[arg-type]
    )  # fmt: skip


def first_pit_job() -> Job:
    """The first pit with its two sections."""
    s1 = section(1, ((115.0, 182.0), (115.0, 238.0)), 20.0, (15.0, 65.0))
    s2 = section(2, ((82.0, 210.0), (148.0, 210.0)), 30.0, (90.0, 40.0))
    proposal = m.Proposal(
        limits=Limits(), frame=m.ProposalFrame(offset=(0.0, 0.0, 0.0), rotation_deg=0.0, crs=None), pits=(pit(),),
        sections=(chosen(s1), chosen(s2)),
        unrepresented=tuple(
            m.Unrepresented(
                pit="P1", start=(at - 1.5) % LENGTH, to=at + 1.5, reason="within 1.5 m of a corner",
                what_to_do="read the wall as held by its neighbour; detail by hand",
            )
            for at in (0.0, 30.0, 50.0, 80.0)
        ),
        stations={"P1": stations()},
        ledger={
            DRAWING: LedgerEntry(
                entities=115, used=113, context=1, ignored=1,
                roles={"wall": 100, "strut": 10, "waler": 1, "footing": 1, "level": 1}, reasons={"empty text": 1},
            )
        },
        **trail(),  # type: ignore[arg-type]
    )  # fmt: skip
    return Job(site=site(), proposal=proposal, definitions=(s1, s2))


# --- showcase: every verdict, anchors, hostile names ------------------------------------------------------------------

HOSTILE = '<script>alert("x")</script> & <b onload=1>\u202e=cmd|A1'


def showcase_job() -> Job:
    """The first pit bent to show what it does not have: every verdict word, and names that try to be more than text."""
    job = first_pit_job()
    table = job.proposal.stations["P1"]
    words: tuple[tuple[float, m.VerdictWord, float | None, float | None], ...] = (
        (15.0, "holds", 0.93, 1.05), (30.0, "over_states", 0.6, 0.95), (45.0, "undecided", 0.8, 1.35),
        (60.0, "under_states", 1.2, 1.7), (80.0, "not_two_dimensional", 0.4, 2.6), (101.0, "not_assessed", None, None),
    )  # fmt: skip
    rows = [next(w for w in words if c < w[0]) for c in table.chainage]
    every = m.StationOutput(
        low=tuple(r[2] for r in rows),
        high=tuple(r[3] for r in rows),
        verdict=tuple(r[1] for r in rows),
        dominant=tuple(None if r[2] is None else "supports.spacing" for r in rows),
    )
    outputs = {**table.outputs, "support_force": every}
    hostile = Assumption(
        id="A3", code="name", about=HOSTILE, text=f"Layer {HOSTILE} was read as a strut.", basis="=1+1",
        sources=(Source(file="../../etc/passwd<img src=x>.dxf", item="-2+3", how="read"),),
    )  # fmt: skip
    proposal = replace(
        job.proposal,
        stations={"P1": replace(table, outputs=outputs)},
        assumptions=(*job.proposal.assumptions, hostile),
        pits=(replace(job.proposal.pits[0], corners=(
            *job.proposal.pits[0].corners[:3],
            m.Corner(at=80.0, point=(100.0, 220.0), interior_angle=270.0, kind="re-entrant"),
        )),),
    )  # fmt: skip
    anchored = with_anchors(job.definitions[1])
    return Job(site=site(HOSTILE), proposal=proposal, definitions=(job.definitions[0], anchored))


def with_anchors(definition: d.SectionDefinition) -> d.SectionDefinition:
    """The second section with anchors in place of its strut, and water."""
    walls = definition.members[:2]
    anchor = d.SectionMember(
        id="P1-anchor-1", role="anchor", side="left", material=None, form="bar", points=((18.0, -1.5), (6.0, -8.0)),
        ends=(d.End(to=walls[0].id, at=(18.0, -1.5), joint="pinned"),
              d.End(to="ground", at=(6.0, -8.0), joint="fixed")),
        real=d.RealMember(length=13.65, spacing=2.5, inclination=28.4, free_length=8.0, bond_length=5.65,
                          preload_kN=400.0, count=8),
        section=d.PerMetre(preload_kN_per_m=160.0, resists="tension"),
        smear=(d.Smear(quantity="preload", real_key="preload_kN", section_key="preload_kN_per_m", factor=0.4,
                       parts=d.SmearParts(per_spacing=0.4)),),
        back=(d.Back(quantity="N", from_unit="kN/m", factor=2.5, gives="force of one anchor", unit="kN"),),
    )  # fmt: skip
    water = (
        d.Water(id="w1", side="left", line=((0.0, -2.0), (18.0, -2.0)), kind="retained"),
        d.Water(id="w2", side="excavated", line=((18.0, -6.5), (48.0, -6.5)), kind="excavated"),
    )
    stages = tuple(replace(s, install=("P1-anchor-1",)) if s.order == 3 else s for s in definition.stages)
    return replace(definition, members=(*walls, anchor), ground=replace(definition.ground, water=water), stages=stages)
