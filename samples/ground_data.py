"""AGS4 files of invented boreholes, for the scripts of this folder."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

Row = Sequence[str]


@dataclass(frozen=True, kw_only=True)
class Hole:
    """One invented borehole: place in m, ground level, depths of strata (top, base, code, words), depth of water."""

    name: str
    place: tuple[float, float]
    level: float
    strata: tuple[tuple[float, float, str, str], ...]
    water: float | None = None


def write_ags(path: Path, project: str, holes: Sequence[Hole]) -> None:
    """Write an AGS4 file with its holes, strata and water strikes; the same bytes at every run."""
    groups = [
        _group("PROJ", ("PROJ_ID", "PROJ_NAME"), ("", ""), ("ID", "X"), [("1", project)]),
        _group(
            "TRAN",
            ("TRAN_ISNO", "TRAN_DATE", "TRAN_PROD", "TRAN_STAT", "TRAN_AGS", "TRAN_RECV", "TRAN_DLIM", "TRAN_RCON"),
            ("", "yyyy-mm-dd", "", "", "", "", "", ""),
            ("X", "DT", "X", "X", "X", "X", "X", "X"),
            [("1", "2026-03-02", "Invented", "Invented data", "4.1", "Nobody", "|", "+")],
        ),
        _group(
            "LOCA",
            ("LOCA_ID", "LOCA_TYPE", "LOCA_NATE", "LOCA_NATN", "LOCA_GL", "LOCA_FDEP"),
            ("", "", "m", "m", "m", "m"),
            ("ID", "PA", "2DP", "2DP", "2DP", "2DP"),
            [_loca(hole) for hole in holes],
        ),
        _group(
            "GEOL",
            ("LOCA_ID", "GEOL_TOP", "GEOL_BASE", "GEOL_DESC", "GEOL_GEOL"),
            ("", "m", "m", "", ""),
            ("ID", "2DP", "2DP", "X", "PA"),
            [
                (hole.name, f"{top:.2f}", f"{base:.2f}", words, code)
                for hole in holes
                for top, base, code, words in hole.strata
            ],
        ),
        *_water(holes),
        _group(
            "ABBR",
            ("ABBR_HDNG", "ABBR_CODE", "ABBR_DESC"),
            ("", "", ""),
            ("X", "X", "X"),
            [("LOCA_TYPE", "CP", "Cable percussion (shell and auger)"), *_codes(holes)],
        ),
        _group("UNIT", ("UNIT_UNIT", "UNIT_DESC"), ("", ""), ("X", "X"), [("m", "metre"), ("yyyy-mm-dd", "date")]),
        _group(
            "TYPE",
            ("TYPE_TYPE", "TYPE_DESC"),
            ("", ""),
            ("X", "X"),
            [("ID", "unique id"), ("X", "text"), ("PA", "abbreviation"), ("DT", "date"), ("2DP", "two decimals")],
        ),
    ]
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_bytes("\r\n".join(groups).encode("ascii"))


def _water(holes: Sequence[Hole]) -> list[str]:
    rows = [(hole.name, f"{hole.water:.2f}") for hole in holes if hole.water is not None]
    return [_group("WSTG", ("LOCA_ID", "WSTG_DPTH"), ("", "m"), ("ID", "2DP"), rows)] if rows else []


def _codes(holes: Sequence[Hole]) -> list[Row]:
    words = {code: text for hole in holes for _, _, code, text in hole.strata}
    return [("GEOL_GEOL", code, text) for code, text in words.items()]


def _loca(hole: Hole) -> Row:
    east, north = hole.place
    depth = hole.strata[-1][1]
    return (hole.name, "CP", f"{east:.2f}", f"{north:.2f}", f"{hole.level:.2f}", f"{depth:.2f}")


def _group(name: str, headings: Row, units: Row, types: Row, rows: Sequence[Row]) -> str:
    lines = [("GROUP", name), ("HEADING", *headings), ("UNIT", *units), ("TYPE", *types)]
    lines += [("DATA", *row) for row in rows]
    return "".join(",".join(f'"{value}"' for value in line) + "\r\n" for line in lines)
