"""The walls of a section: each real wall smeared to one metre run, with the way back to one pile."""

from __future__ import annotations

from dataclasses import replace

from ingest.members import Material, Pile
from ingest.model import Site
from ingest.trail import Assumption, Finding
from sections.member import BelowFormation, Curve, End, PerMetre, RealMember, SectionMember
from sections.model import Run, Wall
from sections.section.cut import CutWall
from sections.smearing.king_posts import below_formation
from sections.smearing.support_rows import Smeared
from sections.smearing.wall_rows import post, round_pile, smear_continuous_wall, smear_pile_wall

Notes = tuple[tuple[Assumption, ...], tuple[Finding, ...]]


def wall_member(site: Site, wall: CutWall, name: str) -> tuple[SectionMember, Notes]:
    """Make the section's member of one wall.

    Args:
        site: For its materials and the sections of its posts.
        wall: Where the cut meets the wall.
        name: Member id.

    Returns:
        The member, drawn from top to toe, and what was assumed or is missing. Properties that rest on missing
        input stay None; nothing is put in their place.
    """
    run_index = int(wall.found.stations.run[wall.station])
    run = wall.found.pit.runs[run_index]
    material = next((m for m in site.materials if m.id == run.wall.material), None)
    smeared, missing = _smear(site, wall, run, run_index, material)
    below, more = _below(wall, run, smeared)
    missing = (*missing, *more)
    assumptions = () if run.wall.EI_factor is not None or not smeared.smear else (uncracked(name),)
    findings = tuple(
        Finding(
            id=f"{name}-{what.replace(' ', '-')}",
            code="wall_input_missing",
            severity="check",
            where=name,
            text=f"{what} of the {run.wall.kind} wall at chainage {wall.at:.2f} is not given: "
            f"its {'resistance below formation' if what in more else 'stiffness'} is not in the section",
            sources=run.wall.sources[:1],
        )
        for what in missing
    )
    points = _points(wall)
    member = SectionMember(
        id=name,
        role="wall",
        side=wall.side,  # type: ignore[arg-type]
        material=run.wall.material if material else None,
        form="beam",
        points=points,
        ends=_ends(points),
        real=smeared.real,
        section=replace(smeared.section, soil_displaced_m3_per_m2=displaced(smeared.real)),
        smear=smeared.smear,
        back=smeared.back,
        sources=run.wall.sources,
        assumptions=tuple(a.id for a in assumptions),
        below_formation=below,
    )
    return member, (assumptions, findings)


def displaced(real: RealMember) -> float | None:
    """Soil that a wall displaces per m2 of elevation, m: its area per metre run."""
    if not (real.EA_kN and real.E_kPa):
        return None
    return real.EA_kN / real.E_kPa / (real.spacing or 1.0)


def _below(wall: CutWall, run: Run, smeared: Smeared) -> tuple[BelowFormation | None, tuple[str, ...]]:
    """Posts below formation, and what is missing for it."""
    floor, toe = wall.level["floor"], wall.level["toe"]
    if run.wall.kind != "king_post" or floor is None or toe is None or toe >= floor:
        return None, ()
    width, spacing = smeared.real.thickness, smeared.real.spacing
    if width is None or spacing is None or width > spacing:
        return None, ("post width",)
    return below_formation(floor, toe, width, spacing), ()


def _points(wall: CutWall) -> Curve:
    top, toe = wall.level["top"], wall.level["toe"]
    return tuple((wall.x, level) for level in (top, toe) if level is not None)


def _ends(points: Curve) -> tuple[End, ...]:
    if len(points) < 2:
        return ()
    return End(to="ground", at=points[0], joint="free"), End(to="ground", at=points[1], joint="free")


def uncracked(name: str) -> Assumption:
    """The assumption of a wall whose brief gives no EI_factor."""
    return Assumption(
        id=f"{name}-EI",
        code="uncracked_wall",
        about=name,
        text="EI of the uncracked wall is handed over (factor 1.0); cracked and long-term stiffness are lower",
        basis="no EI_factor in the brief",
    )


def _smear(
    site: Site, wall: CutWall, run: Run, run_index: int, material: Material | None
) -> tuple[Smeared, tuple[str, ...]]:
    given, E = run.wall, None if material is None else material.E
    factor = 1.0 if given.EI_factor is None else given.EI_factor
    weight = None if material is None else material.unit_weight
    structural = given.structural
    if given.kind in ("diaphragm", "concrete", "masonry"):
        if E and given.thickness:
            return smear_continuous_wall(E=E, thickness=given.thickness, unit_weight=weight, EI_factor=factor), ()
        return _bare(RealMember(thickness=given.thickness, E_kPa=E)), _lacking(
            ("modulus", E), ("thickness", given.thickness)
        )
    if given.kind in ("contiguous", "secant") and given.centres and structural:
        if E and given.diameter:
            pile = round_pile(
                diameter=given.diameter,
                E=E,
                unit_weight=weight,
                centres=given.centres,
                which=structural.which,
                count=structural.count,
            )
            return smear_pile_wall(pile, EI_factor=factor), ()
        real = RealMember(diameter=given.diameter, centres=given.centres, spacing=structural.spacing, E_kPa=E)
        return _bare(real), _lacking(("modulus", E), ("pile diameter", given.diameter))
    if given.kind == "king_post" and structural and structural.spacing:
        section = _post_section(site, wall, run_index)
        shape = section.section if section else None
        if E and shape and shape.A and shape.I:
            real = post(E=E, A=shape.A, I=shape.I, unit_weight=weight, spacing=structural.spacing, width=shape.width)
            return smear_pile_wall(real, name="post", EI_factor=factor), ()
        return _bare(RealMember(spacing=structural.spacing, E_kPa=E)), _lacking(("modulus", E), ("post section", None))
    return _bare(_known(given)), (f"construction ({given.kind})",)


def _post_section(site: Site, wall: CutWall, run_index: int) -> Pile | None:
    rows = wall.found.shape.piles
    indices = rows[run_index] if run_index < len(rows) else ()
    return site.piles[indices[0]] if indices else None


def _known(wall: Wall) -> RealMember:
    return RealMember(diameter=wall.diameter, centres=wall.centres, thickness=wall.thickness)


def _bare(real: RealMember) -> Smeared:
    return Smeared(real=real, section=PerMetre(), smear=(), back=())


def _lacking(*named: tuple[str, object]) -> tuple[str, ...]:
    return tuple(name for name, value in named if not value)
