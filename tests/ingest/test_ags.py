"""AGS4: boreholes from good files as python-ags4 reads them, and something sensible from all others."""

from __future__ import annotations

import os
import warnings
from pathlib import Path
from typing import Any

import pytest

from ingest.ags import read_ags
from ingest.errors import InputError
from ingest.parts import FileParts

HOLES = """"GROUP","PROJ"
"HEADING","PROJ_ID"
"UNIT",""
"TYPE","ID"
"DATA","P"

"GROUP","TRAN"
"HEADING","TRAN_AGS"
"UNIT",""
"TYPE","X"
"DATA","4.1"

"GROUP","UNIT"
"HEADING","UNIT_UNIT","UNIT_DESC"
"UNIT","",""
"TYPE","X","X"
"DATA","m","metre"

"GROUP","TYPE"
"HEADING","TYPE_TYPE","TYPE_DESC"
"UNIT","",""
"TYPE","X","X"
"DATA","2DP","2 decimals"

"GROUP","LOCA"
"HEADING","LOCA_ID","LOCA_NATE","LOCA_NATN","LOCA_GL","LOCA_GREF"
"UNIT","","m","m","m",""
"TYPE","ID","2DP","2DP","2DP","PA"
"DATA","BH2","520.00","300.00","4.00","LOCAL"
"DATA","BH1","500.00","300.00","4.50","LOCAL"
"DATA","BH3","510.00","300.00","","LOCAL"
"DATA","BH4","","","4.00","LOCAL"

"GROUP","GEOL"
"HEADING","LOCA_ID","GEOL_TOP","GEOL_BASE","GEOL_DESC","GEOL_LEG"
"UNIT","","m","m","",""
"TYPE","ID","2DP","2DP","X","PA"
"DATA","BH1","2.00","9.00","Stiff ""blue"" CLAY","201"
"DATA","BH1","0.00","2.00","MADE GROUND, brick","101"
"DATA","BH2","0.00","1.50","MADE GROUND","101"
"DATA","BH3","0.00","1.50","MADE GROUND","101"
"DATA","BH9","0.00","1.50","PEAT","601"

"GROUP","WSTG"
"HEADING","LOCA_ID","WSTG_DPTH"
"UNIT","","m"
"TYPE","ID","2DP"
"DATA","BH1","3.25"
"""


def written(folder: Path, text: str | bytes, name: str = "holes.ags") -> Path:
    path = folder / name
    path.write_bytes(text if isinstance(text, bytes) else text.replace("\n", "\r\n").encode())
    return path


def balanced(parts: FileParts) -> bool:
    used = len({part.source.item for part in parts.parts})
    return parts.entities == used + sum(parts.context.values()) + sum(parts.ignored.values())


def test_holes_have_levels_strata_and_water(tmp_path: Path) -> None:
    parts = read_ags(written(tmp_path, HOLES))
    first, second = parts.boreholes
    assert (first.id, first.location, first.water) == ("BH1", (500.0, 300.0, 4.5), 1.25)
    # depths below ground level: top of clay 4.50 - 2.00, base 4.50 - 9.00
    assert [(layer.top, layer.base, layer.code) for layer in first.layers] == [(4.5, 2.5, "101"), (2.5, -4.5, "201")]
    assert first.layers[1].description == 'Stiff "blue" CLAY'
    assert (second.id, second.water) == ("BH2", None)
    assert (parts.schema_or_version, parts.crs) == ("AGS 4.1", "LOCAL")


def test_water_that_rose_after_the_strike_stands_at_its_highest_level(tmp_path: Path) -> None:
    risen = (
        '\n"GROUP","WSTD"\n"HEADING","LOCA_ID","WSTG_DPTH","WSTD_NMIN","WSTD_POST"\n"UNIT","","m","min","m"\n'
        '"TYPE","ID","2DP","0DP","2DP"\n"DATA","BH1","3.25","5","2.75"\n"DATA","BH1","3.25","20","2.50"\n'
    )
    (first, _) = read_ags(written(tmp_path, HOLES + risen)).boreholes
    assert first.water == 2.0  # 4.50 - 2.50


def test_every_row_is_accounted_for(tmp_path: Path) -> None:
    parts = read_ags(written(tmp_path, HOLES))
    assert parts.entities == HOLES.count('"DATA"') == 14
    assert balanced(parts)
    assert parts.ignored == {
        "hole without coordinates": 1,
        "hole without ground level": 1,
        "stratum of a hole without ground level": 1,
        "stratum of an unknown hole": 1,
    }
    assert {finding.code for finding in parts.findings} == {"borehole-level", "borehole-place"}


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('"DATA","BH2","520.00"', '"DATA","BH1","520.00"', "named twice"),
        ('"DATA","BH1","3.25"', '"DATA","BH1","3.25","9"', "3 values for 2 headings"),
        ('"DATA","BH1","3.25"', '"DATA","BH1"', "1 values for 2 headings"),
        ('"DATA","BH1","3.25"', '"DATA","BH1","deep"', '"deep" is no number'),
        ('"GROUP","WSTG"', '"GROUP","GEOL"', "group GEOL stands twice"),
        ('"LOCA_ID","WSTG_DPTH"', '"LOCA_ID","LOCA_ID"', "heading LOCA_ID stands twice"),
        ('"2.00","9.00"', '"9.00","9.00"', "not below top"),
        ('"DATA","BH2","0.00","1.50","MADE', '"DATA","BH2","0.00","1.50","MA"DE', "not a row of quoted values"),
        ('"TYPE","ID","2DP"\n"DATA","BH1","3.25"', '"TIPE","ID"\n"DATA","BH1","3.25"', "unknown kind of row"),
    ],
)
def test_what_is_broken_is_told_and_the_rest_is_read(tmp_path: Path, old: str, new: str, said: str) -> None:
    assert HOLES.count(old) == 1
    parts = read_ags(written(tmp_path, HOLES.replace(old, new)))
    assert any(said in loss for loss in parts.losses), parts.losses
    assert balanced(parts)
    assert any(hole.id == "BH1" for hole in parts.boreholes)


