"""The main job on real files nobody here drew: it ends, says what it found, and never with a fault of the tool."""

from __future__ import annotations

import json
import os
from pathlib import Path

import pytest

from export.cli import main

CORPUS = Path(os.environ.get("CUTWORTHY_CORPUS", "no folder of real files"))
FILES = sorted(path for ending in ("ifc", "dxf", "ags") for path in CORPUS.glob(f"{ending}/*.{ending}"))
BASEMENTS = ("residence-2storey-footings-01", "building-large-2storey-01", "frame-house-foundation-slabs-01")
"""Building models with a basement or foundation: the outline of the lowest storey, and sections from it."""


@pytest.mark.corpus
def test_the_folder_of_real_files_is_there() -> None:
    assert len(FILES) > 80, f"CUTWORTHY_CORPUS={CORPUS}"


@pytest.mark.corpus
@pytest.mark.parametrize("path", FILES, ids=lambda path: path.stem)
def test_a_real_file_is_proposed_from_or_says_plainly_why_not(
    path: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    out = tmp_path / "out"
    code = main(["propose", str(path), "--out", str(out)])
    said = capsys.readouterr()
    assert code in (0, 1, 2), said.err
    if code == 2:
        assert path.name in said.err
        assert "To fix:" in said.err
        assert not out.exists()
        return
    proposal = json.loads((out / "proposal.json").read_text(encoding="utf-8"))
    assert "licensed engineer" in said.out
    for book in proposal["ledger"].values():
        assert book["entities"] == book["used"] + book["context"] + book["ignored"]
    assert (code == 0) == bool(proposal["sections"])
    if code == 1:
        assert "No section could be written" in said.out
    for pit in proposal["pits"]:
        spans = [s for section in proposal["sections"] for s in section["represents"]] + proposal["unrepresented"]
        mine = [
            s["to"] - s["from"] + (pit["length"] if s["to"] < s["from"] else 0) for s in spans if s["pit"] == pit["id"]
        ]
        assert sum(mine) == pytest.approx(pit["length"], rel=1e-6)
    if path.stem in BASEMENTS:
        assert proposal["pits"]
        assert proposal["sections"]
