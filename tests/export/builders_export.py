"""What the export tests work on: the first pit, a pit that shows every mark, and two that hold next to nothing."""

from __future__ import annotations

from dataclasses import dataclass, replace

from builders_pit import chosen, pit, stations, trail
from builders_sections import section
from builders_site import CENTRES, CORNERS, DRAWING, LENGTH, STRUT_EA, site

from ingest.model import Limits, Site
from ingest.trail import Assumption, LedgerEntry, Source
from sections import definition as d
from sections import member as member_rows
from sections import model as m
from sections import proposal as proposal_rows

__all__ = ["CENTRES", "CORNERS", "HOSTILE", "STRUT_EA", "Job", "bare_job", "empty_job", "first_pit_job", "showcase_job"]


@dataclass(frozen=True, kw_only=True)
class Job:
    """What the engine hands over to the export room."""

    site: Site
    proposal: proposal_rows.Proposal
    definitions: tuple[d.SectionDefinition, ...]


def first_pit_job() -> Job:
    """The first pit with its two sections."""
    s1 = section(1, ((115.0, 182.0), (115.0, 238.0)), 20.0, (15.0, 65.0))
    s2 = section(2, ((82.0, 210.0), (148.0, 210.0)), 30.0, (90.0, 40.0))
    proposal = proposal_rows.Proposal(
        limits=Limits(), frame=proposal_rows.ProposalFrame(offset=(0.0, 0.0, 0.0), rotation_deg=0.0, crs=None), pits=(pit(),),
        sections=(chosen(s1), chosen(s2)),
        unrepresented=tuple(
            proposal_rows.Unrepresented(
                pit="P1", start=(at - 1.5) % LENGTH, to=at + 1.5, reason="within 1.5 m of a corner",
                what_to_do="read the wall as held by its neighbour; detail by hand",
            )
            for at in (0.0, 30.0, 50.0, 80.0)
        ),
        stations={"P1": stations()},
        ledger={
            DRAWING: LedgerEntry(
                entities=115, used=113, context=1, ignored=1,
                roles={"wall": 100, "strut": 10, "waler": 1, "footing": 1, "level": 1}, reasons={"empty text": 1},
            )
        },
        **trail(),  # type: ignore[arg-type]
    )  # fmt: skip
    return Job(site=site(), proposal=proposal, definitions=(s1, s2))


def empty_job() -> Job:
    """A site in which no excavation was found."""
    job = first_pit_job()
    proposal = replace(job.proposal, pits=(), sections=(), unrepresented=(), stations={})
    return Job(site=Site(), proposal=proposal, definitions=())


def bare_job() -> Job:
    """The first pit with nothing in it that could be left out."""
    job = first_pit_job()
    bare = replace(
        job.definitions[0], members=(), loads=(), stages=(), criteria=(), represents=(), walls=(), verdicts={},
        implied=(), losses=(),
        ground=d.Ground(surface=(), layers=(), water=(), nearest_borehole=None), materials={}, actions_without_twin=(),
        balance=d.Balance(horizontal=(), vertical=()), assumptions=(), questions=(), findings=(), not_assessed=(),
    )  # fmt: skip
    line = m.Pit(id="P1", closed=False, length=30.0, perimeter=CORNERS[:2], ground_level=None)
    proposal = replace(job.proposal, pits=(line,), sections=(chosen(bare),), unrepresented=(), stations={})
    return Job(site=Site(), proposal=proposal, definitions=(bare,))


# every verdict, anchors, and names that try to be more than text

HOSTILE = '<script>alert("x")</script> & <b onload=1>\u202e=cmd|A1'


def showcase_job() -> Job:
    """The first pit bent to show what it does not have: every verdict word, and names that try to be more than text."""
    job = first_pit_job()
    table = job.proposal.stations["P1"]
    words: tuple[tuple[float, proposal_rows.VerdictWord, float | None, float | None], ...] = (
        (15.0, "holds", 0.93, 1.05), (30.0, "over_states", 0.6, 0.95), (45.0, "undecided", 0.8, 1.35),
        (60.0, "under_states", 1.2, 1.7), (80.0, "not_two_dimensional", 0.4, 2.6), (101.0, "not_assessed", None, None),
    )  # fmt: skip
    rows = [next(w for w in words if c < w[0]) for c in table.chainage]
    every = proposal_rows.StationOutput(
        low=tuple(r[2] for r in rows),
        high=tuple(r[3] for r in rows),
        verdict=tuple(r[1] for r in rows),
        dominant=tuple(None if r[2] is None else "supports.spacing" for r in rows),
    )
    outputs = {**table.outputs, "support_force": every}
    hostile = Assumption(
        id="A3", code="name", about=HOSTILE, text=f"Layer {HOSTILE} was read as a strut.", basis="=1+1",
        sources=(Source(file="../../etc/passwd<img src=x>.dxf", item="-2+3", how="read"),),
    )  # fmt: skip
    proposal = replace(
        job.proposal,
        stations={"P1": replace(table, outputs=outputs)},
        assumptions=(*job.proposal.assumptions, hostile),
        pits=(replace(job.proposal.pits[0], corners=(
            *job.proposal.pits[0].corners[:3],
            m.Corner(at=80.0, point=(100.0, 220.0), interior_angle=270.0, kind="re-entrant"),
        )),),
    )  # fmt: skip
    anchored = with_anchors(job.definitions[1])
    return Job(site=site(HOSTILE), proposal=proposal, definitions=(job.definitions[0], anchored))


def with_anchors(definition: d.SectionDefinition) -> d.SectionDefinition:
    """The second section with anchors in place of its strut, and water."""
    walls = definition.members[:2]
    anchor = member_rows.SectionMember(
        id="P1-anchor-1", role="anchor", side="left", material=None, form="bar", points=((18.0, -1.5), (6.0, -8.0)),
        ends=(member_rows.End(to=walls[0].id, at=(18.0, -1.5), joint="pinned"),
              member_rows.End(to="ground", at=(6.0, -8.0), joint="fixed")),
        real=member_rows.RealMember(length=13.65, spacing=2.5, inclination=28.4, free_length=8.0, bond_length=5.65,
                          preload_kN=400.0, count=8),
        section=member_rows.PerMetre(preload_kN_per_m=160.0, resists="tension"),
        smear=(member_rows.Smear(quantity="preload", real_key="preload_kN", section_key="preload_kN_per_m", factor=0.4,
                       parts=member_rows.SmearParts(per_spacing=0.4)),),
        back=(member_rows.Back(quantity="N", from_unit="kN/m", factor=2.5, gives="force of one anchor", unit="kN"),),
    )  # fmt: skip
    water = (
        d.Water(id="w1", side="left", line=((0.0, -2.0), (18.0, -2.0)), kind="retained"),
        d.Water(id="w2", side="excavated", line=((18.0, -6.5), (48.0, -6.5)), kind="excavated"),
    )
    stages = tuple(replace(s, install=("P1-anchor-1",)) if s.order == 3 else s for s in definition.stages)
    return replace(definition, members=(*walls, anchor), ground=replace(definition.ground, water=water), stages=stages)
