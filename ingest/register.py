"""Files laid on each other and moved into the local frame."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ingest.brief import Brief
from ingest.brief_lines import one_line, quoted
from ingest.members import Point, Point3
from ingest.model import Frame, ModelPlace, Registered
from ingest.notes import Notes
from ingest.outlines import FITS, SLIPS, Placement, distance_between, find_placements, outline_points
from ingest.parts import FileParts, Part
from ingest.roles import RoleGiven
from ingest.surroundings import upright
from ingest.trail import Source

NEAR_ORIGIN = 10_000.0
"""Data within this distance of the origin keep their coordinates, m."""
ROUND_DOWN = 1000.0


@dataclass(frozen=True, kw_only=True)
class Moved:
    """The files in the local frame, the frame, and how each file was laid onto the site."""

    files: tuple[FileParts, ...]
    frame: Frame
    registered: dict[str, Registered]

    def to_local(self, point: Point) -> Point:
        """A world point in the local frame."""
        return point[0] - self.frame.offset[0], point[1] - self.frame.offset[1]


def lay_files(files: Sequence[FileParts], brief: Brief) -> Moved:
    """Turn and shift each file as the brief says, and move all into the local frame.

    Args:
        files: Files as read, metres, each in its own coordinates.
        brief: Shift and rotation by file name.
    """
    registered = {}
    laid = []
    for file in files:
        entry = brief.files.get(file.file)
        shift = (entry.shift if entry else None) or (0.0, 0.0)
        turn = (entry.rotation_deg if entry else None) or 0.0
        registered[file.file] = Registered(shift=shift, rotation_deg=turn)
        laid.append(_move(file, shift, turn))
    offset = _offset(laid)
    if offset != (0.0, 0.0):
        laid = [_move(file, (-offset[0], -offset[1]), 0.0) for file in laid]
    crs = brief.site.crs or next((file.crs for file in laid if file.crs), None)
    frame = Frame(offset=(*offset, 0.0), crs=crs)
    return Moved(files=tuple(laid), frame=frame, registered=registered)


def model_places(moved: Moved) -> dict[str, ModelPlace]:
    """Where each model lies in the world, the brief's shift and turn included, by file name."""
    places = {}
    for file in moved.files:
        if file.place is not None:
            done = moved.registered[file.file]
            (x, y), z = _turn(file.place.origin[:2], done.rotation_deg), file.place.origin[2]
            origin = (x + done.shift[0], y + done.shift[1], z)
            turn = file.place.rotation_deg + done.rotation_deg
            places[file.file] = replace(file.place, origin=origin, rotation_deg=turn)
    return places


def _turn(point: Point, degrees: float) -> Point:
    c, s = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))
    return c * point[0] - s * point[1], s * point[0] + c * point[1]


def box_of(file: FileParts) -> tuple[float, float, float, float] | None:
    """Least and largest x and y of a file, m; None when it holds no place."""
    points = [point for part in file.parts for point in part.points]
    points += [hole.location for hole in file.boreholes]
    if not points:
        return None
    xy = np.array(points)[:, :2]
    low, high = xy.min(axis=0), xy.max(axis=0)
    return float(low[0]), float(low[1]), float(high[0]), float(high[1])


def check_registration(moved: Moved, given: Sequence[RoleGiven], notes: Notes) -> None:
    """Ask where a file lies that does not meet another one, or whose walls lie beside those of the other.

    Nothing is moved: a placement that was worked out becomes a question with its residual and the lines that apply it.

    Args:
        moved: The files in the local frame.
        given: Roles of all their parts.
        notes: Takes findings and questions.
    """
    boxes = [(file, box) for file in moved.files if (box := box_of(file)) is not None]
    walls = {file.file: outline_points([g for g in given if g.part.source.file == file.file]) for file, _ in boxes}
    for n, (one, a) in enumerate(boxes):
        for other, b in boxes[n + 1 :]:
            gap = math.hypot(max(a[0] - b[2], b[0] - a[2], 0.0), max(a[1] - b[3], b[1] - a[3], 0.0))
            apart = gap > max(a[2] - a[0], a[3] - a[1], b[2] - b[0], b[3] - b[1], 50.0)
            outlines = walls[one.file], walls[other.file]
            drawn_twice = all(len(points) > 3 for points in outlines)
            if not apart and not (drawn_twice and distance_between(*outlines) > FITS):
                _compare_counts(one.file, other.file, given, notes)
                continue
            placements = find_placements(*outlines) if drawn_twice else ()
            if placements:
                _ask_placement(one.file, other.file, placements, moved, notes)
            elif apart:
                _ask_shift(one.file, other.file, a, b, gap, notes)


def _compare_counts(one: str, other: str, given: Sequence[RoleGiven], notes: Notes) -> None:
    """Two files that show the same walls or supports should show as many of them."""
    piles = Counter(g.part.source.file for g in given if g.role == "wall" and upright(g.part) is not None)
    supports = Counter(g.part.source.file for g in given if g.role in ("strut", "corner_strut", "raker", "anchor"))
    for what, count in (("wall piles", piles), ("supports", supports)):
        if count[one] and count[other] and count[one] != count[other]:
            text = f"{one} shows {count[one]} {what}, {other} {count[other]}"
            notes.see("counts-differ", "check", f"{one}, {other}", text)


