"""Supports of a section: which wall a strut is tied to, corner struts, feet of rakers, anchors, by hand."""

from __future__ import annotations

from math import cos, hypot, radians, sin, sqrt

import pytest
from builders_cut import make_cut
from pit_sites import PANEL, PILES, anchor, footing, found, rectangle, shape_of, site_of, strut

from ingest.members import Material, Point, Support
from ingest.model import Site
from sections.found import FoundPit
from sections.member import PerMetre, RealMember, SectionMember
from sections.section.balance import balance_section
from sections.section.cut import Cut
from sections.section.supports import support_members

EA = 210e6 * 0.02473061737  # CHS 508 x 16, E 210 GPa
NAMES = {"left": "P1-wall-1", "right": "P1-wall-2"}
ELL: list[Point] = [(0, 0), (40, 0), (40, 20), (20, 20), (20, 40), (0, 40)]


def build(
    corners: list[Point], start: Point, end: Point, at: list[float], **more: object
) -> tuple[Site, Cut, FoundPit, tuple[SectionMember, ...], list[str]]:
    runs = more.pop("runs", None)
    site = site_of(**more)
    pit = found(shape_of(corners, runs), **more)  # type: ignore[arg-type]
    cut = make_cut(pit, start, end, at)
    members, _, findings = support_members(site, cut, NAMES)
    return site, cut, pit, members, [finding.code for finding in findings]


def run_of(member: SectionMember) -> float:
    (x1, z1), (x2, z2) = member.points
    return hypot(x2 - x1, z2 - z1)


def test_a_strut_to_a_wall_that_is_not_in_the_section_is_not_tied_to_the_one_that_is() -> None:
    """An L: the struts of the short leg (20 m) reach under a cut through the long one (40 m)."""
    supports = [strut((x, 0.0), (x, 40.0), EA=EA) for x in (5.0, 11.0, 17.0)]
    supports += [strut((x, 0.0), (x, 20.0), EA=EA) for x in (21.0, 27.0, 33.0)]
    _, cut, _, members, codes = build(ELL, (19.5, -18.0), (19.5, 58.0), [19.5, 100.5], supports=tuple(supports))
    assert [wall.x for wall in cut.walls] == pytest.approx([18.0, 58.0])
    long, member = members
    assert member.real.length == pytest.approx(20.0)
    assert [end.to for end in member.ends] == ["P1-wall-1", "opposite"]
    # Both walls press alike: the middle of the strut holds still, 10 m from the wall.
    assert run_of(member) == pytest.approx(10.0)
    spacing = member.real.spacing or 0.0
    assert member.section.k_effective_kN_per_m_per_m == pytest.approx(EA / spacing / 10.0)
    # The long strut at 17 reaches the cut at the north wall only (its width there ends at the corner, at 20).
    assert [end.to for end in long.ends] == ["P1-wall-2", "opposite"]
    assert run_of(long) == pytest.approx(20.0)
    assert codes == ["far_wall_not_in_section"] * 2


def test_a_strut_between_the_two_walls_of_the_section_is_drawn_whole() -> None:
    supports = tuple(strut((x, 200.0), (x, 220.0), EA=EA) for x in (105.0, 110.0, 115.0, 120.0, 125.0))
    _, _, _, members, codes = build(rectangle(), (115, 182), (115, 238), [15.0, 65.0], supports=supports)
    (member,) = members
    assert [end.to for end in member.ends] == ["P1-wall-1", "P1-wall-2"]
    assert member.section.k_effective_kN_per_m_per_m == pytest.approx(EA / 5.0 / 20.0)
    assert codes == []


def corner(length: float = 4.0, **more: object) -> Support:
    given: dict[str, object] = {"role": "corner_strut", "EA": EA, **more}
    return strut((100.0 + length, 200.0), (100.0, 200.0 + length), **given)


def test_a_corner_strut_is_as_stiff_in_the_section_as_it_is_between_two_moving_walls() -> None:
    """N = EA u (cos + sin)/L for walls that both move u; its part square to the wall is N cos, over the spacing."""
    _, _, _, members, codes = build(rectangle(), (103, 182), (103, 238), [3.0, 77.0], supports=(corner(),))
    member = next(m for m in members if m.role == "corner_strut")
    s, L, beta = member.real.spacing or 0.0, 4.0 * sqrt(2.0), radians(45.0)
    true = EA * cos(beta) * (cos(beta) + sin(beta)) / (s * L)
    assert member.section.EA_kN_per_m == pytest.approx(EA * cos(beta) ** 3 / s)
    assert (member.section.EA_kN_per_m or 0.0) / run_of(member) == pytest.approx(true)
    assert member.section.k_effective_kN_per_m_per_m == pytest.approx(true)
    assert codes == []


@pytest.mark.parametrize("slope", [0.0, 0.02])
def test_a_corner_strut_drawn_a_little_off_level_is_still_one(slope: float) -> None:
    strut_ = corner()
    tilted = Support(**{**_fields(strut_), "far": (100.0, 204.0, -1.5 - slope)})
    _, _, _, members, _ = build(rectangle(), (103, 182), (103, 238), [3.0, 77.0], supports=(tilted,))
    assert members[0].section.EA_kN_per_m


def _fields(support: Support) -> dict[str, object]:
    return {name: getattr(support, name) for name in support.__dataclass_fields__}


