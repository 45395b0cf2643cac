"""Why a zone ends, in words a checker can verify on the drawing."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from sections.model import Corner, Member, Wall

ONE = {
    "strut": "strut", "corner_strut": "corner strut", "raker": "raker", "anchor": "anchor",
}  # fmt: skip


def corner_words(corner: Corner) -> str:
    """A corner with its kind and interior angle."""
    return f"{corner.kind} corner of {corner.interior_angle:.0f} degrees"


def wall_words(before: Wall | None, after: Wall | None) -> list[str]:
    """What changes in the construction of the wall."""
    if before is None or after is None:
        return ["wall begins" if before is None else "wall ends"] if before is not after else []
    if before.kind != after.kind:
        return [f"wall changes from {_kind(before)} to {_kind(after)}"]
    words = []
    for name, text in (("thickness", "wall thickness"), ("diameter", "pile diameter"), ("centres", "pile centres")):
        one, two = getattr(before, name), getattr(after, name)
        if one != two and (one is None or two is None or abs(one - two) > 0.005):
            words.append(f"{text} {'change' if name == 'centres' else 'changes'} from {_m(one)} to {_m(two)}")
    for name, text in (
        ("material", "material"), ("continuity", "continuity"), ("post", "post section"),
        ("EI_factor", "stiffness factor"), ("capping_beam", "capping beam"),
    ):  # fmt: skip
        one, two = getattr(before, name), getattr(after, name)
        if one != two:
            words.append(f"{text} of the wall changes from {_plain(one)} to {_plain(two)}")
    return words


def _kind(wall: Wall) -> str:
    return wall.kind.replace("_", " ")


def _plain(value: object) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    return "not given" if value is None else str(value)


def _m(value: float | None) -> str:
    return "not given" if value is None else f"{_short(value)} m"


def _short(value: float) -> str:
    """Two decimals, or one where the second is nought."""
    text = f"{value:.2f}"
    return text[:-1] if text.endswith("0") else text


def level_words(what: str) -> Callable[[float, float], str]:
    """Words for a level that rises or drops."""

    def _say(before: float, after: float) -> str:
        if np.isnan(before) or np.isnan(after):
            return f"{what} is {'not given' if np.isnan(after) else 'given'} from here"
        return f"{what} {'rises' if after > before else 'drops'} {_short(abs(after - before))} m"

    return _say


def amount_words(what: str, unit: str) -> Callable[[float, float], str]:
    """Words for an amount that changes."""

    def _say(before: float, after: float) -> str:
        return f"{what} changes from {before:.3g} to {after:.3g} {unit}"

    return _say


def radius_words(before: float, after: float) -> str:
    """Words for a wall that begins or ceases to curve."""
    if np.isnan(after):
        return "curve ends"
    return f"curve of {_short(after)} m radius begins" if np.isnan(before) else f"radius changes to {_short(after)} m"


def support_words(ended: list[Member], begun: list[Member], sections: dict[str, str]) -> list[str]:
    """What changes in the supports: rows that end, rows that begin, and rows that carry on in another way.

    Args:
        ended: Rows that hold the wall before but not behind the boundary.
        begun: Rows that hold it behind only.
        sections: Designation of each row's section, by id.
    """
    words = []
    left = list(begun)
    for row in ended:
        match = min((r for r in left if r.role == row.role), key=lambda r: _level_gap(row, r), default=None)
        if match is None:
            words.append(f"{_rows(row)} end")
            continue
        left.remove(match)
        words.append(_carried_on(row, match, sections))
    return words + [f"{_rows(row)} begin" for row in left]


def _rows(row: Member) -> str:
    level = "" if row.level is None else f" at {row.level:+.2f}"
    return f"{ONE.get(row.role, row.role)}s{level}"


def _level_gap(one: Member, other: Member) -> float:
    return abs(one.level - other.level) if one.level is not None and other.level is not None else np.inf


def _carried_on(before: Member, after: Member, sections: dict[str, str]) -> str:
    one = ONE.get(before.role, before.role)
    if _level_gap(before, after) > 0.1:
        return f"{one} level changes from {_level(before)} to {_level(after)}"
    if before.spacing and after.spacing and abs(np.log(before.spacing / after.spacing)) > 0.05:
        return spacing_words(one, before.spacing, after.spacing)
    if sections.get(before.id) != sections.get(after.id):
        names = (sections.get(row.id) or "not given" for row in (before, after))
        return f"{one} section changes from " + " to ".join(names)
    for name, what in (("inclination", "inclination"), ("skew", "skew")):
        first, second = getattr(before, name), getattr(after, name)
        if first is not None and second is not None and abs(first - second) > 2.0:
            return f"{one} {what} changes from {first:.0f} to {second:.0f} degrees"
    return f"{_rows(before)} end and others begin"


def _level(row: Member) -> str:
    return "not given" if row.level is None else f"{row.level:+.2f}"


def spacing_words(one: str, before: float, after: float) -> str:
    """A change of spacing, as an engineer would note it on the plan."""
    return f"{one} spacing changes from {_short(before)} m to {_short(after)} m"
