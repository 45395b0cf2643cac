"""An engineer's own cut, judged in the same terms as the proposal's, beside the nearest cut the tool would take."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ingest.errors import InputError
from ingest.members import Point
from ingest.model import LineDecision, Site
from ingest.record import record
from sections.found import FoundPit
from sections.pit.find import find_pits
from sections.pit.world import to_world
from sections.proposal import SectionWall
from sections.verdicts.candidates import Candidate, find_candidates
from sections.verdicts.choice import choose
from sections.verdicts.judged import JudgedPit, judge_stations


@record
class JudgedLine:
    """What is said of one line: its walls, its score, and the nearest proposed cut of the same pit.

    `skew`: angle between the line and the normal of its first wall, degrees. `better` says in words how much better the
    nearest proposed cut is.
    """

    line: tuple[Point, Point]
    skew: float
    walls: tuple[SectionWall, ...]
    score: float | None
    nearest_line: tuple[Point, Point] | None
    nearest_score: float | None
    better: str


SQUARE = 10.0
"""A cut that is farther from square to its wall than this shows every depth and length wrong, degrees (judgement)."""


def judge_line(site: Site, line: tuple[Point, Point]) -> JudgedLine:
    """Judge a line on plan.

    Args:
        site: The site.
        line: World coordinates; the first point on the retained side of the wall judged. A line that meets two walls is
            judged at both.

    Raises:
        InputError: The line enters no pit from its retained side.
    """
    founds = find_pits(replace(site, lines=()))
    wanted = replace(site, lines=(LineDecision(kind="pin", line=line),))
    pinned = [one for one in find_candidates(wanted, founds) if one.pinned]
    if not pinned:
        raise InputError(
            "",
            f"--line {_words(line)}",
            "the line enters no pit from the retained side of a wall",
            "give its first point behind the wall and its second inside the pit, world metres",
        )
    judged = tuple(judge_stations(site, found) for found in founds)
    cut, pit = pinned[0], judged[pinned[0].pit]
    walls = _walls(cut, pit)
    nearest = _nearest(site, judged, cut)
    score = _score(cut, pit)
    other = None if nearest is None else _score(nearest, pit)
    skew = _skew(cut, founds[cut.pit])
    return JudgedLine(
        line=line,
        skew=skew,
        walls=walls,
        score=score,
        nearest_line=None if nearest is None else _world(site, nearest),
        nearest_score=other,
        better=_compare(skew, score, other, nearest),
    )


def _walls(cut: Candidate, pit: JudgedPit) -> tuple[SectionWall, ...]:
    names = ("left", "right")
    return tuple(
        SectionWall(
            pit=pit.found.pit.id,
            at=float(pit.found.stations.chainage[station]),
            side=side,  # type: ignore[arg-type]
            member="",
            verdicts=pit.verdicts_at(station),
        )
        for station, side in zip(cut.stations, names, strict=False)
    )


def _score(cut: Candidate, pit: JudgedPit) -> float | None:
    scores = [pit.score_at(station) for station in cut.stations]
    known = [score for score in scores if score is not None]
    return min(known) if len(known) == len(scores) else None


def _nearest(site: Site, judged: tuple[JudgedPit, ...], cut: Candidate) -> Candidate | None:
    """Proposed cut of the same pit whose first wall is nearest along the perimeter."""
    choice = choose(replace(site, lines=()), judged)
    mine = [one.candidate for one in choice.chosen if one.candidate.pit == cut.pit and one.candidate.kind == cut.kind]
    if not mine:
        return None
    found = judged[cut.pit].found
    at = found.stations.chainage

    def away(one: Candidate) -> float:
        gaps = [abs(float(at[s] - at[cut.stations[0]])) for s in one.stations]
        return min(min(gap, found.shape.length - gap) if found.shape.closed else gap for gap in gaps)

    return min(mine, key=away)


def _skew(cut: Candidate, found: FoundPit) -> float:
    along = np.subtract(cut.line[1], cut.line[0])
    normal = found.stations.normal[cut.stations[0]]
    return float(np.degrees(np.arccos(np.clip(along @ normal / np.hypot(*along), -1.0, 1.0))))


def _compare(skew: float, score: float | None, other: float | None, nearest: Candidate | None) -> str:
    words = []
    if skew > SQUARE:
        words.append(f"the line is {skew:.1f} degrees off square to its wall: turn it, or every length is overstated")
    if nearest is None:
        words.append("no cut is proposed for this pit")
    elif score is not None and other is not None:
        words.append(f"score {score:.0f} against {other:.0f} of the nearest proposed cut")
    else:
        words.append("no scores to compare: a governing output is not assessed")
    return "; ".join(words)


def _world(site: Site, cut: Candidate) -> tuple[Point, Point]:
    start, end = to_world(site.frame, cut.line)
    return start, end


def _words(line: tuple[Point, Point]) -> str:
    return ",".join(f"{value:g}" for point in line for value in point)