def _ask_placement(one: str, other: str, placements: Sequence[Placement], moved: Moved, notes: Notes) -> None:
    best = placements[0]
    sources = (Source(file=one, item=""), Source(file=other, item=""))
    slip = SLIPS[min(SLIPS, key=lambda factor: abs(factor * best.scale - 1))]
    odd = ", ".join(word for word in ("mirrored" if best.mirrored else "", slip and f"drawn in {slip}") if word)
    more = f"; {len(placements)} placements fit alike" if len(placements) > 1 else ""
    text = (
        f"the walls of {other} do not lie on those of {one}; turned by {best.turn:.2f} degrees and shifted they do, "
        f"within {best.residual:.3f} m in the mean{f' ({odd})' if odd else ''}{more}; nothing has been moved"
    )
    notes.see("files-apart", "check", f"{one}, {other}", text, sources)
    lines = [_placing_lines(other, placement, moved) for placement in placements]
    readings = [
        (line.replace("\n", ", "), f"outlines agree within {p.residual:.3f} m", round(0.8 / len(placements), 2))
        for line, p in zip(lines, placements, strict=True)
    ]
    notes.ask(f"where does {other} lie on {one}?", lines[0], readings)


def _placing_lines(file: str, p: Placement, moved: Moved) -> str:
    """Lines of the brief for a placement found in the local frame, on top of what the brief has done already."""
    if p.mirrored:
        return f"# {one_line(file)} is mirrored, which no brief can undo: mirror the drawing"
    done, (ox, oy, _) = moved.registered[file], moved.frame.offset
    c, s = math.cos(math.radians(p.turn)), math.sin(math.radians(p.turn))
    x, y = p.scale * (done.shift[0] - ox), p.scale * (done.shift[1] - oy)
    shift = (c * x - s * y + p.shift[0] + ox, s * x + c * y + p.shift[1] + oy)
    turn = (done.rotation_deg + p.turn + 180) % 360 - 180
    unit = SLIPS[min(SLIPS, key=lambda factor: abs(factor * p.scale - 1))]
    lines = [f"[files.{quoted(file)}]", f'length_unit = "{unit}"' if unit else ""]
    lines += [f"shift = [{shift[0]:.4f}, {shift[1]:.4f}]", f"rotation_deg = {turn:.5f}"]
    return "\n".join(line for line in lines if line)


def _ask_shift(name: str, other: str, a: tuple[float, ...], b: tuple[float, ...], gap: float, notes: Notes) -> None:
    sources = (Source(file=name, item=""), Source(file=other, item=""))
    text = f"{name} and {other} do not meet: {gap:.0f} m lie between them; they have not been laid on each other"
    notes.see("files-apart", "check", f"{name}, {other}", text, sources)
    shift = (round((a[0] + a[2] - b[0] - b[2]) / 2, 1), round((a[1] + a[3] - b[1] - b[3]) / 2, 1))
    middle = f"their middles would meet at this shift ({shift[0]:g}, {shift[1]:g}); only a guess"
    notes.ask(
        f"where does {other} lie on {name}?",
        f"[files.{quoted(other)}]\nshift = [{shift[0]}, {shift[1]}]",
        (
            (f"{other} has its own origin", middle, 0.4),
            ("the coordinates are true", "they are as the file has them", 0.4),
        ),
    )


def _offset(files: Iterable[FileParts]) -> tuple[float, float]:
    boxes = [box for file in files if (box := box_of(file)) is not None]
    if not boxes:
        return 0.0, 0.0
    low = (min(box[0] for box in boxes), min(box[1] for box in boxes))
    high = (max(box[2] for box in boxes), max(box[3] for box in boxes))
    if max(abs(value) for value in (*low, *high)) <= NEAR_ORIGIN:
        return 0.0, 0.0
    middle = ((low[0] + high[0]) / 2, (low[1] + high[1]) / 2)
    return math.floor(middle[0] / ROUND_DOWN) * ROUND_DOWN, math.floor(middle[1] / ROUND_DOWN) * ROUND_DOWN


def _move(file: FileParts, shift: Point, turn: float) -> FileParts:
    if shift == (0.0, 0.0) and turn == 0.0:
        return file
    c, s = math.cos(math.radians(turn)), math.sin(math.radians(turn))

    def _moved(point: Point3) -> Point3:
        return c * point[0] - s * point[1] + shift[0], s * point[0] + c * point[1] + shift[1], point[2]

    def _part(part: Part) -> Part:
        holes = tuple(tuple(_moved(point) for point in hole) for hole in part.holes)
        return replace(part, points=tuple(_moved(point) for point in part.points), holes=holes)

    return replace(
        file,
        parts=tuple(_part(part) for part in file.parts),
        setting=tuple(_part(part) for part in file.setting),
        boreholes=tuple(replace(hole, location=_moved(hole.location)) for hole in file.boreholes),
    )
