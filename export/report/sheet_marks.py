"""Marks every drawing shares: coordinate grid, scale bar, north, lettering, dimension lines."""

from __future__ import annotations

from math import atan2, degrees, hypot

from export.report.markup import Html, join, tag
from export.report.scale import LETTERS, WIDTH, View, multiples, round_step
from export.report.words import fixed
from ingest.members import Point

SMALL = 12.0


def letters(
    at: Point, words: str, size: float = LETTERS, anchor: str = "start", class_: str | None = None, turn: float = 0.0
) -> Html:
    """Lettering at a point in units; `turn` is in degrees, clockwise on the sheet."""
    x, y = at
    return tag(
        "text",
        words,
        x=x,
        y=y,
        font_size=size,
        text_anchor=anchor,
        class_=class_,
        transform=f"rotate({turn:.1f} {x:.2f} {y:.2f})" if turn else None,
    )


def readable_turn(a: Point, b: Point) -> float:
    """Turn of lettering along a line on the sheet so that it is never upside down, degrees."""
    turn = degrees(atan2(b[1] - a[1], b[0] - a[0]))
    return turn - 180 if turn > 89.9 else turn + 180 if turn < -90.1 else turn


def grid(view: View) -> Html:
    """Crosses of the coordinate grid, with eastings and northings along two edges."""
    step = round_step(110 / view.k)
    places = 0 if step >= 1 else 1
    easts, norths = multiples(step, *view.x_range), multiples(step, *view.y_range)
    arms = "".join(f"M{view.x(e) - 4:.2f} {view.y(n):.2f}h8m-4 -4v8" for e in easts for n in norths)
    bottom, left = view.top + view.height, view.left
    return tag(
        "g",
        tag("rect", x=left, y=view.top, width=view.width, height=view.height, class_="frame"),
        tag("path", d=arms, class_="hair") if arms else None,
        *(
            letters((view.x(e), bottom + 15), f"E {fixed(e, places)}", SMALL, "middle", "soft")
            for e in easts
            if view.x(e) < WIDTH - 44
        ),
        *(letters((left - 6, view.y(n)), f"N {fixed(n, places)}", SMALL, "middle", "soft", -90.0) for n in norths),
        class_="layer-grid",
    )


def north(at: Point) -> Html:
    """North arrow; the drawing has grid north upwards."""
    x, y = at
    return tag(
        "g",
        tag("path", d=f"M{x} {y + 44}V{y}M{x - 9} {y + 20}L{x} {y}L{x} {y + 20}", class_="line"),
        tag("polygon", points=f"{x},{y} {x + 9},{y + 20} {x},{y + 20}", class_="ink-fill"),
        letters((x, y - 7), "N", LETTERS, "middle", "strong"),
        class_="north",
    )


def scale_bar(at: Point, view: View) -> Html:
    """A scale bar of four round parts, and the scale in figures."""
    x, y = at
    step = round_step(40 / view.k)
    part = step * view.k
    places = 0 if step >= 1 else 1
    bars = [
        tag("rect", x=x + n * part, y=y, width=part, height=7, class_="ink-fill" if n % 2 == 0 else "bar-open")
        for n in range(4)
    ]
    ends = [letters((x + n * part, y - 5), fixed(n * step, places), SMALL, "middle") for n in (0, 2, 4)]
    ratio = f"{view.ratio:g}"
    words = f"m    1 : {ratio} at 180 mm width"
    return tag("g", *bars, *ends, letters((x + 4 * part + 14, y + 6), words, SMALL), class_="scale-bar")


def dimension(a: Point, b: Point, words: str, off: float = 0.0) -> Html:
    """A dimension line between two points in units, moved `off` units to its right, with oblique ticks."""
    length = hypot(b[0] - a[0], b[1] - a[1]) or 1.0
    ux, uy = (b[0] - a[0]) / length, (b[1] - a[1]) / length
    nx, ny = -uy * off, ux * off
    p, q = (a[0] + nx, a[1] + ny), (b[0] + nx, b[1] + ny)
    tick = 5.0
    marks = "".join(f"M{x - tick:.2f} {y + tick:.2f}l{2 * tick} {-2 * tick}" for x, y in (p, q))
    turn = readable_turn(p, q)
    middle = ((p[0] + q[0]) / 2, (p[1] + q[1]) / 2)
    lifted = (middle[0] + 5 * uy, middle[1] - 5 * abs(ux)) if turn else (middle[0], middle[1] - 5)
    if abs(abs(turn) - 90) < 1:
        lifted = (middle[0] - 5, middle[1])
    return tag(
        "g",
        tag("path", d=f"M{p[0]:.2f} {p[1]:.2f}L{q[0]:.2f} {q[1]:.2f}" + marks, class_="dim"),
        letters(lifted, words, LETTERS, "middle", "dim-text", turn),
        class_="dimension",
    )


def drawing(kind: str, ids: str, title: str, about: str, height: float, body: list[Html], **data: str | float) -> Html:
    """A drawing as an SVG with its name and description for a screen reader; `data` becomes data attributes."""
    marks = {f"data_{key}": value if isinstance(value, str) else f"{value:.6g}" for key, value in data.items()}
    heads = [tag("title", title, id=f"{ids}-title"), tag("desc", about, id=f"{ids}-desc")]
    return tag(
        "svg",
        join_lines([*heads, *body]),
        class_=f"drawing {kind}",
        viewBox=f"0 0 {WIDTH:g} {height:.0f}",
        role="group",
        aria_labelledby=f"{ids}-title {ids}-desc",
        xmlns="http://www.w3.org/2000/svg",
        **marks,
    )


def join_lines(parts: list[Html]) -> Html:
    """Parts one below the other, so that a saved drawing stays readable."""
    return Html("\n".join(join([part]) for part in parts))
