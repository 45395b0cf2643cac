"""How severe a section's place is: indices side by side, nothing blended."""

from __future__ import annotations

from export.report.markup import Html
from export.report.tables import table
from export.report.words import NOT_GIVEN, figure
from sections.proposal import ChosenSection

INDICES: dict[str, tuple[str, str, bool | None]] = {
    "basal_safety": ("Factor of safety against basal heave", "", False),
    "excavated_depth": ("Excavated depth", "m", True),
    "surcharge": ("Uniform surcharge (footings and line loads apart)", "kPa", True),
    "stability_number": ("Stability number, γH/su", "", True),
    "system_stiffness_by_water": ("System stiffness, EI/(γw h⁴)", "", False),
    "system_stiffness_by_soil": ("System stiffness, EI/(γ h⁴)", "", False),
    "plane_strain_ratio": ("Plane strain ratio", "", True),
    "receptor_distance_over_depth": ("Distance of the nearest receptor over depth", "", False),
}
"""Words, unit, and True where larger is worse."""


def severity_table(section: ChosenSection) -> Html:
    """The indices of one section's place; for movement and stability only, and not for design."""
    rows = []
    for name, value in section.severity.items():
        words, unit, larger = INDICES.get(name, (name.replace("_", " "), "", None))
        said = NOT_GIVEN if value is None else figure(value, unit)
        rows.append([words, said, NOT_GIVEN if larger is None else "larger" if larger else "smaller"])
    return table(f"Severity of the place of section {section.id}", ["Index", "Value", "Worse when"], rows)
