"""Parametric readings against the geometry kernel's own solids, on real files and on models made here."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections import Counter, defaultdict
from math import dist, pi
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import shapely
from ifc_builder import IfcBuilder
from numpy.typing import NDArray

from ingest.ifc.reader import read_ifc
from ingest.parts import Part

CHILD = Path(__file__).parent / "kernel_child.py"
FOLDER = Path(os.environ.get("CUTWORTHY_CORPUS", "")) / "ifc"
APPROXIMATE = (
    "cut",
    "mesh",
    "hull",
    "not level",
    "parts",
    "left out",
    "box",
    "differs",
    "slope",
    "start",
    "longest",
    "fills",
)
"""Words of the evidence by which a reading says itself that it is no exact copy of the body."""
VOLUME = 0.01
"""Largest difference of volumes: the kernel chords its arcs, and so do outlines here."""
PLACE = 2e-3
"""Largest difference of positions, m."""


def kernel(path: Path) -> dict[str, Any]:
    made = subprocess.run(
        [sys.executable, "-P", str(CHILD), str(path)], capture_output=True, check=True, timeout=280,
        env={**os.environ, "OMP_NUM_THREADS": "1"},
    )  # fmt: skip
    found: dict[str, Any] = json.loads(made.stdout)
    return found


def volume(part: Part) -> float | None:
    height = (part.z_top or 0.0) - (part.z_bottom or 0.0)
    if part.form == "circle" and part.radius:
        inner = part.radius - part.thickness if part.thickness else 0.0
        return pi * (part.radius**2 - inner**2) * height
    if part.form == "prism":
        rings = [[p[:2] for p in ring] for ring in (part.points, *part.holes)]
        return shapely.Polygon(rings[0], rings[1:]).area * height
    if part.form == "path" and part.thickness and part.z_top is not None:
        points = [p[:2] for p in part.points]
        line = shapely.LineString([*points, points[0]] if part.closed else points)
        return line.length * part.thickness * height
    if part.form == "bar" and part.section and part.section.A:
        return part.section.A * dist(*part.points)
    return None


def displaced(part: Part, at: NDArray[np.float64]) -> float:
    """How far the kernel's vertices stand from where the part says its surface is, m."""
    levels = 0.0
    if part.form != "bar" and part.z_top is not None and part.z_bottom is not None:
        levels = max(abs(at[:, 2].max() - part.z_top), abs(at[:, 2].min() - part.z_bottom))
    if part.form == "circle" and part.radius:
        reach = np.hypot(*(at[:, :2] - part.points[0][:2]).T).max()
        return max(levels, abs(reach - part.radius))
    if part.form == "prism":
        box = shapely.Polygon([p[:2] for p in part.points]).bounds
        return max(levels, float(np.abs(np.array(box) - [*at[:, :2].min(axis=0), *at[:, :2].max(axis=0)]).max()))
    if part.form == "path" and len(part.points) == 2 and part.thickness:
        start, end = np.array([p[:2] for p in part.points])
        normal = np.array([start[1] - end[1], end[0] - start[0]]) / np.hypot(*(end - start))
        across = (at[:, :2] - start) @ normal
        return max(levels, abs(across.max() - part.thickness / 2), abs(across.min() + part.thickness / 2))
    if part.form == "bar":
        way = np.array(part.points[1]) - part.points[0]
        along = (at - part.points[0]) @ way / np.linalg.norm(way)
        return max(abs(float(along.min())), abs(float(along.max() - np.linalg.norm(way))))
    return levels


def compare(path: Path) -> tuple[Counter[str], list[str]]:
    solids = kernel(path)
    parts = defaultdict(list)
    for part in read_ifc(path).parts:
        parts[part.source.item].append(part)
    seen: Counter[str] = Counter()
    wrong = []
    for item, own in parts.items():
        solid = solids.get(item)
        volumes = [volume(part) for part in own]
        if solid is None or None in volumes or any(word in part.evidence for part in own for word in APPROXIMATE):
            seen["not comparable"] += 1
            continue
        seen["compared"] += 1
        total = sum(v for v in volumes if v is not None)
        off = abs(total / solid["volume"] - 1) if solid["volume"] else 0.0
        moved = displaced(own[0], np.array(solid["points"])) if len(own) == 1 else 0.0
        if off > VOLUME or moved > PLACE:
            wrong.append(
                f"{own[0].cls} {own[0].name} {item}: volume {off:.2%}, {moved * 1000:.1f} mm ({own[0].evidence})"
            )
    return seen, wrong


@pytest.mark.slow
@pytest.mark.corpus
@pytest.mark.parametrize(
    ("name", "least"),
    [
        ("residence-2storey-footings-01", 80),
        ("housing-block-structure-01", 380),
        ("frame-house-foundation-slabs-01", 100),
        ("precast-hall-piles-as-beams-01", 1900),
        ("building-large-2storey-01", 20),
        ("pile-typed-feet-01", 4),
        ("walls-inch-01", 5),
        ("walls-centimetre-01", 7),
        ("beams-cardinal-points-01", 4),
        ("slabs-and-walls-cpm-01", 5),
        ("detached-house-ifc4-01", 12),
    ],
)
def test_real_bodies_agree_with_the_kernel(name: str, least: int) -> None:
    seen, wrong = compare(FOLDER / f"{name}.ifc")
    assert not wrong, "\n".join(wrong[:10])
    assert seen["compared"] >= least, seen


@pytest.mark.slow
def test_made_bodies_agree_with_the_kernel(tmp_path: Path) -> None:
    model = IfcBuilder(unit="MILLIMETRE")
    model.pile("P", at=(1000, 2000, 0), diameter=900, length=12000)
    model.pile("tube", at=(5000, 2000, 0), diameter=900, length=12000)
    model.wall("W", (0, 5000, -4000), (9000, 8000, -4000), 400, 4000, offset=150)
    model.slab(
        "S",
        ((0, 0), (9000, 0), (7000, 6000), (0, 5000)),
        -4500,
        -4000,
        holes=[((1000, 1000), (2000, 1000), (2000, 2000))],
    )
    model.bar("raker", (0, 0, 0), (6000, 3000, -4000), model.rectangle(300, 500))
    body = model.extrusion(model.rectangle(400, 600, (200, 100)), 5000)
    turned = model.operator(at=(30000, 0, 0), x=(0, 1, 0), y=(1, 0, 0), z=(0, 0, 1), scale=1.5)
    mapped = model.mapped([body], turned, model.axis3((1000, 0, 0), first=(0, 1, 0)))
    model.product("IfcColumn", "mirrored", body=mapped, body_type="MappedRepresentation")
    line = model.polyline((0, 20000, 0), (8000, 20000, 0), (8000, 26000, 0))
    sweep = model.file.create_entity(
        "IfcFixedReferenceSweptAreaSolid", model.rectangle(700, 300, (0, 400)), None, line, None, None,
        model.direction((0, 0, 1)),
    )  # fmt: skip
    model.product("IfcWall", "swept", body=sweep, body_type="AdvancedSweptSolid")
    seen, wrong = compare(model.save(tmp_path / "model.ifc"))
    assert not wrong, "\n".join(wrong)
    assert seen["compared"] == 7, seen
