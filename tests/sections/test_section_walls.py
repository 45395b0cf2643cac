"""Walls and bearing piles of a section: posts below formation, soil displaced, piles drawn twice."""

from __future__ import annotations

from dataclasses import replace
from math import pi

import numpy as np
import pytest
from builders_cut import make_cut
from pit_sites import PANEL, PILES, found, rectangle, shape_of, site_of

from ingest.members import BarSection, Material, Pile
from ingest.model import Site
from sections.member import SectionMember
from sections.model import Structural, Wall
from sections.section.bearing_piles import bearing_members
from sections.section.cut import Cut
from sections.section.walls import wall_member

STEEL = Material(id="steel", kind="steel", E=210e6, unit_weight=78.5)
CONCRETE = Material(id="C30", kind="concrete", E=33e6, unit_weight=25.0)
POSTS = Wall(
    kind="king_post", count=50, centres=2.0, top=0.0, toe=-10.0, material="steel", EI_factor=1.0,
    structural=Structural(which="posts", count=50, spacing=2.0),
)  # fmt: skip


def member_of(wall: Wall, width: float | None = 0.3) -> tuple[SectionMember, list[str]]:
    shape = BarSection(designation="H 300", A=0.0149, I=2.517e-4, width=width, depth=0.3)
    post = Pile(id="1", centre=(115.0, 200.0), diameter=None, kind="king_post", section=shape, material="steel")
    site = site_of(piles=(post,), materials=(STEEL, CONCRETE))
    outline = shape_of(rectangle(), [(0.0, 100.0, wall)])
    pit = found(replace(outline, piles=((0,),)), piles=(post,))
    cut = make_cut(pit, (115, 182), (115, 221), [15.0])
    member, (_, findings) = wall_member(site, cut.walls[0], "P1-wall-1")
    return member, [f.text for f in findings]


def test_posts_below_formation_carry_numbers_of_their_own() -> None:
    """b 0.3 at 2.0 m: b/s 0.15, 3b/s 0.45; N_p 2 at formation, 9 from 3b = 0.9 m down; none counted for 0.5 m.

    Source of the rule: Broms 1964 and design practice (recalled).
    """
    member, findings = member_of(POSTS)
    below = member.below_formation
    assert below is not None
    assert (below.level, below.width) == (-6.0, 0.3)
    assert below.active_share == pytest.approx(0.15)
    assert below.passive_share_coarse == pytest.approx(0.45)
    assert below.no_passive_to == pytest.approx(-6.5)
    assert [tuple(np.round(pair, 9)) for pair in below.clay_N_p] == [(-6.0, 2.0), (-6.9, 9.0), (-10.0, 9.0)]
    assert findings == []


def test_posts_of_unknown_width_say_what_is_missing_below_formation() -> None:
    member, findings = member_of(POSTS, width=None)
    assert member.below_formation is None
    assert any("resistance below formation" in text for text in findings)


@pytest.mark.parametrize("kind", ["piles", "panels"])
def test_the_soil_in_the_place_of_the_wall_is_handed_over_for_its_net_weight(kind: str) -> None:
    structural = Structural(which="all", count=100, spacing=1.0)
    walls = {
        "piles": (Wall(**{**_of(PILES), "material": "C30", "structural": structural}), pi * 0.75**2 / 4),
        "panels": (Wall(**{**_of(PANEL), "material": "C30"}), 0.8),
    }
    wall, displaced = walls[kind]
    member, _ = member_of(wall)
    assert member.section.soil_displaced_m3_per_m2 == pytest.approx(displaced)
    assert member.section.weight_kN_per_m2 == pytest.approx(25.0 * displaced)  # type: ignore[union-attr]
    assert member.below_formation is None


def _of(wall: Wall) -> dict[str, object]:
    return {name: getattr(wall, name) for name in wall.__dataclass_fields__}


def bearing(places: list[float], material: str | None = "C30") -> tuple[Site, Cut]:
    piles = tuple(
        Pile(id=str(i), centre=(x, 210.0), diameter=0.6, bearing=True, top=-6.0, toe=-16.0, material=material)
        for i, x in enumerate(places)
    )
    site = site_of(piles=piles, materials=(CONCRETE,))
    return site, make_cut(found(shape_of(rectangle()), piles=piles), (115, 182), (115, 238), [15.0, 65.0])


def test_a_bearing_pile_drawn_twice_is_one_pile() -> None:
    members, _ = bearing_members(*bearing([110.0, 110.1, 112.0, 112.1, 114.0, 114.1, 116.0]))
    assert members[0].real.spacing == pytest.approx(1.9)


def test_bearing_piles_of_unknown_modulus_say_that_their_stiffness_is_missing() -> None:
    _, findings = bearing_members(*bearing([110.0, 112.0, 114.0, 116.0], material=None))
    assert "pile_input_missing" in [finding.code for finding in findings]
