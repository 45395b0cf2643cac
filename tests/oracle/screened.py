"""The screening of a scene: the same pit as a site, through the product, one stage, ratios at the block's facets."""

from __future__ import annotations

import sys
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
from scenes import CENTRES, DIAMETER, E_WALL, NU, REST, THICKNESS, WEIGHT, Scene

from ingest.members import Load, Material, Support
from ingest.model import Floor, Site, Stratum
from sections.found import FoundPit
from sections.model import Circle, Floats, Structural, Wall
from sections.pit.find import describe_pits
from sections.screening.run import run_variant
from sections.screening.scene import Scene as Screened
from sections.screening.scene import Variant, make_scene

sys.path.insert(0, str(Path(__file__).parents[1] / "sections"))
from pit_sites import shape_of  # noqa: E402

BASE = Variant(name="base", along=0.0, membrane=False, beam_EI=0.0)


def wall_of_scene(scene: Scene) -> Wall:
    common = {"top": 0.0, "toe": -scene.toe, "material": "concrete", "capping_beam": False}
    if scene.rows:
        structural = Structural(which="all", count=None, spacing=CENTRES)
        return Wall(kind="contiguous", diameter=DIAMETER, centres=CENTRES, structural=structural, continuity="jointed",
                    **common)  # fmt: skip
    return Wall(kind="diaphragm", thickness=THICKNESS, continuity="monolithic", **common)


def supports_of(scene: Scene) -> tuple[Support, ...]:
    out = []
    for i, prop in enumerate(scene.props):
        length = float(np.hypot(prop.far[0] - prop.head[0], prop.far[1] - prop.head[1]))
        out.append(
            Support(
                id=f"{i}",
                name=f"{i}",
                role="strut" if prop.tie else "anchor",
                head=(*prop.head, -prop.depth),
                far=(*prop.far, -prop.depth),
                EA=prop.stiffness * length,
                free_length=None if prop.tie else length,
                waler=scene.waler_EI is not None,
                waler_EI=scene.waler_EI,
            )  # fmt: skip
        )
    return tuple(out)


def site_of(scene: Scene, **more: object) -> Site:
    """The scene as a site; strengths are left out, so that the ground is linear as in the block."""
    low, high = np.min(scene.corners, axis=0), np.max(scene.corners, axis=0)
    starts = [max(x, low[0]) for x, _ in scene.dig]
    strips = zip(starts, [*starts[1:], high[0]], scene.dig, strict=True)
    floors = tuple(
        Floor(level=-d, dig_level=-d, outline=((a, low[1]), (b, low[1]), (b, high[1]), (a, high[1])))
        for a, b, (_, d) in strips
    )
    loads = ()
    if scene.surcharge:
        behind = ((low[0] - 40, -40.0), (high[0] + 40, -40.0), (high[0] + 40, 0.0), (low[0] - 40, 0.0))
        loads = (Load(id="Q", kind="area", value=scene.surcharge, points=behind, level=0.0),)
    given = {
        "ground_level": 0.0, "wall_top": 0.0, "floors": floors, "loads": loads, "supports": supports_of(scene),
        "materials": (Material(id="concrete", kind="concrete", E=E_WALL),),
        "strata": (Stratum(name="ground", top_level=0.0, unit_weight=WEIGHT, E=10e3, E_gradient=3e3, nu=NU, K0=REST),),
    }  # fmt: skip
    return Site(**{**given, **more})


def found_of(scene: Scene, site: Site) -> FoundPit:
    circle = None
    if scene.round:
        radius = float(np.hypot(*scene.corners[0]))
        circle = Circle(centre=(0.0, 0.0), radius=radius, deviation=0.02, sides=None)
    points = np.array(scene.corners)
    length = float(np.hypot(*(np.roll(points, -1, axis=0) - points).T).sum())
    return describe_pits(site, (shape_of(scene.corners, [(0.0, length, wall_of_scene(scene))], circle=circle),))[0]


@dataclass(frozen=True)
class Screening:
    """What the screening says along the wall of a scene: ratios (ns, 4) at the middles of its facets."""

    found: FoundPit
    scene: Screened
    middles: Floats
    points: Floats
    ratio: Floats

    def at(self, points: Floats) -> Floats:
        """Ratios at points on the wall, read between the facets of the side."""
        stations = self.found.stations
        facet_side = stations.side[self.scene.grid.station]
        out = np.full((len(points), 4), np.nan)
        for i, where in enumerate(chainages(self.found, points)):
            station = int(np.argmin(np.hypot(*(stations.xy - points[i]).T)))
            mine = np.flatnonzero(facet_side == stations.side[station])
            for k in range(4):
                out[i, k] = np.interp(where, self.middles[mine], self.ratio[mine, k])
        return out


def chainages(found: FoundPit, points: Floats) -> Floats:
    """Chainage of points on the wall."""
    axis = np.vstack([found.shape.axis, found.shape.axis[:1]])
    at = np.append(found.shape.at, found.shape.length)
    chord, length = np.diff(axis, axis=0), np.diff(at)
    along = np.einsum("psd,sd->ps", points[:, None] - axis[:-1], chord) / length
    off = np.linalg.norm(points[:, None] - axis[:-1] - along[..., None] * (chord / length[:, None]), axis=2)
    off = np.where((along > -1e-3) & (along < length + 1e-3), off, np.inf)
    side = off.argmin(axis=1)
    return np.asarray(at[side] + along[np.arange(len(points)), side])


def base_variant(scene: Scene) -> Variant:
    """The one variant that is the block's own wall."""
    return BASE if scene.rows else replace(BASE, along=1.0, membrane=True)


def final_stage(scene: Screened) -> Screened:
    return replace(scene, stages=scene.stages[-1:])


def screen(scene: Scene) -> Screening:
    """Run the screening's final stage on a scene."""
    site = site_of(scene)
    found = found_of(scene, site)
    made, why = make_scene(site, found)
    if made is None:
        raise ValueError(f"{scene.name}: {why}")
    made = final_stage(made)
    ratio = run_variant(made, base_variant(scene)).ratio
    grid = made.grid
    ends = np.vstack([grid.points, grid.points[:1]]) if grid.closed else grid.points
    return Screening(found, made, grid.middles, (ends[1:] + ends[:-1]) / 2, ratio)
