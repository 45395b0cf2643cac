"""What makes up a section of either kind, before it is put into its frame."""

from __future__ import annotations

from dataclasses import dataclass

from ingest.trail import Assumption, Finding
from sections.definition import Action, Implied, SectionLoad
from sections.member import SectionMember
from sections.section.stages import Prop


@dataclass(frozen=True, kw_only=True)
class SectionParts:
    """Members, props as the stages see them, loads, what they imply, and what was assumed or found on the way."""

    members: tuple[SectionMember, ...]
    props: tuple[Prop, ...]
    loads: tuple[SectionLoad, ...]
    implied: tuple[Implied, ...]
    assumptions: tuple[Assumption, ...]
    findings: tuple[Finding, ...]
    actions: tuple[Action, ...] = ()
