"""One section drawn to scale: ground, wall, supports, loads, water, dig levels, with levels and dimensions."""

from __future__ import annotations

from export.report.hatches import hatch_of
from export.report.markup import Html, tag
from export.report.plan_site import named
from export.report.scale import LETTERS, WIDTH, View, fit
from export.report.section_marks import dimensions, level_marks, load_marks, water_marks
from export.report.section_members import member_mark
from export.report.sheet_marks import SMALL, drawing, letters, scale_bar
from export.report.words import KIND_NAMES, count, fixed, level
from sections.definition import GroundLayer, SectionDefinition
from sections.member import Curve

LEFT, TOP = 96.0, 112.0
MOST_HEIGHT = 760.0
Spans = list[tuple[float, float]]


def section_drawing(definition: SectionDefinition) -> Html:
    """A section as an SVG, to a round scale.

    Args:
        definition: The section; x along the cut in m, z = level in m.
    """
    (x0, x1), (z0, z1) = definition.extent.x, definition.extent.z
    high = max([z1, *(z for _, z in definition.ground.surface), *(z for m in definition.members for _, z in m.points)])
    view = fit([(x0, z0), (x1, high)], WIDTH - LEFT - 24, MOST_HEIGHT, left=LEFT, top=TOP)
    ids = f"drawing-{definition.id}"
    bottom = view.top + view.height
    rings = [ring for stage in definition.stages for ring in stage.dig if ring]
    dug = [(min(x for x, _ in ring), max(x for x, _ in ring)) for ring in rings]
    body = [
        tag("clipPath", tag("rect", **_box(view)), id=f"{ids}-clip"),
        tag("g", *(_layer(layer, view) for layer in definition.ground.layers), class_="section-ground"),
        tag("g", *_dug(definition, view), class_="section-dug"),
        tag("path", d=view.path(definition.ground.surface), class_="ground-line", clip_path=f"url(#{ids}-clip)"),
        *(_layer_name(layer, view, dug) for layer in definition.ground.layers),
        water_marks(definition, view),
        tag("g", *(member_mark(one, view) for one in definition.members), class_="section-members"),
        load_marks(definition, view),
        level_marks(definition, view, LEFT - 14),
        dimensions(definition, view),
        _edges(definition, view),
        scale_bar((LEFT, bottom + 34), view),
        letters((WIDTH - 24, bottom + 40), _where(definition), SMALL, "end", "soft"),
    ]
    title = f"Section {definition.id}, {KIND_NAMES[definition.kind]}, to scale"
    return drawing("section", ids, title, _description(definition), bottom + 56, body)


def _box(view: View) -> dict[str, float]:
    return {"x": view.left, "y": view.top - 60, "width": view.width, "height": view.height + 60}


def _where(definition: SectionDefinition) -> str:
    (x1, y1), (x2, y2) = definition.line
    return f"from E {fixed(x1, 1)} N {fixed(y1, 1)} to E {fixed(x2, 1)} N {fixed(y2, 1)}"


def _description(definition: SectionDefinition) -> str:
    roles = ", ".join(f"{one.id} ({one.role.replace('_', ' ')})" for one in definition.members)
    layers = ", ".join(layer.id for layer in definition.ground.layers)
    loads = count(len(definition.loads), "load")
    return f"Members: {roles or 'none'}. Ground from the top: {layers or 'not given'}. {loads}."


def _rings(rings: tuple[Curve, ...], view: View) -> str:
    return "".join(view.path(ring, True) for ring in rings if len(ring) > 2)


def _layer(layer: GroundLayer, view: View) -> Html:
    data = _rings((*layer.outlines, *layer.holes), view)
    kind = hatch_of(layer.material) or hatch_of(layer.id)
    filling = tag("path", d=data, fill_rule="evenodd", class_=f"ground-{kind}") if kind else None
    about = f"{layer.id}: {layer.material}" + ("" if kind else " (no sign: its name says no kind of ground)")
    return named(about, filling, tag("path", d=data, class_="layer-edge", fill_rule="evenodd"))


def _layer_name(layer: GroundLayer, view: View, dug: Spans) -> Html:
    """The name at the left end of a layer, at the right end where the left one is dug away."""
    points = [point for ring in layer.outlines for point in ring]
    if not points:
        return Html("")
    at = view.y(max(z for _, z in points)) + 18
    if any(x0 < min(x for x, _ in points) + 1.0 < x1 for x0, x1 in dug):
        return letters((view.x(max(x for x, _ in points)) - 8, at), layer.material or layer.id, LETTERS, "end", "halo")
    return letters((view.x(min(x for x, _ in points)) + 8, at), layer.material or layer.id, LETTERS, class_="halo")


def _dug(definition: SectionDefinition, view: View) -> list[Html]:
    """The dug ground in paper, then each dig level as a dashed line; the last one is heavy."""
    digs = [(stage, ring) for stage in definition.stages for ring in stage.dig if len(ring) > 2]
    parts = [tag("path", d=view.path(ring, True), class_="dug") for _, ring in digs]
    deepest = min((min(z for _, z in ring) for _, ring in digs), default=0.0)
    for stage, ring in digs:
        base = min(z for _, z in ring)
        xs = [x for x, z in ring if z - base < 0.005]
        last = base - deepest < 0.005
        a, b = view.x(min(xs)), view.x(max(xs))
        about = f"Stage {stage.id}: {stage.text}, dig level {level(base)}"
        line = tag("path", d=f"M{a:.2f} {view.y(base):.2f}H{b:.2f}", class_="formation" if last else "dig")
        parts.append(
            named(
                about,
                line,
                letters((a + 0.8 * (b - a), view.y(base) + 14), f"stage {stage.id}", SMALL, "middle", "soft halo"),
            )
        )
    return parts


def _edges(definition: SectionDefinition, view: View) -> Html:
    """What the edges of the model are, and the axis of a ring or the line of a half section."""
    extent = definition.extent
    (x0, x1), (z0, z1) = extent.x, extent.z
    data = view.path([(x0, z1), (x0, z0), (x1, z0), (x1, z1)])
    middle = view.y((z0 + z1) / 2)
    words = [
        letters((view.x(x0) + 13, middle), extent.left, SMALL, "middle", "soft halo", -90.0),
        letters((view.x(x1) - 5, middle), extent.right, SMALL, "middle", "soft halo", -90.0),
        letters((view.x((x0 + x1) / 2), view.y(z0) - 6), extent.base, SMALL, "middle", "soft halo"),
    ]
    axes = [at for at in (0.0 if definition.axis else None, definition.half.at_x) if at is not None]
    lines = [tag("path", d=f"M{view.x(x):.2f} {view.top - 40:.2f}V{view.y(z0):.2f}", class_="axis line") for x in axes]
    return tag("g", tag("path", d=data, class_="hair"), *words, *lines, class_="section-edges")
