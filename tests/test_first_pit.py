"""The first pit worked by hand: every number of its first section, three stations, and the members table.

Drawing and brief are invented. Sources of what is computed from them stand beside each figure.
"""

from __future__ import annotations

import csv
import json
from math import atan, pi, sqrt
from pathlib import Path
from typing import Any

import pytest
from scipy.integrate import dblquad

from export.cli import main
from ingest.model import OUTPUTS
from ingest.site import read_site
from sections.criteria import CRITERIA
from sections.criteria.screening import screening
from sections.pit.find import find_pits
from sections.verdicts.judged import judge_stations

PIT = Path(__file__).parents[1] / "samples" / "first_pit"
DRAWING, BRIEF = PIT / "first_pit.dxf", PIT / "brief.toml"

# C30/37: Ecm = 22 (fcm/10)^0.3 GPa, fcm = 38 MPa (EN 1992-1-1:2004, Table 3.1).
E_PILE = 22e6 * 3.8**0.3
# CHS 508 x 16: A = pi (D^2 - d^2)/4, I = pi (D^4 - d^4)/64; E = 210 GPa from the brief.
A_STRUT = pi * (0.508**2 - 0.476**2) / 4
I_STRUT = pi * (0.508**4 - 0.476**4) / 64


@pytest.fixture(scope="module")
def out(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("first_pit") / "out"
    assert main(["propose", str(DRAWING), "--brief", str(BRIEF), "--out", str(folder), "--quiet"]) == 0
    return folder


@pytest.fixture(scope="module")
def section(out: Path) -> dict[str, Any]:
    return json.loads((out / "sections" / "S1.json").read_text())  # type: ignore[no-any-return]


@pytest.fixture(scope="module")
def proposal(out: Path) -> dict[str, Any]:
    return json.loads((out / "proposal.json").read_text())  # type: ignore[no-any-return]


def member(section: dict[str, Any], name: str) -> dict[str, Any]:
    return next(m for m in section["members"] if m["id"] == name)


def test_the_perimeter_is_the_pile_axis_and_every_pile_is_counted_once(proposal: dict[str, Any]) -> None:
    pit = proposal["pits"][0]
    assert pit["length"] == 100.0  # 2 (30 + 20)
    assert pit["perimeter"] == [[100.0, 200.0], [130.0, 200.0], [130.0, 220.0], [100.0, 220.0]]
    assert [(c["at"], c["interior_angle"], c["kind"]) for c in pit["corners"]] == [
        (at, 90.0, "inside") for at in (0.0, 30.0, 50.0, 80.0)
    ]
    (run,) = pit["runs"]
    assert (run["from"], run["to"]) == (0.0, 100.0)
    assert (run["wall"]["kind"], run["wall"]["count"], run["wall"]["centres"]) == ("contiguous", 100, 1.0)


def test_zones_end_at_corners_and_where_the_footing_ceases_to_bear(proposal: dict[str, Any]) -> None:
    # Footing 3 m long, 2 m behind the wall: it bears on 2 x 2 m beyond its ends. x 113.5 to 116.5 is chainage
    # 50 + (130 - 116.5) = 63.5 to 66.5, so 59.5 to 70.5.
    zones = [(z["from"], z["to"]) for z in proposal["pits"][0]["zones"]]
    flat = [value for zone in zones for value in zone]
    assert flat == pytest.approx([0, 30, 30, 50, 50, 59.5, 59.5, 70.5, 70.5, 80, 80, 100], abs=0.01)


def test_struts_stand_at_5_m_and_each_holds_5_m_of_wall(proposal: dict[str, Any]) -> None:
    struts = [m for m in proposal["pits"][0]["members"] if m["role"] == "strut"]
    assert [(m["count"], m["spacing"], m["level"], m["skew"], m["inclination"]) for m in struts] == [
        (6, 5.0, -1.5, 0.0, 0.0),
        (4, 5.0, -1.5, 0.0, 0.0),
    ]


def test_the_first_section_runs_through_the_footing_wall_to_wall(section: dict[str, Any]) -> None:
    # 3 He = 18 m behind each wall, 20 m across; base 2 He = 12 m below the toe at -12.
    assert section["line"] == [[115.0, 182.0], [115.0, 238.0]]
    assert section["extent"]["x"] == [0.0, 56.0]
    assert section["extent"]["z"] == [-24.0, 0.0]
    assert [w["at"] for w in section["walls"]] == [15.0, 65.0]


def test_the_wall_per_metre_and_back_to_one_pile(section: dict[str, Any]) -> None:
    # 0.75 m piles at 1.00 m: per metre equals per pile. EI x 0.7 from the brief.
    EA, EI = E_PILE * pi * 0.75**2 / 4, E_PILE * pi * 0.75**4 / 64
    for name, x in (("P1-wall-1", 18.0), ("P1-wall-3", 38.0)):
        wall = member(section, name)
        assert wall["points"] == [[x, 0.0], [x, -12.0]]
        assert wall["real"]["EA_kN"] == pytest.approx(EA)
        assert wall["real"]["EI_kNm2"] == pytest.approx(EI)
        assert wall["section"]["EA_kN_per_m"] == pytest.approx(EA)
        assert wall["section"]["EI_kNm2_per_m"] == pytest.approx(0.7 * EI)
        assert wall["section"]["weight_kN_per_m2"] == pytest.approx(25 * pi * 0.75**2 / 4)
        # The solid wall with both: t = sqrt(12 EI'/EA') = 0.75 sqrt(3)/2 sqrt(0.7), E = EA'/t.
        thickness = 0.75 * sqrt(3) / 2 * sqrt(0.7)
        assert wall["section"]["thickness"] == pytest.approx(thickness)
        assert wall["section"]["E_kPa"] == pytest.approx(EA / thickness)
        assert {b["quantity"]: b["factor"] for b in wall["back"]} == {"N": 1.0, "V": 1.0, "M": 1.0}


def test_the_strut_per_metre_and_back_to_one_strut(section: dict[str, Any]) -> None:
    strut = member(section, "P1-strut-1")
    assert strut["points"] == [[18.0, -1.5], [38.0, -1.5]]
    assert [end["to"] for end in strut["ends"]] == ["P1-wall-1", "P1-wall-3"]
    assert strut["real"]["EA_kN"] == pytest.approx(210e6 * A_STRUT)
    assert strut["real"]["length"] == 20.0
    values = strut["section"]
    assert values["EA_kN_per_m"] == pytest.approx(210e6 * A_STRUT / 5)  # EA/s
    assert values["EI_kNm2_per_m"] == pytest.approx(210e6 * I_STRUT / 5)
    assert values["weight_kN_per_m2"] == pytest.approx(78.5 * A_STRUT / 5)
    assert values["preload_kN_per_m"] == pytest.approx(-200 / 5)
    assert values["k_effective_kN_per_m_per_m"] == pytest.approx(210e6 * A_STRUT / 5 / 20)
    assert values["resists"] == "compression"
    assert next(b["factor"] for b in strut["back"] if b["quantity"] == "N") == 5.0


def footing_share(depth: float) -> float:
    """Real horizontal resultant of the footing in the plane through it over that of the same pressure without end.

    Boussinesq 1885, nu = 0.5, integrated by quadrature: sx = 3 Q x^2 z/(2 pi R^5) over a 3 m x 2 m patch, 2 m from the
    wall, down to `depth` below it; Flamant 1892 for the endless strip.
    """

    def column(x: float, y: float) -> float:  # integral of sx3 over z, for 1 kN
        a2 = x * x + y * y
        return x * x / (2 * pi) * (a2**-1.5 - (a2 + depth * depth) ** -1.5)

    real, _ = dblquad(column, -1.5, 1.5, 2.0, 4.0)
    endless, _ = dblquad(column, -500.0, 500.0, 2.0, 4.0, epsabs=1e-6)
    return real / endless


def footing_moment_share(depth: float) -> float:
    """The same by moment about `depth`."""

    def arm(x: float, y: float) -> float:  # integral of sx3 (depth - z) over z, for 1 kN
        a2 = x * x + y * y
        return x * x * depth / (2 * pi) * (a2**-1.5 - 1 / (a2 * sqrt(a2 + depth * depth)))

    real, _ = dblquad(arm, -1.5, 1.5, 2.0, 4.0)
    endless, _ = dblquad(arm, -500.0, 500.0, 2.0, 4.0, epsabs=1e-6)
    return real / endless


def test_the_footing_is_handed_over_by_its_effect_on_the_wall(
    section: dict[str, Any], proposal: dict[str, Any]
) -> None:
    # Founded at -1.0: 5 m above the dig level, 11 m above the toe; the largest of the four shares is handed over.
    share = max(f(depth) for f in (footing_share, footing_moment_share) for depth in (5.0, 11.0))
    (load,) = section["loads"]
    assert load["at"] == [[40.0, -1.0], [42.0, -1.0]]  # 2 m to 4 m behind the north wall at x = 38
    assert load["real"] == {"value": 150.0, "unit": "kPa"}
    assert load["section"]["unit"] == "kPa"
    assert load["section"]["value"] == pytest.approx(150 * share, rel=2e-3)
    values = {a["name"]: a["value"] for a in load["alternatives"]}
    assert values["pressure_kept"] == 150.0
    assert values["absent"] == 0.0
    stands_for = sum(r["to"] - r["from"] for r in section["represents"])
    assert values["total_kept"] == pytest.approx(150 * 3 / stands_for)
    assert proposal["pits"][0]["loads"][0]["within_pit"] is False


def test_ground_and_stages(section: dict[str, Any]) -> None:
    assert [layer["outlines"][0] for layer in section["ground"]["layers"]] == [
        [[0.0, -3.0], [56.0, -3.0], [56.0, 0.0], [0.0, 0.0]],
        [[0.0, -24.0], [56.0, -24.0], [56.0, -3.0], [0.0, -3.0]],
    ]
    clay = section["materials"]["stiff clay"]
    assert clay["E"] == [[-3.0, 40e3], [-24.0, 40e3 + 21 * 3e3]]
    assert clay["su"] == [[-3.0, 75.0], [-24.0, 75.0 + 21 * 5]]
    assert clay["standing"]["phi"] == "missing"
    assert [(s["id"], s["text"], s["level"], s["preload"]) for s in section["stages"]] == [
        ("T0", "stress in the ground before work", 0.0, {}),
        ("T1", "wall installed", 0.0, {}),
        ("T2", "dig to -2.00", -2.0, {}),  # 0.5 m below the strut
        ("T3", "install P1-strut-1", -2.0, {"P1-strut-1": -40.0}),
        ("T4", "dig to -6.00", -6.0, {}),
    ]
    assert section["stages"][4]["dig"] == [[[18.0, -6.0], [38.0, -6.0], [38.0, -2.0], [18.0, -2.0]]]


def test_the_balance_closes(section: dict[str, Any]) -> None:
    # At rest to -6: 0.5 * 18 * 9/2 = 40.5 and (54 + 54 + 60)/2 * 3 * 1.0 = 252: 292.5 kN/m each side.
    thrusts = [line["value"] for line in section["balance"]["horizontal"]]
    assert thrusts[:2] == pytest.approx([292.5, -292.5])
    # Footing, 2 to 4 m behind the north wall, 5 m above the dig level: p H/pi (atan(4/5) - atan(2/5)), Flamant 1892.
    footing = section["loads"][0]["section"]["value"] * 5 / pi * (atan(0.8) - atan(0.4))
    assert thrusts[2:] == pytest.approx([-footing, -footing])  # the load's line, and the residual
    weights = [line["value"] for line in section["balance"]["vertical"]]
    assert weights == pytest.approx([25 * pi * 0.75**2 / 4 * 12] * 2)


@pytest.mark.parametrize(
    ("chainage", "low", "high", "why"),
    [
        (15.0, 0.28, 1.05, "2.5 He from the corner: hull of columns 2 and 3, both classes; wall 5 He long"),
        (40.0, 0.04, 1.01, "1.67 He: 0.22 to 1.00; wall 3.33 He long, rows 3 and 4: 0.04 to 1.01"),
        (3.0, 0.06, 0.94, "0.5 He: 0.06 to 0.75 and 0.73 to 0.94"),
    ],
)
def test_three_stations_by_class_of_wall(chainage: float, low: float, high: float, why: str) -> None:
    """Class bands of deflection with a waler (hull of both classes) and the margin of rows, 0.10 and 0.37, by hand.

    Source of the class bands: 45 own cases of the screening, least and largest, rounded outwards.
    """
    site = read_site([DRAWING], BRIEF)
    (found,) = find_pits(site)
    thin = tuple(criterion for criterion in CRITERIA if criterion is not screening)
    judged = judge_stations(site, found, criteria=thin)
    station = int(abs(found.stations.chainage - chainage).argmin())
    by_class = next(r for r in judged.results if r.code == "corner_class")
    o = OUTPUTS.index("wall_deflection")
    assert (by_class.low[station, o], by_class.high[station, o]) == pytest.approx((low, high)), why
    verdict = judged.verdicts_at(station)["wall_deflection"]
    assert verdict.low == pytest.approx(low * 0.9)
    assert verdict.high == pytest.approx(high * 1.37)
    assert verdict.verdict == "undecided"
    assert verdict.provisional
    for moment in OUTPUTS[1:3]:
        assert judged.verdicts_at(station)[moment].verdict == "not_assessed"


def test_results_come_back_to_members(out: Path, tmp_path: Path) -> None:
    target = tmp_path / "members.csv"
    sections = [str(out / "sections" / f"{name}.json") for name in ("S1", "S2")]
    assert main(["members", *sections, str(PIT / "results.csv"), "--out", str(target), "--quiet"]) == 0
    rows = list(csv.DictReader(target.read_text(encoding="utf-8").splitlines()))
    found = [
        (r["member"], r["value"], float(r["factor"]), float(r["member_value"]), r["member_unit"], r["run"])
        for r in rows
    ]
    assert found == [
        ("P1-wall-1", "38.0", 1.0, 38.0, "kNm", "made-up"),  # one pile a metre
        ("P1-wall-1", "120.0", 1.0, 120.0, "kNm", "made-up"),
        ("P1-wall-1", "-65.0", 1.0, -65.0, "kNm", "made-up"),
        ("P1-wall-1", "90.0", 1.0, 90.0, "kN", "made-up"),
        ("P1-strut-1", "-40.0", 5.0, -200.0, "kN", "made-up"),  # its preload comes back
        ("P1-strut-1", "-250.0", 5.0, -1250.0, "kN", "made-up"),
        ("P1-strut-2", "-235.0", 5.0, -1175.0, "kN", "made-up"),
    ]
    governing = list(csv.DictReader((tmp_path / "members.csv.governing.csv").read_text(encoding="utf-8").splitlines()))
    struts = {r["member"]: float(r["member_value"]) for r in governing if r["member"].startswith("P1-strut")}
    assert struts == {"P1-strut-1": -1250.0, "P1-strut-2": -1175.0}


def test_stretches_add_up_to_the_perimeter(proposal: dict[str, Any]) -> None:
    spans = [s for section in proposal["sections"] for s in section["represents"]] + proposal["unrepresented"]
    assert sum((s["to"] - s["from"]) % 100 or 100 for s in spans) == pytest.approx(100)


def test_entities_of_the_drawing_are_all_accounted_for(proposal: dict[str, Any]) -> None:
    # 100 circles, 10 lines, 2 polylines, 1 text.
    (book,) = proposal["ledger"].values()
    assert book["entities"] == 113 == book["used"] + book["context"] + book["ignored"]
    assert book["roles"] == {"wall": 100, "strut": 10, "waler": 1, "load": 1}


APART = ("sources", "inputs", "ledger", "proposal_sha256")


def without_sources(tree: Any) -> Any:
    if isinstance(tree, dict):
        return {key: without_sources(value) for key, value in tree.items() if key not in APART}
    if isinstance(tree, list):
        # The drawing gives its waler no level, the model does: the one assumption they do not share.
        return [
            without_sources(item) for item in tree if not (isinstance(item, dict) and item.get("code") == "waler-level")
        ]
    return tree


def test_the_same_pit_as_a_model_gives_the_same_sections(out: Path, tmp_path: Path) -> None:
    model = PIT.parent / "first_pit_ifc" / "first_pit.ifc"
    folder = tmp_path / "out"
    assert main(["propose", str(model), "--brief", str(BRIEF), "--out", str(folder), "--quiet"]) == 0
    for name in ("proposal.json", "sections/S1.json", "sections/S2.json"):
        drawn, modelled = (json.loads((place / name).read_text()) for place in (out, folder))
        assert without_sources(modelled) == without_sources(drawn), name


def test_the_same_inputs_give_the_same_bytes(out: Path, tmp_path: Path) -> None:
    folder = tmp_path / "out"
    assert main(["propose", str(DRAWING), "--brief", str(BRIEF), "--out", str(folder), "--quiet"]) == 0
    names = sorted(path.relative_to(out) for path in out.rglob("*") if path.is_file())
    assert names == sorted(path.relative_to(folder) for path in folder.rglob("*") if path.is_file())
    assert [name for name in names if (out / name).read_bytes() != (folder / name).read_bytes()] == []


def test_the_expected_figures_of_the_sample_come_out(proposal: dict[str, Any], section: dict[str, Any]) -> None:
    expected = json.loads((PIT / "expected" / "figures.json").read_text())
    (pit,) = proposal["pits"]
    assert pit["length"] == expected["length"]
    assert [corner["at"] for corner in pit["corners"]] == expected["corners"]
    zones = [[z["from"], z["to"]] for z in pit["zones"]]
    assert sum(zones, []) == pytest.approx(sum(expected["zones"], []), abs=0.01)
    figures = expected["S1"]
    assert section["line"] == figures.pop("line")
    load = figures.pop("P1-load-1")
    assert section["loads"][0]["section"] == {"value": pytest.approx(load["section"]), "unit": load["unit"]}
    for name, values in figures.items():
        got = member(section, name)["section"]
        assert {key: got[key] for key in values} == pytest.approx(values), name