@pytest.mark.parametrize("lost", ["GEOL", "WSTG", "TRAN", "LOCA"])
def test_a_missing_group_loses_only_what_stood_in_it(tmp_path: Path, lost: str) -> None:
    blocks = [block for block in HOLES.split("\n\n") if f'"GROUP","{lost}"' not in block]
    parts = read_ags(written(tmp_path, "\n\n".join(blocks)))
    assert len(parts.boreholes) == (0 if lost == "LOCA" else 2)
    assert balanced(parts)


def test_units_of_the_file_are_turned_into_metres(tmp_path: Path) -> None:
    text = HOLES.replace('"UNIT","","m","m","m",""', '"UNIT","","mm","mm","ft",""')
    hole = read_ags(written(tmp_path, text)).boreholes[0]
    assert hole.location == pytest.approx((0.5, 0.3, 4.5 * 0.3048))


@pytest.mark.parametrize("code", ["utf-8-sig", "cp1252", "utf-8"])
def test_encodings_are_told_apart(tmp_path: Path, code: str) -> None:
    text = HOLES.replace("brick", "Ziegelbruch, größer").replace("\n", "\r\n").encode(code)
    (first, _) = read_ags(written(tmp_path, text)).boreholes
    assert first.layers[0].description == "MADE GROUND, Ziegelbruch, größer"


@pytest.mark.parametrize("number", ["nan", "1e999", "-inf", "1e12"])
def test_a_place_that_is_no_finite_number_stops_the_file(tmp_path: Path, number: str) -> None:
    with pytest.raises(InputError) as caught:
        read_ags(written(tmp_path, HOLES.replace('"500.00"', f'"{number}"')))
    assert caught.value.place == "line 30"  # counted by hand in HOLES
    assert number in caught.value.problem


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ('"**PROJ"\n"*PROJ_ID"\n"1"\n', "AGS 3"),
        ("prose\n", "no AGS4 group"),
        (HOLES[: HOLES.index("Stiff") + 3], "cut off"),
        (HOLES + '"GROUP","SAMP"\n', "cut off"),
    ],
)
def test_what_is_no_whole_ags4_is_refused(tmp_path: Path, text: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_ags(written(tmp_path, text))


def test_hostile_names_of_holes_are_data(tmp_path: Path) -> None:
    names = ["<script>alert(1)</script>", "=cmd|x", "../../etc", "\u202eBH"]
    text = HOLES
    for old, name in zip(("BH1", "BH2"), names[:2], strict=True):
        text = text.replace(f'"{old}"', f'"{name}"')
    assert {hole.id for hole in read_ags(written(tmp_path, text)).boreholes} == set(names[:2])


def corpus() -> list[Path]:
    folder = os.environ.get("CUTWORTHY_CORPUS")
    return sorted((Path(folder) / "ags").glob("*.ags")) if folder else []


@pytest.mark.corpus
@pytest.mark.parametrize("path", corpus(), ids=lambda path: path.name)
def test_every_file_of_the_corpus_is_read_and_balanced_or_refused_clearly(path: Path) -> None:
    if path.name in ("odd-ags3-format-01.ags", "odd-empty-01.ags"):
        with pytest.raises(InputError):
            read_ags(path)
        return
    assert balanced(read_ags(path))


def tables_of(path: Path) -> dict[str, Any]:
    from python_ags4 import AGS4

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        tables, _ = AGS4.AGS4_to_dataframe(str(path))
    return {name: table[table["HEADING"] == "DATA"] for name, table in tables.items()}


def agrees_with_the_library(path: Path) -> None:
    """Outside check: python-ags4, an independent reader of the format."""
    parts, tables = read_ags(path), tables_of(path)
    assert parts.entities == sum(len(table) for table in tables.values())
    loca = tables["LOCA"]
    expected = {
        row.LOCA_ID.strip(): (float(row.LOCA_NATE), float(row.LOCA_NATN), float(row.LOCA_GL))
        for row in loca.itertuples()
        if row.LOCA_NATE and row.LOCA_NATN and row.LOCA_GL
    }
    assert {hole.id: hole.location for hole in parts.boreholes} == expected
    strata = tables["GEOL"]
    for hole in parts.boreholes:
        own = strata[strata["LOCA_ID"].str.strip() == hole.id]
        depths = sorted(
            (round(hole.location[2] - float(top), 6), round(hole.location[2] - float(base), 6))
            for top, base in zip(own["GEOL_TOP"], own["GEOL_BASE"], strict=True)
            if top and base and float(base) > float(top)
        )
        assert sorted((round(layer.top, 6), round(layer.base, 6)) for layer in hole.layers) == depths


def test_a_good_file_reads_as_the_library_reads_it(tmp_path: Path) -> None:
    agrees_with_the_library(written(tmp_path, HOLES))


@pytest.mark.corpus
@pytest.mark.parametrize("path", [p for p in corpus() if p.name.startswith("gi-")], ids=lambda path: path.name)
def test_a_real_file_reads_as_the_library_reads_it(path: Path) -> None:
    agrees_with_the_library(path)
