"""The first pit as if an IFC model of it had come, with its map conversion, and ids of its elements as sources."""

from __future__ import annotations

from dataclasses import replace

from builders_export import CORNERS, Job, first_pit_job
from builders_pit import chosen

from ingest.model import InputFile, ModelPlace, Registered
from ingest.trail import Finding, Question, Reading, Source
from sections import definition as d
from sections import member as member_rows
from sections.proposal import ProposalFrame

MODEL = "first_pit.ifc"
STRUT_ID = "1hHHlGup5OGhbLufmE_v4k"
PILE_ID = "026l9sW6HGb8VrrbvCJNb_"


def model_job(place: ModelPlace | None = None, crs: str | None = None) -> Job:
    """The first pit from an IFC model: a question about its struts, a stop, a check and a note."""
    job = first_pit_job()
    supports = tuple(replace(one, sources=(Source(file=MODEL, item=STRUT_ID),)) for one in job.site.supports)
    inputs = (
        InputFile(
            file=MODEL, sha256="ef" * 32, kind="ifc", schema_or_version="IFC4", length_unit="m",
            registered=Registered(),
        ),
    )  # fmt: skip
    site = replace(job.site, inputs=inputs, supports=supports, places={MODEL: place or ModelPlace()})
    sources = (Source(file=MODEL, item=PILE_ID), Source(file="brief.toml", item="walls"))
    findings = (
        Finding(id="F1", code="level_missing", severity="check", where="wall", text="No toe level", sources=sources),
        Finding(id="F2", code="spacing-range", severity="check", where="struts", text="Spacing varies"),
        Finding(id="F3", code="dig-level", severity="stop", where="floor", text="No dig level is given"),
        Finding(id="F4", code="level_missing", severity="note", where="wall", text="For the record"),
    )
    question = Question(
        id="Q1",
        about=f"{MODEL}, STRUTS: strut or anchor?",
        readings=(Reading(reading="strut", evidence="layer STRUTS", confidence=0.8),),
        brief_line='[[roles]]\nmatch = { layer = "STRUTS" }\nrole = "strut"',
    )
    frame = ProposalFrame(offset=(0.0, 0.0, 0.0), rotation_deg=0.0, crs=crs)
    proposal = replace(
        job.proposal, frame=frame, questions=(question,), findings=findings, assumptions=(),
    )  # fmt: skip
    bare = tuple(replace(one, questions=(), findings=(), assumptions=()) for one in job.definitions)
    return Job(site=site, proposal=proposal, definitions=bare)


RADIUS, THICKNESS, DEPTH = 6.0, 0.8, 15.0


def ring_job() -> Job:
    """A round shaft of radius 6 m about (115, 210): wall 0.8 m thick and 15 m deep, one ring beam."""
    job = model_job()
    wall = member_rows.SectionMember(
        id="P1-wall-1", role="wall", side="right", material="C30", form="beam",
        points=((RADIUS, 0.0), (RADIUS, -DEPTH)), ends=(), real=member_rows.RealMember(thickness=THICKNESS),
        section=member_rows.PerRadian(EA_vertical_kN_per_m=3.0e7, thickness=THICKNESS), smear=(), back=(),
    )  # fmt: skip
    beam = replace(
        wall, id="P1-waler-1", role="waler", form="ring", points=((RADIUS, -3.0),),
        real=member_rows.RealMember(EA_kN=33.0e6 * 0.25), section=member_rows.PerRadian(),
    )  # fmt: skip
    one = replace(
        job.definitions[0], kind="axisymmetric", line=((115.0, 210.0), (135.0, 210.0)), members=(wall, beam), loads=(),
        axis=d.RingAxis(point=(115.0, 210.0), r_of_wall=RADIUS), implied=(),
    )  # fmt: skip
    proposal = replace(job.proposal, sections=(chosen(one),))
    return Job(site=job.site, proposal=proposal, definitions=(one,))


__all__ = ["CORNERS", "DEPTH", "MODEL", "PILE_ID", "RADIUS", "STRUT_ID", "THICKNESS", "model_job", "ring_job"]
