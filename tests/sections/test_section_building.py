"""Parts of a section worked by hand: ground outlines, stages, balance, implied amounts."""

from __future__ import annotations

from math import pi

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import Polygon
from shapely.ops import unary_union

from ingest.model import Site, Stage, Stratum
from sections.definition import SectionMaterial
from sections.member import PerMetre, RealMember, SectionMember
from sections.section.balance import at_rest_thrust, list_actions
from sections.section.cut import Cut, crossings
from sections.section.ground import layer_outlines, soil_material
from sections.section.implied import grade, imply
from sections.section.stages import DigProfile, Prop, dig_profile, plan_stages

SQUARE = ((0.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0))


def cut(start: tuple[float, float], end: tuple[float, float]) -> Cut:
    return Cut(kind="plane_strain", start=start, end=end, walls=())


def test_a_cut_through_an_outline_gives_the_stretch_inside_it() -> None:
    assert crossings(cut((-3, 1), (10, 1)), SQUARE) == ((3.0, 7.0),)
    assert crossings(cut((-3, 9), (10, 9)), SQUARE) == ()


def test_a_cut_along_a_vertex_still_pairs_its_crossings() -> None:
    diamond = ((0.0, 0.0), (2.0, -2.0), (4.0, 0.0), (2.0, 2.0))
    assert crossings(cut((-1, 0), (9, 0)), diamond) == ((1.0, 5.0),)


def test_a_cut_that_ends_inside_an_outline_stops_there() -> None:
    assert crossings(cut((-3, 1), (2, 1)), SQUARE) == ((3.0, 5.0),)


def test_level_layers_are_rectangles_and_fill_the_model() -> None:
    layers = layer_outlines(np.array([0.0, 20.0]), np.array([[0.0, 0.0], [-3.0, -3.0]]), -10.0, ("fill", "clay"))
    assert layers[0].outlines == (((0.0, -3.0), (20.0, -3.0), (20.0, 0.0), (0.0, 0.0)),)
    assert layers[1].outlines == (((0.0, -10.0), (20.0, -10.0), (20.0, -3.0), (0.0, -3.0)),)


@given(
    st.lists(st.lists(st.floats(-9, 0), min_size=4, max_size=4), min_size=1, max_size=4),
)
def test_layers_never_overlap_or_leave_gaps(raw: list[list[float]]) -> None:
    x, base = np.array([0.0, 5.0, 11.0, 20.0]), -10.0
    tops = np.minimum.accumulate(np.array(raw), axis=0)
    layers = layer_outlines(x, tops, base, [f"s{i}" for i in range(len(tops))])
    shapes = [Polygon(ring) for layer in layers for ring in layer.outlines]
    whole = float(np.trapezoid(tops[0] - base, x))
    assert sum(shape.area for shape in shapes) == pytest.approx(whole, abs=1e-4)
    assert unary_union(shapes).area == pytest.approx(whole, abs=1e-4)


def test_a_gradient_runs_from_the_top_of_its_stratum_to_the_base_of_the_model() -> None:
    # E = 40 MPa at -3, rising 3 MPa a metre: at -24 it is 40 + 3 * 21 = 103 MPa.
    clay = soil_material(Stratum(name="clay", top_level=-3.0, E=40e3, E_gradient=3e3, unit_weight=20.0), -24.0)
    assert clay.E == ((-3.0, 40e3), (-24.0, 103e3))
    assert clay.standing["phi"] == "missing"
    assert clay.phi is None


def props() -> tuple[Prop, ...]:
    return (
        Prop(id="P1-strut-1", level=-1.5, preload=-40.0, names=frozenset({"STRUTS"})),
        Prop(id="P1-strut-2", level=-4.0, preload=None, names=frozenset({"LOWER"})),
    )


DIG = DigProfile(steps=(((18.0, 38.0), -6.0),), ground=0.0)


def test_the_template_digs_half_a_metre_below_each_support_then_installs_it() -> None:
    stages, assumed, findings = plan_stages(Site(), DIG, ("W1", "W2"), props(), {"L1": None}, ())
    assert [(s.text, s.level) for s in stages] == [
        ("stress in the ground before work", 0.0),
        ("wall installed", 0.0),
        ("dig to -2.00", -2.0),
        ("install P1-strut-1", -2.0),
        ("dig to -4.50", -4.5),
        ("install P1-strut-2", -4.5),
        ("dig to -6.00", -6.0),
    ]
    assert stages[0].loads_on == ("L1",)
    assert stages[3].preload == {"P1-strut-1": -40.0}
    assert stages[4].dig == (((18.0, -4.5), (38.0, -4.5), (38.0, -2.0), (18.0, -2.0)),)
    assert [a.code for a in assumed] == ["stages_by_template"]
    assert findings == ()


