"""The sheet of one section: verdicts, drawing, then every table a checker follows by hand."""

from __future__ import annotations

from export.report.axonometry import spatial_figure
from export.report.markup import Html, join, tag
from export.report.section_tables import (
    actions_table,
    back_table,
    balance_tables,
    criteria_table,
    implied_table,
    load_table,
    losses_table,
    material_table,
    smear_table,
    stage_table,
)
from export.report.section_view import section_drawing
from export.report.severity_table import severity_table
from export.report.tables import listing, table
from export.report.verdict_marks import named_swatch
from export.report.words import KIND_NAMES, band, criterion_name, fixed, output_name, provisional_mark, stretch
from export.section_json import NOT_INCLUDED
from ingest.model import Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal, SectionWall


def section_title(definition: SectionDefinition) -> str:
    """Heading of a section's sheet."""
    at = " and ".join(f"{wall.pit} ch {fixed(wall.at, 1)}" for wall in definition.walls)
    return f"Section {definition.id}: {KIND_NAMES[definition.kind]}" + (f", at {at}" if at else "")


def section_body(definition: SectionDefinition, proposal: Proposal, site: Site) -> Html:
    """Everything on a section's sheet below its heading."""
    per = (
        "per metre run of wall" if definition.kind == "plane_strain" else "per radian, walls per metre of circumference"
    )
    return join(
        [
            tag("h3", "What it stands for"),
            listing(_standing(definition)),
            tag("p", _worth(definition), class_="lead"),
            _figure(definition),
            _verdicts(definition),
            tag("h3", "How severe its place is (to rank movement and stability by, not for design)"),
            *(severity_table(one) for one in proposal.sections if one.id == definition.id),
            tag("h3", f"Discrete to section and back ({per})"),
            smear_table(definition),
            back_table(definition),
            tag("h3", "Loads as handed over"),
            load_table(definition),
            tag("h3", "Stages"),
            stage_table(definition),
            tag("h3", "Ground and materials"),
            material_table(definition),
            tag("h3", "Criteria"),
            criteria_table(definition),
            tag("h3", "Balance"),
            balance_tables(definition),
            tag("h3", "What the section implies in three dimensions"),
            spatial_figure(definition, proposal, site),
            implied_table(definition),
            tag("h3", "Loss of one support (accidental, not in the bands above)"),
            losses_table(definition),
            tag("h3", "What the section cannot show"),
            actions_table(definition),
        ]
    )


def _standing(definition: SectionDefinition) -> list[str]:
    groups: dict[tuple[str, ...], list[str]] = {}
    for one in definition.represents:
        groups.setdefault(one.provisional, []).append(stretch(one.pit, one.start, one.to))
    said = []
    for provisional, where in groups.items():
        open_ = ", ".join(output_name(o).lower() for o in provisional)
        said.append(", ".join(where) + (f": provisionally, open are {open_}" if provisional else ": shown"))
    return said or ["no stretch is represented; the section is the best cut of its zone"]


def _worth(definition: SectionDefinition) -> str:
    score = "none, a governing output is not assessed" if definition.score is None else f"{definition.score:.0f}"
    half = "Not to be halved: "
    if definition.half.at_x is not None:
        drawn = "Given as a half" if definition.half.is_half else "Given whole, may be halved"
        half = f"{drawn} at x = {fixed(definition.half.at_x)} m: "
    return (
        f"Representativeness score: {score} (geometric; not a factor of safety). {half}{definition.half.basis}. "
        f"Extent: {definition.extent.basis}. {NOT_INCLUDED}."
    )


def _figure(definition: SectionDefinition) -> Html:
    caption = f"Section {definition.id} to scale; levels in the model's datum, m. Ground signs follow the layer names."
    label = f"Drawing of section {definition.id}"
    box = tag("div", section_drawing(definition), class_="scroll", tabindex="0", role="region", aria_label=label)
    return tag("figure", box, tag("figcaption", caption))


def _verdicts(definition: SectionDefinition) -> Html:
    rows = []
    for output, worst in definition.verdicts.items():
        walls = [_at_wall(wall, output) for wall in definition.walls]
        rows.append(
            [
                output_name(output),
                named_swatch(worst.verdict, provisional_mark(worst)),
                join(_lines(walls)),
                criterion_name(worst.dominant) if worst.dominant else "none",
                worst.stage or "not given",
                worst.sentence,
            ]
        )
    heads = ["Output", "Worst of the walls", "Band at each wall", "Governed by", "Stage", "In words"]
    return table(f"Verdicts of section {definition.id}: real demand over the 2D demand", heads, rows)


def _at_wall(wall: SectionWall, output: str) -> str:
    verdict = wall.verdicts.get(output)
    return f"{wall.side}: " + ("no band" if verdict is None else band(verdict.low, verdict.high))


def _lines(words: list[str]) -> list[Html]:
    return [tag("span", word, class_="line-of") for word in words]