def test_packing_softens_a_corner_strut_at_both_its_ends() -> None:
    """Springs in series: L/EA + 2/k_p between the walls, shortened u (cos + sin)."""
    packing = 2e5
    _, _, _, members, _ = build(
        rectangle(), (103, 182), (103, 238), [3.0, 77.0], supports=(corner(packing_stiffness=packing),)
    )
    s, L, beta = members[0].real.spacing or 0.0, 4.0 * sqrt(2.0), radians(45.0)
    force = (cos(beta) + sin(beta)) / (L / EA + 2 / packing)  # for u = 1 on both walls
    assert members[0].section.k_effective_kN_per_m_per_m == pytest.approx(force * cos(beta) / s)
    assert (members[0].section.EA_kN_per_m or 0.0) / run_of(members[0]) == pytest.approx(force * cos(beta) / s)


@pytest.mark.parametrize(
    ("corners", "more", "word"),
    [
        ([(100, 200), (130, 200), (130, 220), (110, 220)], {}, "right angle"),
        (rectangle(), {"runs": [(0.0, 30.0, PILES), (30.0, 100.0, PANEL)]}, "construction"),
        (rectangle(), {"loads": (footing(((101, 190), (108, 190), (108, 198), (101, 198)), 40.0, "area"),)}, "surch"),
    ],
    ids=["another angle", "another wall", "another load"],
)
def test_a_corner_strut_between_unlike_walls_has_no_stiffness_in_the_section(
    corners: list[Point], more: dict[str, object], word: str
) -> None:
    far = (100.0, 204.0) if corners[-1][0] == 100 else (101.789, 203.578)
    bar = strut((104.0, 200.0), far, role="corner_strut", EA=EA)
    site = site_of(supports=(bar,), **{k: v for k, v in more.items() if k != "runs"})
    pit = found(shape_of(corners, more.get("runs")), supports=(bar,), **{k: v for k, v in more.items() if k != "runs"})  # type: ignore[arg-type]
    members, _, findings = support_members(site, make_cut(pit, (103, 182), (103, 238), [3.0]), NAMES)
    member = next(m for m in members if m.role == "corner_strut")
    assert member.section.EA_kN_per_m is None
    assert member.smear == ()
    assert any(word in finding.text for finding in findings)


def test_the_foot_of_a_raker_is_told_to_be_taken_as_held() -> None:
    rakers = [
        Support(id="", role="raker", head=(x, 200.0, -1.0), far=(x, 206.0, -6.0), EA=EA) for x in (110.0, 115.0, 120.0)
    ]
    _, _, _, members, codes = build(rectangle(), (115, 182), (115, 238), [15.0], supports=tuple(rakers))
    assert codes == ["raker_foot"]
    assert members[0].points == ((18.0, -1.0), (pytest.approx(24.0), pytest.approx(-6.0)))


def test_the_preload_of_an_anchor_with_a_bond_length_is_in_the_balance_of_forces() -> None:
    anchors = tuple(
        anchor((x, 200.0), (0.0, 1.0), -2.0, free_length=8.0, bond_length=6.0, bond_diameter=0.15, EA=1e5, preload=300)
        for x in (110.0, 112.0, 114.0, 116.0, 118.0, 120.0)
    )
    _, cut, _, members, _ = build(rectangle(), (115, 182), (115, 238), [15.0], supports=anchors)
    lines = balance_section(cut, members, {}, {}, (), None).horizontal
    preload = next(line for line in lines if "preload" in line.text)
    assert preload.value == pytest.approx(-300.0 * cos(radians(20.0)) / 2.0)  # towards the retained side


def test_the_area_of_a_strut_comes_from_its_section_or_from_its_stiffness_and_material() -> None:
    places = (110.0, 115.0, 120.0)
    supports = tuple(strut((x, 200.0), (x, 220.0), EA=4.2e6, section=None, material="steel") for x in places)
    steel = Material(id="steel", kind="steel", E=210e6)
    _, _, _, members, _ = build(
        rectangle(), (115, 182), (115, 238), [15.0, 65.0], supports=supports, materials=(steel,)
    )
    assert members[0].real.A_m2 == pytest.approx(0.02)


SLOPES = [("anchor", 20.0, 1), ("anchor", -20.0, -1), ("raker", 30.0, -1), ("raker", -30.0, 1)]


@pytest.mark.parametrize(("role", "dip", "sign"), SLOPES)
def test_an_inclined_member_pulls_the_wall_down_or_lifts_it_by_its_slope(role: str, dip: float, sign: int) -> None:
    """Tension towards a lower end pulls down, compression from a lower end lifts; P sin(dip)/s, down positive."""
    preload, s = (300.0 if role == "anchor" else -300.0), 2.0
    real = RealMember(spacing=s, inclination=dip, skew=0.0, preload_kN=preload)
    bar = SectionMember(
        id="A", role=role, side="left", material=None, form="bar", points=((0.0, 0.0), (5.0, -2.0)), ends=(),  # type: ignore[arg-type]
        real=real, section=PerMetre(preload_kN_per_m=preload / s), smear=(), back=(),
    )  # fmt: skip
    cut = Cut(kind="plane_strain", start=(0.0, 0.0), end=(9.0, 0.0), walls=())
    (line,) = balance_section(cut, [bar], {}, {}, (), None).vertical
    assert line.value == pytest.approx(sign * 300.0 * sin(radians(abs(dip))) / s)
    assert ("down" in line.text) == (sign > 0)
