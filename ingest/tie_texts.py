"""Notes tied to the members they speak of: by their leader, else by the nearest member."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

import numpy as np

from ingest.figures import outline_of, plan
from ingest.members import Point
from ingest.notes import Notes, label
from ingest.parts import Part
from ingest.roles import RoleGiven
from ingest.surroundings import upright
from ingest.texts import Note, read_note
from ingest.words import find_meanings

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

MEMBERS = ("wall", "bearing_pile", "strut", "corner_strut", "raker", "anchor", "waler", "slab", "footing", "load")
TIP_REACH = 1.0
"""A leader names the member within this of its point, m (judgement)."""
LETTERS = 4.0
"""A text names the nearest member within this many letter heights, but at least `NEAREST` (judgement)."""
NEAREST = 1.5
SAME = 0.005
"""Levels closer than this are the same level written twice, m."""


@dataclass
class Tied:
    """Notes by member part, and what all notes on the members of one layer agree on."""

    own: dict[int, list[Note]] = field(default_factory=lambda: defaultdict(list))
    common: dict[tuple[str, str], float] = field(default_factory=dict)

    def value(self, item: RoleGiven, name: str) -> float | None:
        """What a note says of this member, else what the notes on its layer agree on; None when neither does."""
        said = [value for note in self.own.get(id(item.part), ()) if (value := getattr(note, name)) is not None]
        if said and max(said) - min(said) <= SAME:
            return float(said[0])
        return self.common.get((label(item), name))

    def load(self, item: RoleGiven, unit: str) -> float | None:
        """The load in one unit that notes give to this member; None when they give none, or several."""
        own = self.own.get(id(item.part), ())
        said = {note.load for note in own if note.load is not None and note.load_unit == unit}
        return said.pop() if len(said) == 1 else None


def tie_texts(given: Sequence[RoleGiven], notes: Notes) -> Tied:
    """Tie every note with numbers to a member.

    Args:
        given: Roles of all parts.
        notes: Takes contradictions; learns which texts are used.

    Returns:
        The notes by member.
    """
    members = [item for item in given if item.role in MEMBERS]
    tied = Tied()
    written = [(item, read_note(item.part.text)) for item in given if item.part.form == "text" and item.role == "level"]
    written = [(item, note) for item, note in written if note != Note()]
    if not members or not written:
        return tied
    nearest = _Nearest(members)
    for item, note in written:
        for point, reach in _places(item.part):
            member = nearest(point, reach, note)
            if member is not None and _speaks_of(item.part, member, note):
                tied.own[id(member.part)].append(note)
                notes.used_texts.add(id(item.part))
    _agree(members, tied, notes)
    _compare_drawn(members, tied, notes)
    _compare_spacing(members, tied, notes)
    return tied


def _places(text: Part) -> list[tuple[Point, float]]:
    tips = [tip.split() for tip in text.tags.get("leader", "").split(";") if tip.strip()]
    if tips:
        return [((float(tip[0]), float(tip[1])), TIP_REACH) for tip in tips if len(tip) > 1]
    height = float(text.tags.get("height", "0") or 0)
    return [((text.points[0][0], text.points[0][1]), max(LETTERS * height, NEAREST))]


def _speaks_of(text: Part, member: RoleGiven, note: Note) -> bool:
    """A bare level beside a member may be the ground's; it is the member's by leader, layer or wording only."""
    if _is_load(note):
        return True
    if note.toe is not None or note.top is not None or note.level is None or text.tags.get("leader"):
        return True
    meant = {meaning.role for name in (text.layer, text.text) for meaning in find_meanings(name)}
    return text.layer == member.part.layer or member.role in meant


def _is_load(note: Note) -> bool:
    """Whether a note gives a load and not the capacity of a pile or the force in a support."""
    return note.load is not None and note.diameter is None and note.spacing is None and note.count is None


def _agree(members: Sequence[RoleGiven], tied: Tied, notes: Notes) -> None:
    """One level written beside some members of a layer holds for all of them; two do not, and are asked about."""
    said: dict[tuple[str, str], list[float]] = defaultdict(list)
    for item in members:
        for note in tied.own.get(id(item.part), ()):
            for name in ("level", "toe", "top"):
                value = getattr(note, name)
                if value is not None:
                    said[label(item), name].append(value)
    for key, values in sorted(said.items()):
        if max(values) - min(values) <= SAME:
            tied.common[key] = values[0]
            text = f"{key[1]} {values[0]:g} m for all of {key[0]}"
            notes.assume("text-level", f"{key[0]} {key[1]}", text, f"{len(values)} notes beside them say so")
        else:
            levels = ", ".join(f"{value:g}" for value in sorted(set(values)))
            text = f"notes give different values of {key[1]}: {levels} m; members without a note of their own have none"
            notes.see("text-levels-differ", "note", key[0], text)


def _compare_drawn(members: Sequence[RoleGiven], tied: Tied, notes: Notes) -> None:
    """A diameter written beside a circle of another size: the unit of the drawing, or one of the two, is wrong."""
    seen: set[tuple[str, float, float]] = set()
    for item in members:
        for note in tied.own.get(id(item.part), ()):
            drawn = None if item.part.radius is None else 2 * item.part.radius
            if note.diameter is None or drawn is None or math.isclose(note.diameter, drawn, rel_tol=0.02):
                continue
            key = (label(item), round(note.diameter, 4), round(drawn, 4))
            if key not in seen:
                seen.add(key)
                text = f"a note says diameter {note.diameter:g} m, the circle has {drawn:g} m"
                notes.see("diameter-differs", "check", label(item), text, (item.part.source,))


def _compare_spacing(members: Sequence[RoleGiven], tied: Tied, notes: Notes) -> None:
    """A spacing written beside piles that are drawn at another one."""
    from scipy.spatial import cKDTree

    layers: dict[str, list[RoleGiven]] = defaultdict(list)
    for item in members:
        if upright(item.part) is not None:
            layers[label(item)].append(item)
    for name, piles in sorted(layers.items()):
        said = {note.spacing for item in piles for note in tied.own.get(id(item.part), ()) if note.spacing}
        if not said or len(piles) < 3:
            continue
        xy = np.array([item.part.points[0][:2] for item in piles])
        drawn = float(np.median(np.asarray(cKDTree(xy).query(xy, k=2)[0])[:, 1]))
        for spacing in sorted(said):
            if not math.isclose(spacing, drawn, rel_tol=0.05):
                text = f"a note says spacing {spacing:g} m, the piles are drawn at {drawn:.3g} m"
                notes.see("spacing-differs", "check", name, text)


class _Nearest:
    """The member nearest to a point; a note on toe or top speaks of a wall or pile only, a load of a load only."""

    def __init__(self, members: Sequence[RoleGiven]) -> None:
        from shapely import STRtree

        self._members = list(members)
        self._tree = STRtree([_shape(item) for item in members])

    def __call__(self, point: Point, reach: float, note: Note) -> RoleGiven | None:
        from shapely import Point as At

        at = At(point)
        near = sorted(int(n) for n in self._tree.query(at, predicate="dwithin", distance=reach))
        near = [n for n in near if (self._members[n].role == "load") == _is_load(note)]
        upright = note.toe is not None or note.top is not None or note.diameter is not None
        fit = [self._members[n] for n in near if not upright or self._members[n].role in ("wall", "bearing_pile")]
        return min(fit, key=lambda item: float(_shape(item).distance(at)), default=None)


def _shape(item: RoleGiven) -> BaseGeometry:
    """Line, disc or, for a load, area that a note may stand by; a note within a load is its own."""
    from shapely import LineString, Polygon
    from shapely import Point as At

    part = item.part
    line = plan(part.points)
    if item.role == "load" and (ring := outline_of(part)):
        return Polygon(ring)
    if len(line) < 2:
        return At(line[0]).buffer(part.radius) if part.radius else At(line[0])
    return LineString((*line, line[0]) if part.closed or part.form in ("outline", "prism") else line)
