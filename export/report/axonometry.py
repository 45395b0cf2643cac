"""Real and implied side by side in three dimensions: a still picture, and the data of the one that turns."""

from __future__ import annotations

import json

from export.report.markup import Html, tag
from export.report.plan_controls import data_text
from export.report.scenes import Scenes, scenes
from export.report.solids import Solid
from export.report.still import HEIGHT, PITCH, WIDTH, YAW, Scale, common_scale, still_picture
from export.report.words import fixed
from ingest.model import Site
from sections.definition import SectionDefinition
from sections.proposal import Proposal

TURNS = ("left", "right", "up", "down")


def spatial_figure(definition: SectionDefinition, proposal: Proposal, site: Site) -> Html:
    """Real and implied side by side, with what was counted in each."""
    both = scenes(definition, proposal, site)
    if not both.walls:
        return tag("p", "No three-dimensional view: the section has no wall that could be drawn.", class_="none")
    scale = common_scale((*both.real, *both.implied))
    pictures = (
        _picture(definition.id, "real", "Really there", both, scale),
        _picture(definition.id, "implied", "Implied by the section", both, scale),
    )
    caption = tag("figcaption", _caption(both, definition.axis is not None))
    pair = tag("div", *pictures, class_="pair")
    return tag("figure", _controls(), pair, scene_data(both), caption, class_="spatial", data_section=definition.id)


def _caption(both: Scenes, ring: bool) -> str:
    shown = "the whole ring" if ring else f"{fixed(2 * both.half, 1)} m of wall, half of it to either side of the cut"
    counted = "; ".join(f"{kind} {real} and {implied}" for kind, real, implied in both.counts)
    return (
        f"Shown: {shown}. Bodies really there and implied: {counted}. "
        "Bodies in colour are those for which the difference is serious; the table below has the numbers."
    )


def _controls() -> Html:
    buttons = [tag("button", f"Turn {how}", type="button", data_turn=how) for how in TURNS]
    reset = tag("button", "As drawn", type="button", data_turn="reset")
    hint = tag("span", "or drag, or use the arrow keys on a picture; both turn together", class_="hint")
    return tag("div", *buttons, reset, hint, class_="controls scripted", hidden=True)


def _picture(section: str, name: str, words: str, both: Scenes, scale: Scale) -> Html:
    counted = ", ".join(f"{kind} {real if name == 'real' else implied}" for kind, real, implied in both.counts)
    label = f"{words}, section {section}: {counted}"
    solids = both.real if name == "real" else both.implied
    picture = tag("img", src=still_picture(solids, scale), alt=label, width=WIDTH, height=HEIGHT, class_="still")
    canvas = tag(
        "canvas",
        class_="turning",
        data_scene=name,
        tabindex="0",
        role="img",
        aria_label=f"{label}. Arrow keys turn it.",
        hidden=True,
    )
    return tag("div", tag("p", words, class_="picture-name"), picture, canvas, class_="picture")


def scene_data(both: Scenes) -> Html:
    """Both scenes as data the browser never runs; faces and edges of bodies of one build are listed once."""
    builds: dict[str, int] = {}
    tree: dict[str, object] = {
        "real": [_plain(solid, builds) for solid in both.real],
        "implied": [_plain(solid, builds) for solid in both.implied],
    }
    tree["builds"] = [json.loads(build) for build in builds]
    return Html(
        f'<script type="application/json" class="scene">{data_text({**tree, "yaw": YAW, "pitch": PITCH})}</script>'
    )


def _plain(solid: Solid, builds: dict[str, int]) -> dict[str, object]:
    build = json.dumps({"f": solid.faces, "e": solid.edges}, separators=(",", ":"))
    points = [round(float(value), 2) for value in solid.points.ravel()]
    return {"b": builds.setdefault(build, len(builds)), "m": int(solid.marked), "p": points}
