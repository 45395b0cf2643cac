"""Water and loads that come and go with the stages, and rows of supports that end at a step of the dig."""

from __future__ import annotations

import numpy as np
import pytest
import shapely

from ingest.members import Load
from ingest.model import Floor, Limits, Site, Stage
from sections.definition import Water
from sections.found import PitShape, SupportRow
from sections.model import Member, Step
from sections.pit.floors import FloorPlan
from sections.section.buried_rows import end_at_steps
from sections.section.column_loads import LoadRow, row_load
from sections.section.stages import AT_END, DigProfile, Prop, plan_stages

DIG = DigProfile(steps=(((10.0, 30.0), -6.0),), ground=0.0)
STRUT = Prop(id="P1-strut-1", level=-1.5, preload=None, names=frozenset())


def water(side: str, kind: str, level: float) -> Water:
    name = "before" if (side, kind) == ("excavated", "retained") else side
    return Water(id=f"water-{name}", side=side, kind=kind, line=((0.0, level), (10.0, level)))  # type: ignore[arg-type]


OUTSIDE = (water("left", "retained", -3.0), water("excavated", "retained", -3.0))
INSIDE = water("excavated", "excavated", -6.5)


def test_water_inside_is_as_outside_until_the_first_dig_below_it() -> None:
    # Dug to -2 below the strut, then to -6: the first dig below -3 is the last one.
    stages, (assumed,), findings = plan_stages(Site(), DIG, ("W",), (STRUT,), {}, (*OUTSIDE, INSIDE))
    assert [(s.text, s.water) for s in stages if s.water] == [
        ("stress in the ground before work", ("water-left", "water-before")),
        ("dig to -6.00", ("water-left", "water-excavated")),
    ]
    assert "drawn down in one step" in assumed.text
    assert findings == ()


def test_a_dig_below_the_water_outside_asks_for_the_water_inside() -> None:
    _, _, findings = plan_stages(Site(), DIG, ("W",), (STRUT,), {}, OUTSIDE)
    assert [finding.code for finding in findings] == ["water_inside_missing"]
    dry, _, silent = plan_stages(Site(), DIG, ("W",), (STRUT,), {}, ())
    assert not any(stage.water for stage in dry)
    assert silent == ()


def test_water_levels_of_stages_are_not_laid_out_and_it_says_so() -> None:
    site = Site(stages=(Stage(name="dig", dig_to=-6.0, install=("P1-strut-1",), water=-6.5),))
    _, _, findings = plan_stages(site, DIG, ("W",), (STRUT,), {}, (*OUTSIDE, INSIDE))
    assert "stage_water_not_laid_out" in {finding.code for finding in findings}


def test_loads_on_the_finished_floor_come_on_last_and_those_of_no_stage_never() -> None:
    stages, _, findings = plan_stages(Site(), DIG, ("W",), (STRUT,), {"A": None, "B": AT_END, "C": "later"}, ())
    assert stages[0].loads_on == ("A",)
    assert (stages[-1].text, stages[-1].loads_on) == ("loads inside the pit come on", ("B",))
    assert [(finding.code, finding.where) for finding in findings] == [("load_never_on", "C")]


def test_a_row_of_columns_is_its_load_over_its_spacing() -> None:
    # 2400 kN each 6 m are 400 kN per metre along the wall.
    load = Load(id="", kind="point", value=2400.0, points=((0.0, 0.0),), level=-2.0)
    made, finding = row_load(LoadRow(id="P1-load-1", load=load, x=12.0, spacing=6.0))
    assert (made.at, made.section.value, made.section.unit) == (((12.0, -2.0),), 400.0, "kN/m")
    assert finding is None
    alone, finding = row_load(LoadRow(id="P1-load-1", load=load, x=12.0, spacing=None))
    assert alone.section.value is None
    assert finding is not None


SHAPE = PitShape(
    id="P1", closed=False, axis=np.array([[0.0, 0.0], [40.0, 0.0]]), at=np.array([0.0, 40.0]), length=40.0,
    arcs=(), corners=(), runs=(), circle=None, circles=(),
)  # fmt: skip
STEP = Step(line=((16.0, 0.0), (16.0, 20.0)), drop=2.0, at=(16.0,))


def plan(shallow: float) -> FloorPlan:
    """A wall 40 m long, dug to `shallow` up to 16 m and 2 m deeper beyond."""
    areas = (shapely.box(0, 0, 16, 20), shapely.box(16, 0, 40, 20))
    floors = tuple(Floor(level=level, dig_level=level) for level in (shallow, shallow - 2.0))
    return FloorPlan(floors=floors, areas=areas, assumed=False)


def row(level: float, first: float) -> SupportRow:
    at = np.arange(first, 40.0, 4.0)
    widths = np.full(len(at), 4.0)
    widths[0], widths[-1] = first + 2.0, 2.0 + 40.0 - at[-1]
    blank = np.full(len(at), np.nan)
    member = Member(
        id="P1-anchor-1", role="anchor", count=len(at), spacing=4.0, spacing_range=(4.0, float(widths[0])),
        inclination=15.0, skew=0.0, level=level, free_length=None, bond_length=None, along=(), sources=(),
    )  # fmt: skip
    return SupportRow(
        member=member, supports=tuple(range(len(at))), head_at=at, far_at=blank, tributary_head=widths,
        tributary_far=blank, waler=None,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("shallow", "first", "width"),
    [
        (-4.0, 18.0, 4.0),  # buried beyond the step at 16: 2 m to it and half of 4 m
        (-6.0, 18.0, 20.0),  # the dig goes below the row on both sides: it stands for all the wall before it
        (-4.0, 2.0, 4.0),  # the row goes on past the step
    ],
)
def test_a_row_ends_at_a_step_beyond_which_it_would_be_buried(shallow: float, first: float, width: float) -> None:
    (made,) = end_at_steps([row(-5.0, first)], plan(shallow), SHAPE, (STEP,), Limits())
    assert made.tributary_head[0] == pytest.approx(width)
    assert list(made.tributary_head[1:]) == list(row(-5.0, first).tributary_head[1:])
    assert (made.member.spacing_range is None) == (width == 4.0)


def test_no_step_changes_no_row() -> None:
    one = row(-5.0, 18.0)
    assert end_at_steps([one], plan(-4.0), SHAPE, (), Limits()) == (one,)
