"""The tables of the brief, one class each, with their units (m, kN, kPa, degrees, world plan) and ranges."""

from __future__ import annotations

import datetime
from typing import Annotated, Literal

from pydantic import AfterValidator, BaseModel, BeforeValidator, ConfigDict, Field, model_validator

from ingest import brief_values as v
from ingest.members import Continuity, LoadKind, Role, WallKind
from ingest.model import RING_OUTPUTS
from ingest.units import unit_name

XY = tuple[v.Coordinate, v.Coordinate]
LengthUnit = Annotated[str, AfterValidator(unit_name)]
DateText = Annotated[str, BeforeValidator(lambda day: day.isoformat() if isinstance(day, datetime.date) else day)]


def _as_line(value: object) -> object:
    if isinstance(value, tuple) and len(value) == 4:
        return (value[:2], value[2:])
    return value


Line = Annotated[tuple[XY, XY], BeforeValidator(_as_line)]


class Table(BaseModel):
    """A table of the brief: unknown keys, wrong types and non-finite numbers are refused."""

    model_config = ConfigDict(extra="forbid", strict=True, allow_inf_nan=False, frozen=True, populate_by_name=True)


class Match(Table):
    """Which entities are meant; `*` and `?` stand for any letters, capitals do not matter, all given keys must fit."""

    layer: str | None = None
    cls: str | None = Field(None, alias="class")
    name: str | None = None
    id: str | None = None

    @model_validator(mode="after")
    def _says_something(self) -> Match:
        if not any((self.layer, self.cls, self.name, self.id)):
            raise ValueError("match is empty; give layer, class, name or id")
        return self


class SiteTable(Table):
    """[site]."""

    name: str = ""
    date: DateText | None = None
    crs: str | None = None
    ground_level: v.Level | None = None
    datum: str | None = None
    start: XY | None = None


class FileTable(Table):
    """[files."NAME"]: unit, and how the file is laid onto the site: turned about its own origin, then shifted."""

    length_unit: LengthUnit | None = None
    shift: XY | None = None
    rotation_deg: v.Angle | None = None
    ignore_layers: tuple[str, ...] = ()


class RoleTable(Table):
    """[[roles]]."""

    match: Match
    role: Role
    wall_kind: WallKind | None = None


class LevelTable(Table):
    """[levels]."""

    formation: v.Level | None = None
    top: v.Level | None = None
    dig_allowance: v.Allowance | None = None
    water_retained: v.Level | None = None
    water_excavated: v.Level | None = None


class FloorTable(Table):
    """[[floors]]."""

    match: Match | None = None
    level: v.Level | None = None
    dig_allowance: v.Allowance | None = None


class StratumTable(Table):
    """[[strata]]."""

    name: str = ""
    top_level: v.Level | None = None
    from_boreholes: str | None = None
    unit_weight: v.UnitWeight | None = None
    E: v.Stress | None = None
    E_gradient: v.Gradient | None = None
    nu: v.Poisson | None = None
    K0: v.AtRest | None = None
    c: v.Strength | None = None
    phi: v.Friction | None = None
    su: v.Strength | None = None
    su_gradient: v.Gradient | None = None
    drainage: Literal["drained", "undrained"] | None = None
    permeability: v.Permeability | None = None

    @model_validator(mode="after")
    def _one_top(self) -> StratumTable:
        if self.top_level is not None and self.from_boreholes is not None:
            raise ValueError("give top_level or from_boreholes, not both")
        return self


class MaterialTable(Table):
    """[[materials]]."""

    id: str
    kind: Literal["concrete", "steel", "grout", "timber"]
    concrete_class: str | None = None
    E: v.Stress | None = None
    unit_weight: v.UnitWeight | None = None

    @model_validator(mode="after")
    def _one_stiffness(self) -> MaterialTable:
        if self.concrete_class is not None and self.E is not None:
            raise ValueError("give concrete_class or E, not both")
        if self.concrete_class is not None and self.kind != "concrete":
            raise ValueError(f'concrete_class does not fit kind = "{self.kind}"')
        v.check_modulus(self.kind, self.E)
        return self


class WallTable(Table):
    """[[walls]]."""

    match: Match | None = None
    material: str | None = None
    EI_factor: v.Factor | None = None
    continuity: Continuity | None = None
    top: v.Level | None = None
    toe: v.Level | None = None

    @model_validator(mode="after")
    def _toe_below_top(self) -> WallTable:
        if self.top is not None and self.toe is not None and self.toe >= self.top:
            raise ValueError(f"toe {self.toe:g} m is not below top {self.top:g} m")
        return self


