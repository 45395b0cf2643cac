"""The two sections of the first pit, by hand."""

from __future__ import annotations

from builders_pit import deflection_band, section_wall, to_corner, trail, verdict
from builders_site import CENTRES, E_CONCRETE, E_STEEL, HE, PILE_A, PILE_I, STRUT_EA, D, source

from ingest.model import GOVERNING, OUTPUTS
from sections import definition as d
from sections import member as member_rows
from sections import model as m
from sections import proposal as proposal_rows


def wall_member(n: int, side: str, x: float) -> member_rows.SectionMember:
    EA, EI = E_CONCRETE * PILE_A, E_CONCRETE * PILE_I
    return member_rows.SectionMember(
        id=f"P1-wall-{n}", role="wall", side=side, material="C30", form="beam", points=((x, 0.0), (x, -12.0)),  # type: ignore[arg-type]
        ends=(member_rows.End(to="ground", at=(x, -12.0), joint="free"),),
        real=member_rows.RealMember(EA_kN=EA, EI_kNm2=EI, length=12.0, spacing=CENTRES, diameter=D, centres=CENTRES,
                          count=30, E_kPa=E_CONCRETE, weight_kN_per_m=25 * PILE_A),
        section=member_rows.PerMetre(EA_kN_per_m=EA / CENTRES, EI_kNm2_per_m=EI / CENTRES,
                           weight_kN_per_m2=25 * PILE_A / CENTRES, thickness=D * 3**0.5 / 2,
                           E_kPa=EA / CENTRES / (D * 3**0.5 / 2)),
        smear=(
            member_rows.Smear(quantity="axial stiffness", real_key="EA_kN", section_key="EA_kN_per_m", factor=1 / CENTRES,
                    parts=member_rows.SmearParts(per_spacing=1 / CENTRES)),
            member_rows.Smear(quantity="bending stiffness", real_key="EI_kNm2", section_key="EI_kNm2_per_m", factor=1 / CENTRES,
                    parts=member_rows.SmearParts(per_spacing=1 / CENTRES)),
        ),
        back=(
            member_rows.Back(quantity="M", from_unit="kNm/m", factor=CENTRES, gives="moment of one pile", unit="kNm",
                   valid_if="piles of one size at equal centres; the mean over one bay of supports"),
            member_rows.Back(quantity="V", from_unit="kN/m", factor=CENTRES, gives="shear of one pile", unit="kN"),
        ),
        sources=(source("100"),),
    )  # fmt: skip


def strut_member(n: int, x0: float, x1: float, walls: tuple[str, str]) -> member_rows.SectionMember:
    spacing = 5.0
    return member_rows.SectionMember(
        id=f"P1-strut-{n}", role="strut", side="both", material="S355", form="bar",
        points=((x0, -1.5), (x1, -1.5)),
        ends=(member_rows.End(to=walls[0], at=(x0, -1.5), joint="pinned"), member_rows.End(to=walls[1], at=(x1, -1.5), joint="pinned")),
        real=member_rows.RealMember(EA_kN=STRUT_EA, length=x1 - x0, spacing=spacing, skew=0.0, inclination=0.0,
                          count=6 if n == 1 else 4, diameter=0.508, E_kPa=E_STEEL),
        section=member_rows.PerMetre(EA_kN_per_m=STRUT_EA / spacing, resists="compression",
                           k_effective_kN_per_m_per_m=STRUT_EA / spacing / (x1 - x0)),
        smear=(
            member_rows.Smear(quantity="axial stiffness", real_key="EA_kN", section_key="EA_kN_per_m", factor=1 / spacing,
                    parts=member_rows.SmearParts(per_spacing=1 / spacing)),
        ),
        back=(
            member_rows.Back(quantity="N", from_unit="kN/m", factor=spacing, gives="axial force of one strut", unit="kN",
                   also=(member_rows.AlsoGives(gives="thrust along the waler", factor=0.0),), valid_if="equal spacing"),
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
    def box(top: float, base: float) -> member_rows.Curve:
        return ((x0, top), (x1, top), (x1, base), (x0, base))

    left, right, strut = members
    return (
        d.SectionStage(id="0", order=0, text="Stress in the ground before work", level=None, loads_on=loads),
        d.SectionStage(id="1", order=1, text="Install the walls", level=None, install=(left, right)),
        d.SectionStage(id="2", order=2, text="Dig to 0.5 m below the struts", level=-2.0, dig=(box(0.0, -2.0),)),
        d.SectionStage(id="3", order=3, text="Place the struts", level=-2.0, install=(strut,)),
        d.SectionStage(id="4", order=4, text="Dig to formation", level=-6.0, dig=(box(-2.0, -6.0),)),
    )


def criteria(wall_id: str, at: float) -> tuple[proposal_rows.Band, ...]:
    low, high = deflection_band(to_corner(at))
    return (
        proposal_rows.Band(
            code="corner.class_table", mechanism="corner", output="wall_deflection", wall=wall_id, low=low, high=high,
            assessed=True, basis="range over 45 computed cases of one class", reference="own oracle, class table",
            inputs={"distance to corner, m": to_corner(at), "excavated depth, m": HE, "class": "jointed"},
            sentence=f"{to_corner(at):.1f} m from the nearer corner at {HE:.1f} m depth the corner props the wall.",
        ),
        proposal_rows.Band(
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
            proposal_rows.Represents(pit="P1", start=a + 1.5, to=b - 1.5, provisional=GOVERNING[1:]) for a, b in around
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
        losses=(
            d.SupportLoss(
                member=ids[2], at=ats[0], gap_movement=1.9, neighbour_force=1.37, wall_moment_excavated_face=1.22,
                wall_moment_retained_face=1.4,
            ),
        ),
        actions_without_twin=(
            d.Action(name="horizontal bending of the waler", size=None, unit="kNm", at=f"ch {ats[0]:.1f}"),
            d.Action(name="change of wall movement along the wall", size=0.012, unit="m per m", at="3 m from corners"),
        ),
        **facts,  # type: ignore[arg-type]
    )  # fmt: skip
