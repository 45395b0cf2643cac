"""Tables of one section: smearing, way back, loads, stages, materials, criteria, balance, implied, actions."""

from __future__ import annotations

from typing import Any

from export.report.markup import Html, join, tag
from export.report.tables import key_words, listing, source_list, table
from export.report.words import NOT_GIVEN, band, criterion_name, figure, fixed, level, output_name
from sections.definition import SectionDefinition, SectionMaterial
from sections.member import SmearParts
from sections.proposal import Band

PART_NAMES = {
    "per_spacing": "1 / spacing",
    "cos_beta_power": "power of cos β",
    "phi": "φ",
    "EI_factor": "EI factor",
    "plane_strain": "plane strain",
    "net_of_soil": "net of soil",
}
SYMBOLS = {
    "unit_weight": ("γ", "kN/m³"),
    "unit_weight_sat": ("γ sat", "kN/m³"),
    "E": ("E", "kPa"),
    "nu": ("ν", ""),
    "K0": ("K0", ""),
    "c": ("c", "kPa"),
    "phi": ("φ", "°"),
    "su": ("su", "kPa"),
    "permeability": ("k", "m/s"),
    "drainage": ("drainage", ""),
    "wall_friction_ratio": ("wall friction ratio", ""),
}
IMPLIED_WORDS = {"contact_area": "contact area"}
ALTERNATIVE_WORDS = {
    "pressure_kept": "pressure kept",
    "total_kept": "total kept",
    "equal_effect": "equal effect on the wall",
    "absent": "absent",
}


def smear_table(definition: SectionDefinition) -> Html:
    """Real value times factor equals the section's value, with the parts of the factor."""
    rows = []
    for one in definition.members:
        for line in one.smear:
            real, unit = key_words(line.real_key)
            section, section_unit = key_words(line.section_key)
            rows.append(
                [
                    one.id,
                    f"{line.quantity} ({real})" if real.lower() != line.quantity.lower() else line.quantity,
                    figure(_value(one.real, line.real_key), unit),
                    figure(line.factor, digits=6),
                    figure(_value(one.section, line.section_key), section_unit),
                    _factor_parts(line.parts),
                    source_list(one.sources, 2),
                ]
            )
    heads = ["Member", "Quantity", "#One real member", "#Factor", "#Section", "Factor is the product of", "Source"]
    return table(f"{definition.id}: real member to section", heads, rows)


def _factor_parts(parts: SmearParts) -> str:
    named = [
        f"{words} {figure(getattr(parts, key), digits=6)}"
        for key, words in PART_NAMES.items()
        if getattr(parts, key) != 1
    ]
    return " × ".join(named) or "1"


def _value(item: Any, key: str) -> float | None:
    value = getattr(item, key, None)
    return value if isinstance(value, int | float) else None


def back_table(definition: SectionDefinition) -> Html:
    """Result of the analysis times factor gives the force of one real member."""
    rows = []
    for one in definition.members:
        for line in one.back:
            also = "; ".join(f"{extra.gives}: factor {figure(extra.factor, digits=6)}" for extra in line.also)
            rows.append(
                [
                    one.id,
                    f"{line.quantity} in {line.from_unit}",
                    figure(line.factor, digits=6),
                    f"{line.gives}, {line.unit}",
                    also or "none",
                    line.valid_if or "no condition",
                ]
            )
    heads = ["Member", "Analysis result", "#Times", "Gives", "Also gives", "Valid if"]
    return table(f"{definition.id}: section back to real member", heads, rows)


def load_table(definition: SectionDefinition) -> Html:
    """Loads with the value used and the alternatives."""
    rows = []
    for load in definition.loads:
        others = [
            f"{ALTERNATIVE_WORDS[a.name]}: {figure(a.value, a.unit)}; keeps {a.keeps}; loses {a.loses}"
            for a in load.alternatives
        ]
        rows.append(
            [
                load.id,
                load.kind,
                figure(load.real.value, load.real.unit),
                figure(load.section.value, load.section.unit),
                listing(others, "tight"),
                source_list(load.sources, 2),
            ]
        )
    return table(f"{definition.id}: loads", ["Load", "Kind", "#Real", "#Section", "Alternatives", "Source"], rows)


def stage_table(definition: SectionDefinition) -> Html:
    """Stages in order."""
    rows = []
    for stage in definition.stages:
        done = [
            f"install {', '.join(stage.install)}" if stage.install else "",
            f"remove {', '.join(stage.remove)}" if stage.remove else "",
        ]
        done += [f"preload {key} {figure(value)}" for key, value in stage.preload.items()]
        done += [
            f"loads on: {', '.join(stage.loads_on)}" if stage.loads_on else "",
            f"loads off: {', '.join(stage.loads_off)}" if stage.loads_off else "",
        ]
        rows.append(
            [
                stage.id,
                stage.text,
                level(stage.level) if stage.level is not None else "none",
                "; ".join(word for word in done if word) or "none",
                stage.drainage or NOT_GIVEN,
                "assumed" if stage.assumed else "given",
            ]
        )
    return table(
        f"{definition.id}: construction stages",
        ["Stage", "What", "#Dig level", "Members and loads", "Drainage", "Standing"],
        rows,
    )


