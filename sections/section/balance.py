"""The balance lines of a section and the actions that no two-dimensional section can show."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import cos, radians, sin

import numpy as np

from sections.definition import Action, Balance, BalanceLine, SectionLoad, SectionMaterial
from sections.member import PerMetre, SectionMember
from sections.section.cut import Cut, CutWall
from sections.smearing.loads import line_resultant, strip_resultant

WATER = 9.81
"""Unit weight of water, kN/m3."""


def balance_section(
    cut: Cut,
    members: Sequence[SectionMember],
    columns: Mapping[str, Sequence[tuple[float, str]]],
    materials: Mapping[str, SectionMaterial],
    loads: Sequence[SectionLoad],
    water: float | None,
) -> Balance:
    """Work out the forces the section must close with, kN per m run of wall.

    Args:
        cut: The cut with its walls.
        members: Members of the section, smeared.
        columns: Per wall side ("left", "right") the layer tops behind it, highest first: (level, material id).
        materials: Materials of the section.
        loads: Loads as handed over.
        water: Retained water level, None when not given.
    """
    horizontal = [_thrust(wall, columns.get(wall.side, ()), materials, water) for wall in cut.walls]
    horizontal += [_load_thrust(cut, load) for load in loads]
    horizontal += _horizontal_preloads(members)
    known = [line.value for line in horizontal]
    if len(cut.walls) == 2 and all(value is not None for value in known[:2]):
        rest = sum(value for value in known if value is not None)
        horizontal.append(
            BalanceLine(text="residual: the section as a whole is pushed this way", value=rest, unit="kN/m")
        )
    if len(cut.walls) == 1:
        text = "round the ring the thrust balances itself, as far as it is even"
        if cut.kind != "axisymmetric":
            text = "one wall only: what its supports push against is outside this section; model both walls if it moves"
        horizontal.append(BalanceLine(text=text, value=None, unit="kN/m"))
    return Balance(horizontal=tuple(horizontal), vertical=tuple(_vertical(members)))


def _load_thrust(cut: Cut, load: SectionLoad) -> BalanceLine:
    """Thrust on the nearest wall, down to its dig level, of a load as handed over (endless along the wall, elastic)."""
    text = f"thrust of {load.id} as handed over, down to the dig level"
    wall = min(cut.walls, key=lambda w: abs(w.x - load.at[0][0]))
    floor = wall.level["floor"]
    back = sorted(wall.x - x if wall.side == "left" else x - wall.x for x, _ in load.at)
    value = load.section.value
    if value is None or floor is None or back[0] < 0 or load.at[0][1] <= floor:
        return BalanceLine(text=f"{text}: not assessed", value=None, unit="kN/m")
    H = load.at[0][1] - floor
    if load.section.unit == "kPa":
        thrust = value * strip_resultant(back[0], back[-1], H)
    else:
        thrust = value * line_resultant(max(back[0], 1e-3), H)
    return BalanceLine(text=text, value=thrust if wall.side == "left" else -thrust, unit="kN/m")


def _thrust(
    wall: CutWall,
    column: Sequence[tuple[float, str]],
    materials: Mapping[str, SectionMaterial],
    water: float | None,
) -> BalanceLine:
    floor = wall.level["floor"]
    name = f"ground at rest behind the wall at chainage {wall.at:.2f}, down to the dig level"
    value = None if floor is None else at_rest_thrust(column, floor, materials, water)
    if value is None:
        return BalanceLine(text=f"{name}: not assessed, unit weight, K0 or a level is missing", value=None, unit="kN/m")
    note = "" if water is not None else " (no water level given: dry)"
    return BalanceLine(text=name + note, value=value if wall.side == "left" else -value, unit="kN/m")


def at_rest_thrust(
    column: Sequence[tuple[float, str]],
    floor: float,
    materials: Mapping[str, SectionMaterial],
    water: float | None,
) -> float | None:
    """Horizontal thrust of layered ground at rest, with water, from the surface to a level, kN/m.

    Effective vertical stress times K0 plus water pressure, integrated layer by layer (trapezoids are exact here).
    Returns None when a unit weight or K0 is missing.
    """
    edges = [top for top, _ in column if top > floor] + [floor]
    stress, thrust = 0.0, 0.0
    for (top, name), base in zip(column, edges[1:], strict=False):
        soil = materials[name]
        if soil.unit_weight is None or soil.K0 is None:
            return None
        cuts = sorted({top, base, *([water] if water is not None and base < water < top else [])}, reverse=True)
        for upper, lower in zip(cuts[:-1], cuts[1:], strict=True):
            wet = water is not None and upper <= water
            weight = (soil.unit_weight_sat or soil.unit_weight) - WATER if wet else soil.unit_weight
            height = upper - lower
            thrust += soil.K0 * (stress + weight * height / 2) * height
            if wet and water is not None:
                thrust += WATER * ((water - upper) + (water - lower)) / 2 * height
            stress += weight * height
    return thrust


def _horizontal_preloads(members: Sequence[SectionMember]) -> list[BalanceLine]:
    lines = []
    for member in members:
        if not isinstance(member.section, PerMetre) or not member.section.preload_kN_per_m or len(member.points) < 2:
            continue
        if member.side == "both":
            continue  # a strut between two walls pushes both alike
        if member.form != "bar":
            continue  # a bond length hands on what its free length has
        (x1, z1), (x2, z2) = member.points[0], member.points[-1]
        along = (x2 - x1) / float(np.hypot(x2 - x1, z2 - z1))
        value = member.section.preload_kN_per_m * along
        lines.append(BalanceLine(text=f"preload of {member.id} on the wall", value=value, unit="kN/m"))
    return lines


def _vertical(members: Sequence[SectionMember]) -> list[BalanceLine]:
    lines = []
    for member in members:
        if not isinstance(member.section, PerMetre):
            continue
        if member.role == "wall" and member.section.weight_kN_per_m2 is not None and len(member.points) == 2:
            height = abs(member.points[0][1] - member.points[-1][1])
            kind = "net of soil" if member.section.net_of_soil else "full"
            value = member.section.weight_kN_per_m2 * height
            lines.append(BalanceLine(text=f"self-weight of {member.id} ({kind})", value=value, unit="kN/m"))
        dip = member.real.inclination
        if member.role in ("anchor", "raker") and dip and member.form == "bar":
            lines.append(_dip_line(member, dip))
    return lines


def _dip_line(member: SectionMember, dip: float) -> BalanceLine:
    down = (member.role == "anchor") == (dip > 0)
    word = "pulls the wall down" if down else "lifts the wall"
    preload, spacing = member.real.preload_kN, member.real.spacing
    if preload is None or spacing is None:
        text = f"{member.id} {word} by {sin(radians(abs(dip))):.3f} of its force; preload not given"
        return BalanceLine(text=text, value=None, unit="kN/m")
    value = abs(preload) * sin(radians(abs(dip))) / spacing
    return BalanceLine(text=f"preload of {member.id} {word}", value=value if down else -value, unit="kN/m")


def list_actions(cut: Cut, members: Sequence[SectionMember]) -> tuple[Action, ...]:
    """List what this section cannot show, with its size where it can be worked out from the members."""
    actions = []
    for member in members:
        skew, dip = member.real.skew or 0.0, member.real.inclination or 0.0
        across = cos(radians(dip)) * sin(radians(abs(skew)))
        if member.form == "bar" and across > 1e-6 and member.role != "waler":
            force = member.real.preload_kN
            text = f"thrust along the wall from each {member.id}: {across:.3f} of its force"
            if member.role == "corner_strut":
                text += f", away from the corner; {member.real.count} of them add up to the first shear stop"
            actions.append(
                Action(
                    name=text,
                    size=None if force is None else abs(force) * across,
                    unit="kN per member at its preload",
                    at=member.id,
                )
            )
        if member.form == "bar" and member.real.spacing and member.role in ("strut", "raker", "anchor"):
            actions.append(_waler_bending(member, member.real.spacing))
    for wall in cut.walls:
        at = f"chainage {wall.at:.2f}"
        actions.append(Action(name="change of movement along the wall", size=None, unit="m per m", at=at))
        actions.append(Action(name="bending of the wall along its length", size=None, unit="kNm/m", at=at))
    return tuple(actions)


def _waler_bending(member: SectionMember, spacing: float) -> Action:
    """Continuous waler on equal spans under an even line load: M = w s^2/10 = N s/10 (common practice, no source)."""
    force = member.real.preload_kN
    return Action(
        name=f"bending of the waler between {member.id}: {spacing / 10:.3f} m times the force of one member",
        size=None if force is None else abs(force) * spacing / 10,
        unit="kNm at the preload",
        at=member.id,
    )
