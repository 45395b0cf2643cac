"""What each entity is for, from evidence: the brief; class and properties; geometry and place; layer or object name."""

from __future__ import annotations

import math
import tomllib
from collections.abc import Sequence
from functools import cache
from importlib.resources import files
from typing import Any, get_args

from ingest.brief import Brief
from ingest.matching import alike, find_entry, match_line
from ingest.members import Evidence, Role, WallKind
from ingest.parts import Part
from ingest.record import record
from ingest.surroundings import WALL_ROW, Place, find_places, straight, upright
from ingest.trail import Question, Reading
from ingest.words import find_meanings, is_own_layer, layer_name

LEAST = 0.5
"""Confidence below which a part keeps to the context (judgement)."""
CLOSE = 0.12
"""Readings closer than this are asked about (judgement)."""
ROLES = get_args(Role)


@record
class Clue:
    """One piece of evidence for one role."""

    role: Role
    why: str
    confidence: float
    wall_kind: WallKind | None = None
    use: str = ""
    retaining: bool = False


@record
class RoleGiven:
    """The role of a part, with the evidence, the doubt, and what the wording says beyond the role.

    `retaining` is True where something says that ground is held, not just that there is a wall. `use` "pile" is a pile
    whose duty nothing but its place tells.
    """

    part: Part
    evidence: Evidence
    wall_kind: WallKind | None = None
    use: str = ""
    retaining: bool = False
    question: Question | None = None

    @property
    def role(self) -> Role:
        """The role itself."""
        return self.evidence.role


def find_roles(parts: Sequence[Part], brief: Brief) -> tuple[RoleGiven, ...]:
    """Give every part its role.

    Args:
        parts: All parts of the site in one frame, metres.
        brief: The engineer's brief; it overrides all other evidence.

    Returns:
        One role per part, in the order of `parts`.
    """
    first = [find_role(part, brief, Place()) for part in parts]
    is_wall = [given.role == "wall" and given.retaining for given in first]
    is_slab = [given.role == "slab" and given.use != "floor" for given in first]
    places = find_places(parts, is_wall, is_slab)
    return tuple(
        given if place == Place() else find_role(part, brief, place)
        for part, place, given in zip(parts, places, first, strict=True)
    )


def find_role(part: Part, brief: Brief, place: Place) -> RoleGiven:
    """Give one part its role.

    Args:
        part: The part.
        brief: The engineer's brief.
        place: Where the part stands among the others.

    Returns:
        The role with evidence and confidence; a question where two readings are close.
    """
    stated = _from_brief(part, brief, place)
    if stated is not None:
        return _given(part, stated)
    if is_own_layer(part.layer):
        return _given(part, Clue(role="context", why="layer of this tool's own drawings", confidence=1.0))
    if part.form == "text":
        return _given(part, Clue(role="level", why=f'text "{part.text[:40]}"', confidence=0.6))
    clues = [*_from_class(part, place), *_from_properties(part), *_from_place(part, place), *_from_names(part, place)]
    noted = next((clue for clue in clues if clue.use == "annotation"), None)
    if noted is not None:
        return _given(part, noted)
    ranked = _rank(clues)
    if not ranked or ranked[0].confidence < LEAST:
        why = f"only {ranked[0].why}" if ranked else _nothing(part)
        return _given(part, Clue(role="context", why=why, confidence=0.5))
    question = None
    if len(ranked) > 1 and ranked[0].confidence - ranked[1].confidence < CLOSE:
        question = _ask(part, ranked[0], ranked[1])
    return _given(part, ranked[0], question)


def _from_brief(part: Part, brief: Brief, place: Place) -> Clue | None:
    own = brief.files.get(part.source.file)
    if own is not None and part.layer.casefold() in {name.casefold() for name in own.ignore_layers}:
        return Clue(role="ignore", why="layer ignored by the brief", confidence=1.0)
    found = find_entry(brief.roles, part)
    if found is not None:
        entry = found[1]
        why = f"brief, {brief.place('roles', found[0])}"
        return Clue(role=entry.role, why=why, confidence=1.0, wall_kind=entry.wall_kind, retaining=True)
    for table, role in (("loads", "load"), ("receptors", "receptor"), ("floors", "slab"), ("walls", "wall")):
        found_in = find_entry(getattr(brief, table), part)
        if found_in is not None:
            return _as_the_brief_has_it(part, place, role, f"brief, {brief.place(table, found_in[0])}")
    support = find_entry(brief.supports, part)
    if support is not None and support[1].role is not None and part.form not in ("text", "circle"):
        why = f"brief, {brief.place('supports', support[0])}"
        return Clue(role=support[1].role, why=why, confidence=1.0)
    return None


def _as_the_brief_has_it(part: Part, place: Place, role: Any, why: str) -> Clue | None:
    if part.form == "text":
        return None
    clues = (*_from_names(part, place), *_from_place(part, place)) if role == "wall" else ()
    kind = next((clue.wall_kind for clue in clues if clue.wall_kind), None)
    use = "floor" if role == "slab" else ""
    return Clue(role=role, why=why, confidence=1.0, wall_kind=kind, use=use, retaining=True)


def _from_class(part: Part, place: Place) -> list[Clue]:
    cls, _, kind = part.cls.partition(".")
    entry = _class_entry(cls, kind or part.tags.get("PredefinedType", ""))
    if entry is None or not entry["role"]:
        return []
    role, confidence = entry["role"], entry["confidence"]
    why = f"class {part.cls}"
    if role == "pile":
        return [_pile(part, place, why, confidence)]
    return [
        Clue(
            role=role,
            why=why,
            confidence=confidence,
            wall_kind=entry.get("wall_kind"),
            use=entry.get("use", ""),
            retaining=entry.get("retaining", False),
        )
    ]