def test_the_dug_outlines_of_all_stages_add_up_to_the_pit() -> None:
    stages, _, _ = plan_stages(Site(), DIG, (), props(), {}, ())
    assert sum(Polygon(ring).area for stage in stages for ring in stage.dig) == pytest.approx(20 * 6)


def test_stages_of_the_brief_are_used_as_given_and_what_they_forget_is_told() -> None:
    site = Site(stages=(Stage(name="first dig", dig_to=-2.0, install=("STRUTS",)), Stage(name="to -5", dig_to=-5.0)))
    stages, assumed, findings = plan_stages(site, DIG, ("W1",), props(), {"L1": "to -5"}, ())
    assert stages[2].install == ("P1-strut-1",)
    assert stages[3].loads_on == ("L1",)
    assert not assumed
    assert sorted(f.code for f in findings) == ["dig_not_reached", "never_installed"]


def test_a_pit_in_the_floor_is_dug_deeper_only_where_the_cut_passes_it() -> None:
    profile = dig_profile((10.0, 30.0), [(((10.0, 30.0),), -6.0), (((18.0, 21.0),), -7.5)], 0.0)
    assert profile.steps == (((10.0, 18.0), -6.0), ((18.0, 21.0), -7.5), ((21.0, 30.0), -6.0))


def soil(weight: float, K0: float | None) -> SectionMaterial:
    return SectionMaterial(kind="soil", unit_weight=weight, K0=K0)


def test_thrust_at_rest_of_two_layers_by_hand() -> None:
    # Layer 1: 3 m, 18 kN/m3, K0 .5: .5 * 18 * 9 / 2 = 40.5. Layer 2: 3 m, 20 kN/m3, K0 1, from 54 kPa:
    # (54 + 20 * 3 / 2) * 3 = 252. Sum 292.5 kN/m.
    column = ((0.0, "a"), (-3.0, "b"))
    materials = {"a": soil(18.0, 0.5), "b": soil(20.0, 1.0)}
    assert at_rest_thrust(column, -6.0, materials, None) == pytest.approx(292.5)


def test_thrust_at_rest_with_water_at_the_surface_is_buoyant_ground_plus_water() -> None:
    # 4 m, saturated 20, K0 .5: .5 * (20 - 9.81) * 8 + 9.81 * 8 = 40.76 + 78.48.
    assert at_rest_thrust(((0.0, "a"),), -4.0, {"a": soil(20.0, 0.5)}, 0.0) == pytest.approx(119.24)


def test_thrust_is_not_assessed_without_K0() -> None:
    assert at_rest_thrust(((0.0, "a"),), -4.0, {"a": soil(20.0, None)}, None) is None


def member(**real: float) -> SectionMember:
    return SectionMember(
        id="P1-strut-1", role="strut", side="left", material=None, form="bar", points=((0, 0), (5, 0)), ends=(),
        real=RealMember(**real), section=PerMetre(EA_kN_per_m=1e6), smear=(), back=(),
    )  # fmt: skip


def test_a_skewed_strut_lists_its_thrust_along_the_wall() -> None:
    # N sin(beta) with a level strut at 30 degrees: half its force; 200 kN preload gives 100 kN.
    actions = list_actions(cut((0, 0), (5, 0)), [member(skew=30.0, inclination=0.0, spacing=4.0, preload_kN=-200.0)])
    thrust = next(a for a in actions if "thrust" in a.name)
    assert thrust.size == pytest.approx(100.0)
    bending = next(a for a in actions if "waler" in a.name)
    assert bending.size == pytest.approx(200 * 4 / 10)


def test_a_round_pile_wall_implies_more_concrete_than_there_is() -> None:
    # 0.75 m at 1.00 m: real 0.44179 m3/m2, equivalent wall 0.75 * sqrt(3) / 2 = 0.64952 m: 1.470 times.
    wall = SectionMember(
        id="W", role="wall", side="left", material=None, form="beam", points=((0, 0), (0, -12)), ends=(),
        real=RealMember(diameter=0.75, spacing=1.0), section=PerMetre(thickness=0.75 * 3**0.5 / 2), smear=(), back=(),
    )  # fmt: skip
    volume = next(row for row in imply([wall], []) if row.quantity == "volume")
    assert volume.real == pytest.approx(pi * 0.75**2 / 4)
    assert volume.ratio == pytest.approx(1.4702, abs=1e-4)
    assert volume.grade == "care"


@pytest.mark.parametrize(
    ("ratio", "word"), [(1.0, "fair"), (1.1, "fair"), (0.8, "care"), (1.5, "care"), (3.0, "serious"), (0.3, "serious")]
)
def test_grades_judge_too_little_like_too_much(ratio: float, word: str) -> None:
    assert grade(ratio) == word
