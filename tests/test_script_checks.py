"""The checks a script can make, on every section of the samples and of invented sites; the rules are written anew."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from builders_generated import generated_site
from script_rules import (
    combine,
    hulls,
    id_faults,
    judge,
    ledger_faults,
    smear_faults,
    stiffness_faults,
    stretch_faults,
    verdict_faults,
)

from export.cli import main
from export.section_json import proposal_text, section_text
from sections.propose import propose

SAMPLES = Path(__file__).parents[1] / "samples"
SITES = ["first_pit"] + [
    pytest.param(name, marks=pytest.mark.slow) for name in ("tannery_lane", "quarry_road", "weir_shaft")
]  # type: ignore[list-item]
QUICK, LONG = (2, 4, 5, 9), (1, 7, 10)
SEEDS = [*QUICK, *(pytest.param(seed, marks=pytest.mark.slow) for seed in LONG)]

Json = dict[str, Any]


def faults_of(proposal: Json, sections: list[Json]) -> list[str]:
    found = [*stretch_faults(proposal), *ledger_faults(proposal)]
    for section in sections:
        found += [*smear_faults(section), *stiffness_faults(section), *id_faults(section)]
        found += verdict_faults(section, proposal["limits"])
    return found


@pytest.mark.parametrize("name", SITES)
def test_the_files_of_a_sample_keep_every_rule_a_script_can_check(name: str, tmp_path: Path) -> None:
    folder = SAMPLES / name
    inputs = sorted(str(path) for path in folder.iterdir() if path.suffix in (".ifc", ".dxf", ".ags"))
    out = tmp_path / "out"
    assert main(["propose", *inputs, "--brief", str(folder / "brief.toml"), "--out", str(out), "--quiet"]) == 0
    proposal = json.loads((out / "proposal.json").read_text())
    sections = [json.loads((out / section["file"]).read_text()) for section in proposal["sections"]]
    assert sections
    assert any(member["smear"] for section in sections for member in section["members"])
    assert faults_of(proposal, sections) == []


@pytest.mark.parametrize("seed", SEEDS)
def test_the_sections_of_an_invented_site_keep_them_too(seed: int) -> None:
    made, definitions = propose(generated_site(seed))
    proposal = json.loads(proposal_text(made, (), ()))
    sections = [json.loads(section_text(one, None)) for one in definitions]
    assert any(member["smear"] for section in sections for member in section["members"])
    assert faults_of(proposal, sections) == []


LIMITS = {"ratio_low": 0.9, "ratio_high": 1.1}


@pytest.mark.parametrize(
    ("bands", "e", "band"),
    [
        ([(0.65, 0.80), (1.26, 1.53)], (0.0, 0.0), (0.65, 1.53)),
        ([(0.65, 0.80), (1.26, 1.53)], (0.1, 0.1), (0.585, 1.683)),
        ([(0.98, 1.00), (1.26, 1.53)], (0.0, 0.0), (1.2348, 1.53)),
        ([(0.97, 1.03), (0.98, 1.05)], (0.03, 0.03), (0.922082, 1.113945)),
        ([(0.65, 0.80), (0.70, 0.90)], (0.15, 0.15), (0.38675, 1.035)),
        ([(0.95, 1.05)], (0.1, 0.1), (0.855, 1.155)),
    ],
)
def test_the_rules_written_anew_give_the_cases_worked_by_hand(
    bands: list[tuple[float, float]], e: tuple[float, float], band: tuple[float, float]
) -> None:
    """Worked by hand from the rules: products across mechanisms, the margin once, surviving excess."""
    assert combine(bands, *e, LIMITS) == pytest.approx(band, abs=1e-6)


def row(mechanism: str, low: float | None, high: float | None, **more: Any) -> Json:
    given = {"gate": False, "gap": False, "carries": [], "by_class_only": False, "assessed": low is not None}
    return {"mechanism": mechanism, "low": low, "high": high, **given, **more}


def test_a_computation_stands_for_what_it_carries_and_fills_the_gaps_there() -> None:
    rows = [row("corner", 0.6, 0.7), row("supports", None, None, gap=True), row("load", 0.9, 1.0)]
    computed = row("corner", 0.8, 1.05, carries=["supports"])
    assert hulls(rows) == ([(0.6, 0.7), (0.9, 1.0)], True)
    assert hulls([*rows, computed]) == ([(0.9, 1.0), (0.6, 1.05)], False)


@pytest.mark.parametrize(
    ("rows", "word"),
    [
        ([row("corner", 0.95, 1.0)], "holds"),
        ([row("corner", 0.95, 1.0, by_class_only=True)], "undecided"),
        ([row("corner", 0.95, 1.0), row("load", None, None, gap=True)], "not_assessed"),
        ([row("corner", 1.2, 1.3), row("load", None, None, gap=True)], "under_states"),
        ([row("corner", 0.95, 1.0), row("shape", None, None, gate=True)], "not_two_dimensional"),
        ([row("corner", None, None)], "not_assessed"),
    ],
)
def test_gates_gaps_and_classes_rule_the_word(rows: list[Json], word: str) -> None:
    assert judge(rows, {"margin": [0.0, 0.0], "margin_measured": True}, LIMITS)[0] == word