def material_table(definition: SectionDefinition) -> Html:
    """Materials with the standing of each value; what is missing is said."""
    rows = []
    for name, material in definition.materials.items():
        given = [_field(material, key) for key in SYMBOLS if getattr(material, key) is not None]
        missing = [SYMBOLS.get(key, (key, ""))[0] for key, how in material.standing.items() if how == "missing"]
        rows.append([name, material.kind, "; ".join(given) or "no value", ", ".join(missing) or "none named"])
    return table(f"{definition.id}: materials: value and standing", ["Material", "Kind", "Values", "Missing"], rows)


def _field(material: SectionMaterial, key: str) -> str:
    symbol, unit = SYMBOLS[key]
    value = getattr(material, key)
    if isinstance(value, tuple):
        shown = f"{figure(value[0][1], unit)}"
        if len(value) > 1:
            (top, first), (foot, last) = value[0], value[-1]
            shown = f"{figure(first)} at {level(top)} to {figure(last, unit)} at {level(foot)}"
    else:
        shown = value if isinstance(value, str) else figure(value, unit)
    return f"{symbol} {shown} ({material.standing.get(key, 'standing not noted')})"


def criteria_table(definition: SectionDefinition) -> Html:
    """Each criterion once per wall with its bands, its sentence, inputs, basis; below them those that stayed silent."""
    groups: dict[tuple[str, str, str], list[Band]] = {}
    for one in definition.criteria:
        groups.setdefault((one.code, one.wall, one.sentence), []).append(one)
    speaking = [rows for rows in groups.values() if any(one.assessed for one in rows)]
    silent: dict[tuple[str, ...], list[Band]] = {}
    for (code, _, sentence), rows in groups.items():
        if not any(one.assessed for one in rows):
            silent.setdefault((code, sentence, *(one.output for one in rows)), []).append(rows[0])
    heads = ["Criterion", "Wall", "Mechanism", "Bands, real over 2D", "In words", "Inputs", "Basis, reference"]
    silent_heads = ["Criterion", "Walls", "Mechanism", "Outputs", "Why not"]
    return table(
        f"{definition.id}: criteria that could be evaluated", heads, map(_speaking, speaking), "criteria"
    ) + table(
        f"{definition.id}: criteria that say nothing here",
        silent_heads,
        (_silent(key[2:], rows) for key, rows in silent.items()),
    )


def _speaking(rows: list[Band]) -> list[Html | str]:
    first = rows[0]
    bands = [tag("span", f"{output_name(one.output)}: {band(one.low, one.high)}") for one in rows if one.assessed]
    inputs = ", ".join(f"{key.replace('_', ' ')} {_input(value)}" for key, value in first.inputs.items())
    basis = "; ".join(part for part in (first.basis, first.reference) if part)
    head = [criterion_name(first.code), first.wall, first.mechanism.replace("_", " ")]
    return [*head, listing(bands, "tight"), first.sentence, inputs or "none", basis]


def _silent(outputs: tuple[str, ...], walls: list[Band]) -> list[Html | str]:
    first = walls[0]
    said = ", ".join(output_name(output).lower() for output in outputs)
    where = ", ".join(one.wall for one in walls)
    return [criterion_name(first.code), where, first.mechanism.replace("_", " "), said, first.sentence]


def _input(value: str | float | None) -> str:
    return NOT_GIVEN if value is None else value if isinstance(value, str) else figure(value)


def balance_tables(definition: SectionDefinition) -> Html:
    """Horizontal and vertical balance."""
    sides = (
        (f"{definition.id}: horizontal balance, positive with x", definition.balance.horizontal),
        (f"{definition.id}: vertical balance, positive down", definition.balance.vertical),
    )
    return join(
        table(caption, ["Force", "#Value"], [[line.text, figure(line.value, line.unit)] for line in lines])
        for caption, lines in sides
    )


def implied_table(definition: SectionDefinition) -> Html:
    """What the section implies beside what is there."""
    rows = [
        [
            one.about,
            IMPLIED_WORDS.get(one.quantity, one.quantity),
            figure(one.real),
            figure(one.implied),
            fixed(one.ratio),
            tag("span", one.grade, class_=f"grade grade-{one.grade}"),
            one.do_in_inputs,
            one.read_outputs,
        ]
        for one in definition.implied
    ]
    heads = [
        "About",
        "Quantity",
        "#Real",
        "#Implied",
        "#Implied / real",
        "Grade",
        "In the inputs",
        "Reading the outputs",
    ]
    return table(f"{definition.id}: real and implied", heads, rows)


def actions_table(definition: SectionDefinition) -> Html:
    """Actions with no twin in two dimensions."""
    rows = [
        [one.name, figure(one.size, one.unit) if one.size is not None else "size not worked out", one.at]
        for one in definition.actions_without_twin
    ]
    return table(f"{definition.id}: actions with no 2D twin", ["Action", "#Size", "Where"], rows)


def losses_table(definition: SectionDefinition) -> Html:
    """The worst losses of one support: an accidental situation beside the section, never in its bands."""
    rows = [
        [
            f"{one.member} at ch {fixed(one.at)}",
            fixed(one.gap_movement),
            fixed(one.neighbour_force),
            fixed(one.wall_moment_excavated_face),
            fixed(one.wall_moment_retained_face),
        ]
        for one in definition.losses
    ]
    heads = ["Support lost", "#Movement of its place", "#Force of its neighbour", "#Moment, excavated face"]
    return table(f"{definition.id}: times the value with all supports", [*heads, "#Moment, retained face"], rows)
