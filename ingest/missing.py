"""What the files and the brief leave open, asked or written down before anybody relies on it."""

from __future__ import annotations

from ingest.matching import match_line
from ingest.model import Site
from ingest.notes import Notes


def note_missing(site: Site, notes: Notes) -> None:
    """Ask for what a section cannot do without.

    Args:
        site: The site as built.
        notes: Takes the questions.
    """
    _ask_levels(site, notes)
    _ask_supports(site, notes)


def _ask_levels(site: Site, notes: Notes) -> None:
    if site.ground_level is None:
        notes.ask("ground level behind the wall is not given", "[site]\nground_level = nan")
    if site.formation is None and not site.floors:
        notes.ask("formation level is not given", "[levels]\nformation = nan")
    held = [pile for pile in site.piles if not pile.bearing]
    # lagging between king posts goes no deeper than the dig: the toe is that of the posts
    posts = any(pile.kind == "king_post" for pile in held)
    walls = [wall for wall in site.walls if not (posts and wall.kind == "king_post")]
    toes = [wall.toe for wall in walls] + [pile.toe for pile in held]
    if None in toes:
        notes.ask("toe level of the wall is not given", "[[walls]]\ntoe = nan")


def _ask_supports(site: Site, notes: Notes) -> None:
    for group in sorted({support.group for support in site.supports}):
        same = [support for support in site.supports if support.group == group]
        line = f"[[supports]]\n{match_line(same[0].layer, same[0].name, group)}\n"
        if any(not support.level_given for support in same):
            notes.ask(f"{group}: level of the supports is not given", f"{line}level = nan")
        if any(not support.inclination_given for support in same):
            notes.ask(f"{group}: inclination is not given", f"{line}inclination = nan")
        if any(support.EA is None for support in same):
            notes.ask(f"{group}: section of the supports is not given", f'{line}section = ""')
