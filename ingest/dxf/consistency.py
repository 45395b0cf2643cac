"""Entities whose own bytes contradict each other: what is left where a piece of a file was cut out."""

from __future__ import annotations

import numpy as np

from ingest.dxf.tagscan import SUBENTITIES, Ints, Tags

_R2000 = "AC1015"


def find_contradictions(tags: Tags) -> tuple[str, ...]:
    """Find entities that do not agree with themselves.

    A polyline says how many vertices it has; an entity has one handle at most, and since release R2000 a handle and a
    subclass mark. Where two entities were joined by a lost piece, one of these is broken.

    Args:
        tags: Checked tags of the file.

    Returns:
        One phrase for each such entity.
    """
    modern = (tags.header("$ACADVER") or "") >= _R2000
    found: list[str] = []
    for section in ("BLOCKS", "ENTITIES"):
        first, last = tags.sections.get(section, (0, 0))
        a, b = np.searchsorted(tags.zeros, (first, last)).tolist()
        if a < b:
            found += _in_section(tags, a, b, int(tags.zeros[a]), last, modern)
    return tuple(found)


def _in_section(tags: Tags, a: int, b: int, first: int, last: int, modern: bool) -> list[str]:
    codes = tags.codes[first:last]
    owners = np.cumsum(codes == 0) - 1
    names = np.array(tags.names[a:b])
    whole = ~np.isin(names, [*SUBENTITIES, "BLOCK", "ENDBLK"])

    def count(code: int) -> Ints:
        return np.bincount(owners[codes == code], minlength=b - a)

    handles = count(5)
    faults = dict.fromkeys(np.flatnonzero((handles > 1) & whole).tolist(), "has two handles")
    if modern:
        bare = whole & ((handles == 0) | (count(100) == 0))
        faults.update(dict.fromkeys(np.flatnonzero(bare).tolist(), "lacks its handle or subclass mark"))
    faults.update(_vertex_faults(tags, owners, codes, names, count(10), first))
    return [f"{names[k]} at {tags.place(int(tags.zeros[a + k]))} {words}" for k, words in sorted(faults.items())]


def _vertex_faults(
    tags: Tags, owners: Ints, codes: Ints, names: np.ndarray, vertices: Ints, first: int
) -> dict[int, str]:
    """Polylines whose number of vertices is not the one they declare."""
    lines = names == "LWPOLYLINE"
    at = np.flatnonzero((codes == 90) & lines[owners])
    faults = {}
    for owner, value in zip(owners[at].tolist(), tags.values(at + first), strict=True):
        said = int.from_bytes(value, "little") if tags.binary else int(value) if value.isdigit() else -1
        if said != vertices[owner]:
            faults[owner] = f"says {said} vertices and has {int(vertices[owner])}"
    return faults