def _from_properties(part: Part) -> list[Clue]:
    if not part.tags:
        return []
    names = {name.casefold() for name in part.tags}
    found = []
    for entry in _vocabulary()["property"]:
        said = sorted(names & set(entry["names"]))
        if said:
            why = f"properties {', '.join(said)}"
            found.append(Clue(role=entry["role"], why=why, confidence=entry["confidence"]))
    return found


def _from_place(part: Part, place: Place) -> list[Clue]:
    clues: list[Clue] = []
    if place.row_count and place.row_ratio < WALL_ROW:
        kind: WallKind = "secant" if place.row_ratio < 0.98 else "contiguous"
        why = f"one of {place.row_count} in a close row, spacing {place.row_ratio:.2f} diameters"
        clues.append(Clue(role="wall", why=why, confidence=0.7, wall_kind=kind, retaining=True))
    if place.below_slab and not clues:
        clues.append(Clue(role="bearing_pile", why="upright and round below the lowest slab", confidence=0.6))
    if not straight(part) or part.form != "bar":
        return clues
    if place.ends_at_walls == 2 and abs(place.inclination) < 3:
        clues.append(Clue(role="strut", why="level, from wall to wall", confidence=0.45))
    elif place.ends_at_walls == 1 and 5 < place.inclination < 75 and place.far_side:
        role: Role = "anchor" if place.far_side == "behind" else "raker"
        why = f"runs down {place.inclination:.0f} degrees from the wall, {place.far_side} the walls"
        clues.append(Clue(role=role, why=why, confidence=0.6))
    return clues


def _from_names(part: Part, place: Place) -> list[Clue]:
    clues = []
    name = "" if part.name == part.layer else part.name
    for what, text, share in (("layer", layer_name(part.layer), 1.0), ("name", name, 0.9)):
        meanings = find_meanings(text) if text else ()
        real = [m for m in meanings if m.role != "context" or m.use == "annotation"]
        for meaning in real or meanings:
            why = f'{what} "{text}" ({meaning.word}, {meaning.language})'
            confidence = meaning.confidence * share
            if meaning.role is None:
                clues.append(_pile(part, place, why, confidence))
                continue
            if meaning.use == "annotation" and what == "name":
                continue
            clues.append(
                Clue(
                    role=meaning.role,
                    why=why,
                    confidence=confidence,
                    wall_kind=meaning.wall_kind,
                    use=meaning.use,
                    retaining=meaning.role == "wall" and meaning.confidence >= 0.7,
                )
            )
    return clues


def _pile(part: Part, place: Place, why: str, confidence: float) -> Clue:
    """A pile in a close row holds ground, any other one bears load."""
    if place.row_count:
        return Clue(role="wall", why=why, confidence=confidence, retaining=True)
    if upright(part) is None and part.form in ("path", "outline"):
        return Clue(role="bearing_pile", why=why, confidence=confidence * 0.6, use="pile")
    return Clue(role="bearing_pile", why=f"{why}, not in a close row", confidence=confidence, use="pile")


def _rank(clues: Sequence[Clue]) -> list[Clue]:
    """One clue per role; what agrees adds up, best first."""
    ranked = []
    for role in dict.fromkeys(clue.role for clue in clues):
        same = sorted((clue for clue in clues if clue.role == role), key=lambda clue: -clue.confidence)
        doubt = math.prod(1 - clue.confidence for clue in same)
        kinds = [clue.wall_kind for clue in same if clue.wall_kind]
        ranked.append(
            Clue(
                role=role,
                why="; ".join(dict.fromkeys(clue.why for clue in same)),
                confidence=round(1 - doubt, 3),
                wall_kind=kinds[0] if kinds else None,
                use=next((clue.use for clue in same if clue.use), ""),
                retaining=any(clue.retaining for clue in same),
            )
        )
    return sorted(ranked, key=lambda clue: (-clue.confidence, ROLES.index(clue.role)))


def _ask(part: Part, first: Clue, second: Clue) -> Question:
    match = match_line(part.layer, part.name, "", part.source.item)
    name = part.layer or alike(part.name) or part.source.item
    return Question(
        id="",
        about=f"{part.source.file}, {name}: {first.role} or {second.role}?",
        readings=tuple(
            Reading(
                reading=clue.role, evidence=clue.why.replace(part.name, alike(part.name)), confidence=clue.confidence
            )
            for clue in (first, second)
        ),
        brief_line=f'[[roles]]\n{match}\nrole = "{first.role}"',
    )


def _nothing(part: Part) -> str:
    where = f'layer "{part.layer}"' if part.layer else f"class {part.cls}"
    return f"nothing says what it is for ({where})"


def _given(part: Part, clue: Clue, question: Question | None = None) -> RoleGiven:
    evidence = Evidence(role=clue.role, why=clue.why, confidence=clue.confidence)
    return RoleGiven(
        part=part,
        evidence=evidence,
        wall_kind=clue.wall_kind,
        use=clue.use,
        retaining=clue.retaining,
        question=question,
    )


@cache
def _vocabulary() -> dict[str, Any]:
    return tomllib.loads(files("ingest").joinpath("roles_classes.toml").read_text(encoding="utf-8"))


@cache
def _class_entry(cls: str, kind: str) -> dict[str, Any] | None:
    entries = [entry for entry in _vocabulary()["class"] if cls.startswith(entry["cls"])]
    exact = [entry for entry in entries if kind and kind in entry.get("predefined", ())]
    plain = [entry for entry in entries if "predefined" not in entry]
    return max(exact or plain, key=lambda entry: len(entry["cls"]), default=None)
