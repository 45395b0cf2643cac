"""Everything that leaves the office, written in one go."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from export.bcf import write_bcf
from export.drawing import write_drawings
from export.folder import fresh_folder
from export.ids_file import write_ids
from export.implied_ifc import write_implied_ifc
from export.report.page import report_page
from export.report.plan import plan_file
from export.section_json import write_proposal, write_section
from export.tables import write_tables
from ingest.model import Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal

BIM_FILES = ("issues.bcf", "requirements.ids", "implied.ifc")


def write_all(proposal: Proposal, definitions: Sequence[SectionDefinition], site: Site, folder: Path) -> list[str]:
    """Write proposal, sections, report, drawings, tables and the files for the BIM side, whole or not at all.

    Args:
        proposal: The proposal, world coordinates.
        definitions: Its sections, in order.
        site: The site as received.
        folder: Where to; replaced if an earlier run wrote it, refused if it holds anything else.

    Returns:
        The files written, relative to the folder, sorted.

    Raises:
        InputError: When the folder cannot be replaced.
        ValueError: When a number is not finite, naming its key path.
    """
    with fresh_folder(folder) as aside:
        names = [*write_tables(proposal, definitions, aside), *write_drawings(proposal, definitions, site, aside)]
        (aside / "plan.svg").write_text(plan_file(proposal, site), encoding="utf-8")
        names += ["proposal.json", "plan.svg", "report.html", *(f"sections/{one.id}.json" for one in definitions)]
        names += BIM_FILES
        digest = write_proposal(proposal, site.inputs, aside, names)
        for one in definitions:
            write_section(one, aside / "sections" / f"{one.id}.json", digest)
        (aside / "report.html").write_text(report_page(proposal, definitions, site, digest), encoding="utf-8")
        write_bcf(proposal, definitions, site, aside)
        write_ids(proposal, site, aside)
        write_implied_ifc(proposal, definitions, site, aside)
    return sorted(names)
