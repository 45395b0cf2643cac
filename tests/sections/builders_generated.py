"""Invented sites made ready for sections: materials on the walls, ground, and supports where the wall asks for them."""

from __future__ import annotations

import random
from dataclasses import replace

import numpy as np
from pit_generator import make_scene

from ingest.members import BarSection, Load, Material, Support
from ingest.model import Site, Stratum
from ingest.trail import Source
from sections.found import FoundPit
from sections.pit.find import find_pits

EA = 210e6 * 0.02473061737
CONCRETE = Material(id="concrete", kind="concrete", E=32e6, unit_weight=25.0)
STEEL = Material(id="steel", kind="steel", E=210e6, unit_weight=78.5)
POST = BarSection(designation="H 300", A=0.0149, I=2.517e-4, width=0.3, depth=0.3)
STRATA = (
    Stratum(name="fill", top_level=0.0, unit_weight=18.0, E=12e3, nu=0.3, K0=0.5, c=0.0, phi=30.0, drainage="drained"),
    Stratum(name="clay", top_level=-3.0, unit_weight=20.0, E=40e3, E_gradient=2e3, nu=0.3, K0=1.0, su=70.0,
            drainage="undrained"),
)  # fmt: skip


def generated_site(seed: int) -> Site:
    """Scene `seed` of the generator with its walls of a material, two layers, and supports in reach of each wall."""
    r = random.Random(seed)
    site = make_scene(seed).site
    walls = tuple(replace(w, material="concrete", continuity="jointed") for w in site.walls)
    piles = tuple(_with_material(p) for p in site.piles)
    site = replace(
        site, walls=walls, piles=piles, supports=(), materials=(CONCRETE, STEEL), strata=STRATA, water_retained=-2.0,
        water_excavated=-9.0, dig_allowance=0.0,
    )  # fmt: skip
    found = find_pits(site)
    supports = [one for pit in found for one in _supports(pit, r)]
    loads = [_footing(pit) for pit in found[:1]]
    return replace(site, supports=tuple(supports), loads=tuple(loads))


def _with_material(pile: object) -> object:
    if pile.kind == "king_post":  # type: ignore[attr-defined]
        return replace(pile, material="steel", section=POST)  # type: ignore[type-var]
    return replace(pile, material="concrete", EI_factor=0.7)  # type: ignore[type-var]


def _supports(pit: FoundPit, r: random.Random) -> list[Support]:
    """Struts across where the pit is narrow, else anchors, skewed a little, at a spacing of the pit's own."""
    stations, spacing, skew = pit.stations, r.choice((3.0, 4.0, 5.5)), r.choice((0.0, 12.0))
    made: list[Support] = []
    for k in range(int(pit.pit.length / spacing)):
        i = int(np.argmin(np.abs(stations.chainage - (k + 0.5) * spacing)))
        if stations.to_corner[i] < 2.0:
            continue
        across = stations.facing[i]
        if across < 26.0 and k % 2 == 0:
            made.append(_bar(stations, i, across, 0.0, 0.0, f"S{k}", "strut"))
        elif across >= 26.0:
            made.append(_bar(stations, i, -14.0, skew, 20.0, f"A{k}", "anchor"))
    return made


def _bar(stations: object, i: int, length: float, skew: float, dip: float, name: str, role: str) -> Support:
    head, n = stations.xy[i], stations.normal[i]  # type: ignore[attr-defined]
    t = np.array([n[1], -n[0]])
    d = np.cos(np.radians(dip)) * (np.cos(np.radians(skew)) * n + np.sin(np.radians(skew)) * t)
    far = head + length * d
    more = {"free_length": 8.0, "bond_length": 6.0, "bond_diameter": 0.15} if role == "anchor" else {}
    return Support(
        id=name, role=role, head=(float(head[0]), float(head[1]), -2.0),  # type: ignore[arg-type]
        far=(float(far[0]), float(far[1]), -2.0 - abs(length) * float(np.sin(np.radians(dip)))),
        EA=EA, EI=1.5e5, weight=1.9, material="steel", preload=300.0 if role == "anchor" else -300.0, name=name,
        sources=(Source(file="made-up.dxf", item=name),), **more,
    )  # fmt: skip


def _footing(pit: FoundPit) -> Load:
    stations = pit.stations
    i = len(stations.chainage) // 3
    n, xy = stations.normal[i], stations.xy[i]
    t = np.array([n[1], -n[0]])
    corners = [xy - n * back + t * along for back, along in ((2, -1.5), (2, 1.5), (4, 1.5), (4, -1.5))]
    points = tuple((float(p[0]), float(p[1])) for p in corners)
    return Load(id="", kind="footing", value=120.0, points=points, level=-1.0)