class SupportTable(Table):
    """[[supports]]."""

    match: Match | None = None
    role: Literal["strut", "corner_strut", "raker", "anchor"] | None = None
    level: v.Level | None = None
    inclination: v.Inclination | None = None
    free_length: v.Length | None = None
    bond_length: v.Length | None = None
    bond_diameter: v.Diameter | None = None
    section: str | None = None
    EA: v.Rigidity | None = None
    material: str | None = None
    preload: v.Force | None = None
    thermal_range: v.Temperature | None = None
    packing_stiffness: v.Stiffness | None = None
    waler: bool | None = None
    waler_EI: v.BendingRigidity | None = None
    capping_beam: bool | None = None
    continuous_at_corners: bool | None = None

    @model_validator(mode="after")
    def _one_section(self) -> SupportTable:
        if self.section is not None and self.EA is not None:
            raise ValueError("give section or EA, not both")
        return self


class LoadTable(Table):
    """[[loads]]: point kN, line kN/m, area and footing kPa."""

    match: Match | None = None
    points: tuple[XY, ...] | None = None
    kind: LoadKind | None = None
    value: v.LoadValue | None = None
    level: v.Level | None = None
    stage: str | None = None

    @model_validator(mode="after")
    def _one_place(self) -> LoadTable:
        if (self.match is None) == (self.points is None):
            raise ValueError("give match or points, one of the two")
        if self.points is not None:
            least = {"point": 1, "line": 2}.get(self.kind or "", 3 if self.kind else 1)
            if len(self.points) < least:
                raise ValueError(f"{self.kind} load needs at least {least} points, has {len(self.points)}")
            if self.kind is None:
                raise ValueError("a load given by points needs its kind: point, line, area or footing")
        return self


class ReceptorTable(Table):
    """[[receptors]]."""

    match: Match | None = None
    points: tuple[XY, ...] | None = None
    kind: str | None = None
    level: v.Level | None = None
    sensitivity: str | None = None

    @model_validator(mode="after")
    def _one_place(self) -> ReceptorTable:
        if (self.match is None) == (not self.points):
            raise ValueError("give match or points, one of the two")
        return self


class StageTable(Table):
    """[[stages]]: a stage, or one entry with nothing but `sequence`."""

    name: str = ""
    dig_to: v.Level | None = None
    install: tuple[str, ...] = ()
    remove: tuple[str, ...] = ()
    water: v.Level | None = None
    drainage: Literal["drained", "undrained"] | None = None
    sequence: Literal["bottom_up", "top_down", "berm"] | None = None

    @model_validator(mode="after")
    def _sequence_alone(self) -> StageTable:
        if self.sequence is not None and self.model_fields_set != {"sequence"}:
            raise ValueError("sequence stands alone in its entry")
        return self


class CutTable(Table):
    """[[decisions.pin]], [[decisions.forbid]]: line = [[x, y], [x, y]], world."""

    line: Line
    by: str = ""
    date: DateText = ""
    because: str = ""

    @model_validator(mode="after")
    def _has_length(self) -> CutTable:
        if self.line[0] == self.line[1]:
            raise ValueError("both ends of line are one point")
        return self


class ConfirmTable(Table):
    """[[decisions.confirm]]."""

    assumption: str
    by: str = ""
    date: DateText = ""


class MoveTable(CutTable):
    """[[decisions.move]]: the cut at `line` goes `to` another line."""

    to: Line | None = None


class DecisionTables(Table):
    """[[decisions.*]]."""

    pin: tuple[CutTable, ...] = ()
    forbid: tuple[CutTable, ...] = ()
    move: tuple[MoveTable, ...] = ()
    confirm: tuple[ConfirmTable, ...] = ()


class LimitTable(Table):
    """[limits]: the fields of `ingest.model.Limits`."""

    ratio_low: v.RatioLow | None = None
    ratio_high: v.RatioHigh | None = None
    ratio_narrow: v.RatioHigh | None = None
    governing: tuple[str, ...] | None = None
    plan: v.Tolerance | None = None
    level: v.Tolerance | None = None
    spacing_ratio: v.Tolerance | None = None
    stiffness_ratio: v.Tolerance | None = None
    surcharge: v.Tolerance | None = None
    direction: v.Tolerance | None = None

    @model_validator(mode="after")
    def _known_outputs(self) -> LimitTable:
        for name in (name for name in self.governing or () if name not in RING_OUTPUTS):
            raise ValueError(f'governing: "{name}" is no output; known are {", ".join(RING_OUTPUTS)}')
        return self
