"""AGS4 ground data -> boreholes. Tolerant of what real files do, silent about none of it."""

from __future__ import annotations

import hashlib
from collections import Counter
from pathlib import Path

from ingest.ags_rows import Row, Rows, each, read_rows
from ingest.members import Point3
from ingest.model import Borehole, Layer
from ingest.parts import FileParts, Part
from ingest.trail import Finding, Source

WATER_DEPTH = {"WSTG": "WSTG_DPTH", "WSTD": "WSTD_POST"}
"""Groups of the AGS4 dictionary that tell where water was struck and how far it rose, and the depth heading of each."""
NO_PLACE, NO_LEVEL, TWICE = "hole without coordinates", "hole without ground level", "hole named twice"


def read_ags(path: Path) -> FileParts:
    """Read an AGS4 file.

    Args:
        path: The file.

    Returns:
        Boreholes with strata and the highest level water was struck at or rose to; every DATA row is one entity. Holes
        without place or level are left out, with the reason.

    Raises:
        InputError: No AGS4, cut off in the middle of a row, or a place that is no finite number.
    """
    raw = path.read_bytes()
    return _Reading(path.name, read_rows(path.name, raw)).parts(hashlib.sha256(raw).hexdigest())


class _Reading:
    """Holes first, then what was met in them."""

    def __init__(self, file: str, rows: Rows) -> None:
        self.file, self.rows = file, rows
        self.taken: list[Part] = []
        self.ignored: Counter[str] = Counter()
        self.context: Counter[str] = Counter()
        self.holes: dict[str, Point3] = {}
        self.why: dict[str, str] = {}
        self.losses = rows.losses

    def parts(self, sha256: str) -> FileParts:
        """Everything the file gives."""
        if self.rows.stray:
            self.ignored["data without group or heading"] = self.rows.stray
        self._find_holes()
        layers, water = self._layers(), self._water()
        used = {"LOCA", "GEOL", *WATER_DEPTH}
        for name, group in self.rows.groups.items():
            if name not in used and group.rows:
                self.context[f"group {name or 'without name'}"] += len(group.rows)
        holes = tuple(
            Borehole(
                id=hole,
                location=self.holes[hole],
                layers=tuple(sorted(layers.get(hole, ()), key=lambda layer: (-layer.top, -layer.base))),
                water=water.get(hole),
                sources=(Source(file=self.file, item=hole),),
            )
            for hole in sorted(self.holes)
        )
        version = next((row.values.get("TRAN_AGS", "") for row in self.rows.group("TRAN").rows), "")
        return FileParts(
            file=self.file,
            sha256=sha256,
            kind="ags",
            schema_or_version=f"AGS {version or '4'}",
            length_unit="m",
            unit_scale=1.0,
            entities=self.rows.entities,
            parts=tuple(self.taken),
            boreholes=holes,
            context=dict(sorted(self.context.items())),
            ignored=dict(sorted(self.ignored.items())),
            losses=_shortened(self.losses),
            crs=self._reference(),
            findings=self._findings(),
        )

    def _find_holes(self) -> None:
        nameless = len(self.rows.group("LOCA").rows)
        if not nameless:
            self.losses.append("no group LOCA with data: the file names no hole")
        for row in each(self.rows.group("LOCA")):
            nameless -= 1
            hole = row.values["LOCA_ID"].strip()
            if hole in self.holes or hole in self.why:
                self.losses.append(f"line {row.line}: hole {hole} is named twice; the first is read")
                self.ignored[TWICE] += 1
                continue
            place = self._place(row)
            if isinstance(place, str):
                self.why[hole] = place
                self.ignored[place] += 1
            else:
                self.holes[hole] = place
                self._take(row, "LOCA", hole, place)
        if nameless:
            self.ignored["hole without a name"] += nameless

    def _place(self, row: Row) -> Point3 | str:
        for pair in (("LOCA_NATE", "LOCA_NATN"), ("LOCA_LOCX", "LOCA_LOCY")):
            x, y = (self.rows.number(row, heading, "LOCA") for heading in pair)
            if x is not None and y is not None:
                level = self.rows.number(row, "LOCA_GL", "LOCA")
                return NO_LEVEL if level is None else (x, y, level)
        return NO_PLACE

    def _layers(self) -> dict[str, list[Layer]]:
        found: dict[str, list[Layer]] = {}
        group = self.rows.group("GEOL")
        self._count_nameless("GEOL")
        for row in each(group):
            hole = row.values["LOCA_ID"].strip()
            top, base = (self.rows.number(row, heading, "GEOL") for heading in ("GEOL_TOP", "GEOL_BASE"))
            reason = self._reason(hole, row, "stratum")
            if reason is None and (top is None or base is None):
                reason = "stratum without depths"
            elif reason is None and top is not None and base is not None and base <= top:
                reason = "stratum without thickness"
                self.losses.append(f"line {row.line}: {hole}: base {base:g} m is not below top {top:g} m; left out")
            if reason is not None or top is None or base is None:
                self.ignored[reason or "stratum without depths"] += 1
                continue
            x, y, level = self.holes[hole]
            words = row.values.get("GEOL_DESC", "").strip()
            codes = (row.values.get(heading, "").strip() for heading in ("GEOL_GEOL", "GEOL_LEG"))
            code = next((c for c in codes if c), "") or _soil_name(words)
            found.setdefault(hole, []).append(Layer(top=level - top, base=level - base, code=code, description=words))
            self._take(row, "GEOL", hole, (x, y, level - top), level - base, level - top)
        return found

    def _water(self) -> dict[str, float]:
        found: dict[str, float] = {}
        for name, heading in WATER_DEPTH.items():
            self._count_nameless(name)
            for row in each(self.rows.group(name)):
                hole = row.values["LOCA_ID"].strip()
                depth = self.rows.number(row, heading, name)
                reason = self._reason(hole, row, "water strike")
                if depth is None or reason is not None:
                    self.ignored[reason or "water strike without depth"] += 1
                    continue
                x, y, level = self.holes[hole]
                found[hole] = max(found.get(hole, level - depth), level - depth)
                self._take(row, name, hole, (x, y, level - depth))
        return found

    def _reason(self, hole: str, row: Row, what: str) -> str | None:
        if hole in self.holes:
            return None
        if hole in self.why:
            return f"{what} of a {self.why[hole]}"
        self.losses.append(f"line {row.line}: {what} of hole {hole[:40]}, which LOCA does not have")
        return f"{what} of an unknown hole"

    def _count_nameless(self, name: str) -> None:
        rows = self.rows.group(name)
        nameless = len(rows.rows) - sum(1 for _ in each(rows))
        if nameless:
            self.ignored[f"row of {name} without a hole"] += nameless

    def _take(
        self, row: Row, group: str, hole: str, at: Point3, bottom: float | None = None, top: float | None = None
    ) -> None:
        item = hole if group == "LOCA" else f"{hole}, line {row.line}"
        source = Source(file=self.file, item=item)
        self.taken.append(
            Part(source=source, form="point", points=(at,), cls=f"AGS.{group}", name=hole, z_bottom=bottom, z_top=top)
        )

    def _reference(self) -> str | None:
        named = Counter(row.values.get("LOCA_GREF", "").strip() for row in each(self.rows.group("LOCA")))
        named.pop("", None)
        return min(named, key=lambda name: (-named[name], name)) if named else None

    def _findings(self) -> tuple[Finding, ...]:
        found = []
        for reason in (NO_PLACE, NO_LEVEL):
            holes = sorted(hole for hole, why in self.why.items() if why == reason)
            if holes:
                text = (
                    f"{len(holes)} holes left out, {reason}: {', '.join(holes[:8])}{' ...' if len(holes) > 8 else ''}"
                )
                sources = tuple(Source(file=self.file, item=hole) for hole in holes)
                code = "borehole-place" if reason == NO_PLACE else "borehole-level"
                found.append(Finding(id="", code=code, severity="check", where=self.file, text=text, sources=sources))
        return tuple(found)


def _soil_name(description: str) -> str:
    """The soil named in capitals in a description, "" when there is none."""
    words = [word.strip(".,;:()") for word in description.split()]
    return " ".join(word for word in words if len(word) > 2 and word.isupper())[:40]


def _shortened(losses: list[str], most: int = 40) -> tuple[str, ...]:
    if len(losses) <= most:
        return tuple(losses)
    return (*losses[:most], f"and {len(losses) - most} more")
