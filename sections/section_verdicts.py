"""What is said of one cut: verdicts at each of its walls, the worst of them, its score and its rows of criteria."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from sections.cut import Cut
from sections.judged import JudgedPit
from sections.model import Band, SectionWall, Verdict
from sections.verdict import worst_first


@dataclass(frozen=True, kw_only=True)
class SectionVerdicts:
    """Everything a section's record says of its trustworthiness."""

    walls: tuple[SectionWall, ...]
    verdicts: dict[str, Verdict]
    score: float | None
    criteria: tuple[Band, ...]


def find_verdicts(cut: Cut, judged: Mapping[str, JudgedPit], names: Mapping[str, str]) -> SectionVerdicts:
    """Collect the verdicts of a cut from the stations it is judged at.

    Args:
        cut: The cut with its walls.
        judged: By id of the pit, judged for the kind of section the cut is.
        names: Member id of each wall by side, "left" and "right".

    Returns:
        Walls in the order of the cut. The score is the least of the walls, None when one of them has none.
    """
    walls: list[SectionWall] = []
    rows: list[Band] = []
    scores: list[float] = []
    for wall in cut.walls:
        one = judged[wall.found.pit.id]
        name = names[wall.side]
        walls.append(
            SectionWall(
                pit=wall.found.pit.id,
                at=wall.at,
                side="left" if wall.side == "left" else "right",
                member=name,
                verdicts=one.verdicts_at(wall.station),
            )
        )
        rows += one.rows_at(wall.station, name)
        scores.append(float(one.scores[wall.station]))
    least = float(np.min(scores)) if scores else float("nan")
    return SectionVerdicts(
        walls=tuple(walls),
        verdicts=worst_first(wall.verdicts for wall in walls),
        score=None if np.isnan(least) else least,
        criteria=tuple(rows),
    )
