"""Levels that cannot all be true: they are used as given, and pointed out before anybody relies on them."""

from __future__ import annotations

from itertools import pairwise

from ingest.model import Site
from ingest.notes import Notes

SLACK = 0.01
"""m; levels closer than this count as equal."""
FLOOD = 10.0
"""m; water standing this far above the ground is a slip, not a flood. Common practice, no source."""


def note_level_order(site: Site, notes: Notes) -> None:
    """Point out digs above ground, walls ending above the dig, supports off the wall, high water, strata out of order.

    Args:
        site: The site as built.
        notes: Takes the findings, severity `check`.
    """
    _check_dig(site, notes)
    _check_toes(site, notes)
    _check_supports(site, notes)
    _check_water(site, notes)
    _check_strata(site, notes)


def _dig_levels(site: Site) -> list[float]:
    levels = [floor.level for floor in site.floors if floor.level is not None]
    return levels if site.formation is None else [*levels, site.formation]


def _check_dig(site: Site, notes: Notes) -> None:
    high = max(_dig_levels(site), default=None)
    if high is not None and site.ground_level is not None and high >= site.ground_level:
        text = f"a dig level at {high:g} m is not below the ground at {site.ground_level:g} m: nothing is dug there"
        notes.see("dig-above-ground", "check", "dig level", text)


def _check_toes(site: Site, notes: Notes) -> None:
    dig = max(_dig_levels(site), default=None)  # beside the shallowest of several floors a short wall may do
    held = [(pile.toe, pile.kind) for pile in site.piles if not pile.bearing]
    toes = [toe for toe, kind in (*held, *((w.toe, w.kind) for w in site.walls)) if toe is not None]
    if dig is None or not toes or max(toes) <= dig + SLACK:
        return
    posts = any(kind == "king_post" for _, kind in held)
    if posts and min(toes) <= dig + SLACK:
        return  # lagging between the posts goes no deeper than the dig
    text = f"the toe of a wall at {max(toes):g} m lies above the dig level at {dig:g} m: it holds no ground below it"
    notes.see("toe-above-dig", "check", "levels of the wall", text)


def _check_supports(site: Site, notes: Notes) -> None:
    dig, top = min(_dig_levels(site), default=None), site.wall_top
    if top is None:
        tops = [top for top in (*(w.top for w in site.walls), *(p.top for p in site.piles)) if top is not None]
        top = max(tops, default=None)
    for group in sorted({support.group for support in site.supports}):
        heads = [s.head[2] for s in site.supports if s.group == group and s.level_given]
        if heads and top is not None and max(heads) > top + SLACK:
            text = f"a support at {max(heads):g} m lies above the top of the wall at {top:g} m"
            notes.see("support-above-wall", "check", group, text)
        if heads and dig is not None and min(heads) < dig - SLACK:
            text = f"a support at {min(heads):g} m lies below the dig level at {dig:g} m"
            notes.see("support-below-dig", "check", group, text)


def _check_water(site: Site, notes: Notes) -> None:
    for name, level in (("water_retained", site.water_retained), ("water_excavated", site.water_excavated)):
        if level is not None and site.ground_level is not None and level > site.ground_level + FLOOD:
            text = f"{name} at {level:g} m stands {level - site.ground_level:g} m above the ground"
            notes.see("water-above-ground", "check", "water level", text)


def _check_strata(site: Site, notes: Notes) -> None:
    given = [(layer.name, layer.top_level) for layer in site.strata if layer.top_level is not None]
    for (upper, upper_top), (lower, lower_top) in pairwise(given):
        if lower_top >= upper_top:
            text = (
                f'the top of "{lower}" at {lower_top:g} m does not lie below that of "{upper}" at '
                f"{upper_top:g} m, which the brief lists before it"
            )
            notes.see("strata-order", "check", "strata", text)
