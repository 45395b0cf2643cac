"""Verdicts in plain sentences: both ends of the band, what decides it, what would settle it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from ingest.model import Limits
from sections.proposal import VerdictWord

NAMES = {
    "wall_deflection": "wall deflection",
    "wall_moment_excavated_face": "wall moment on the excavated face",
    "wall_moment_retained_face": "wall moment on the retained face",
    "support_force": "support force",
    "settlement": "settlement",
    "heave_utilisation": "utilisation of basal heave",
    "hydraulic_utilisation": "hydraulic utilisation",
    "hoop_force": "hoop force",
}


@dataclass(frozen=True, kw_only=True)
class Said:
    """What a sentence is made of, for one output at one station.

    Attributes:
        output: Key of the output.
        word: The verdict.
        low, high: Band with the margin; None where not assessed.
        bare: Band before the margin.
        stage: Stage in which the demand is compared.
        decides: Sentence of the deciding criterion.
        gaps: Sentences of what bears on the output and could not be evaluated.
        settled_by: What would settle it.
        by_class: True when the band rests on the class of wall alone.
        provisional: Why the verdict is provisional; empty when it is not.
    """

    output: str
    word: VerdictWord
    low: float | None
    high: float | None
    bare: tuple[float, float] | None
    stage: str
    decides: str
    gaps: Sequence[str] = ()
    settled_by: str = ""
    by_class: bool = False
    provisional: Sequence[str] = ()


def build_sentence(said: Said, limits: Limits) -> str:
    """Put a verdict into words."""
    parts = [_verdict(said, limits), said.decides]
    parts += [f"Left out: {gap}" for gap in said.gaps if said.word in ("under_states", "undecided")]
    if said.settled_by and said.word in ("under_states", "undecided", "not_assessed"):
        parts.append(f"Settled by {said.settled_by}.")
    if said.provisional:
        parts.append(f"Provisional until confirmed: {'; '.join(said.provisional)}.")
    return " ".join(part for part in parts if part)


def _verdict(said: Said, limits: Limits) -> str:
    name = NAMES[said.output]
    if said.word == "not_two_dimensional":
        return f"No 2D section describes the {name} here: it needs three dimensions or another idealisation."
    if said.word == "not_assessed" or said.low is None or said.high is None:
        return f"The {name} is not assessed here."
    band = f"Real {name} {_times(said.low, said.high)} the 2D value, {said.stage}{_margin(said)}"
    return f"{band}: {_consequence(said, limits)}"


def _times(low: float, high: float) -> str:
    return f"{low:.2f} to {high:.2f} times"


def _margin(said: Said) -> str:
    if said.bare is None or said.low is None or said.high is None:
        return ""
    if abs(said.bare[0] - said.low) < 5e-4 and abs(said.bare[1] - said.high) < 5e-4:
        return ""
    return f" ({said.bare[0]:.2f} to {said.bare[1]:.2f} before the model's own margin)"


def _consequence(said: Said, limits: Limits) -> str:
    if said.word == "under_states":
        return "the 2D answer is too small, do not rely on it."
    if said.word == "over_states":
        return (
            "the 2D answer is too large for this output and stage. That is no margin for trigger levels, "
            "back-analysis, movement along the wall or any other output."
        )
    if said.word == "holds":
        return (
            "the two-dimensional idealisation is judged adequate for this output and stage; it says nothing of "
            "strength or of the ground model."
        )
    if said.by_class and said.high is not None and said.high <= limits.ratio_high + 1e-9:
        return "undecided, known by class only."
    by_class = ", known by class only" if said.by_class else ""
    return f"the band reaches past {limits.ratio_high:.2f}, so it is undecided{by_class}."
