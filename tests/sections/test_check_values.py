"""Every check value is met, has a source and says what that source is worth."""

from __future__ import annotations

import tomllib
from pathlib import Path

import cases_loads
import cases_smearing
import pytest

ROWS = tomllib.loads((Path(__file__).parent / "check_values.toml").read_text())["value"]
CASES = cases_smearing.CASES | cases_loads.CASES
STANDINGS = ("computed", "published, seen", "published, recalled")
KEYS = {"id", "what", "source", "standing", "case", "given", "expect", "tolerance"}
NEEDED = (
    *(f"SM{n}" for n in range(1, 10)), *(f"W{n}" for n in range(1, 9)), "KP1", "KP2", "BP1", "BP2", "BP3", "AN1", "AN2",
    "AN3", *(f"L{n}" for n in range(1, 14)), *(f"F{n}" for n in range(1, 8)), *(f"A{n}" for n in range(1, 18)), "CH1",
    "CH2", "CH3", "OS1", "OS2", "OS3", "UX1", "UX2", "UX3",
)  # fmt: skip


def faults(row: dict) -> list[str]:
    """What is wrong with a row before its number is looked at."""
    found = [f"no {key}" for key in ("id", "what", "source", "case", "given") if key not in row]
    found += [f"empty {key}" for key in ("id", "what", "source") if not str(row.get(key, "-")).strip()]
    found += [f"unknown key {key}" for key in row if key not in KEYS]
    if row.get("standing") not in STANDINGS:
        found.append(f"standing {row.get('standing')!r} is not one of {STANDINGS}")
    if row.get("case") not in CASES:
        found.append(f"unknown case {row.get('case')!r}")
    if not row.get("expect"):
        found.append("nothing expected")
    if not 0 < row.get("tolerance", 1e-6) <= 5e-3:
        found.append("tolerance is none or wider than 0.5 %")
    return found


def difference(made: object, expect: object, tolerance: float) -> str:
    """What differs between a result and the value expected; "" when all agree."""
    pairs = zip(made, expect, strict=True) if isinstance(expect, list) else [(made, expect)]  # type: ignore[call-overload]
    for n, (value, wanted) in enumerate(pairs):
        same = value == wanted if isinstance(wanted, str) else value == pytest.approx(wanted, rel=tolerance, abs=1e-12)
        if not same:
            return f"value {n}: {value} instead of {wanted}"
    return ""


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row.get("id", "?"))
def test_a_check_value_is_met(row: dict) -> None:
    assert not faults(row)
    wrong = difference(CASES[row["case"]](**row["given"]), row["expect"], row.get("tolerance", 1e-6))
    assert not wrong, f"{row['what']}: {wrong} (source: {row['source']}; {row['standing']})"


def test_every_row_needed_is_there_once() -> None:
    ids = [row["id"] for row in ROWS]
    assert len(set(ids)) == len(ids)
    assert not [name for name in NEEDED if name not in ids]


def test_every_case_is_used_by_a_row() -> None:
    assert {row["case"] for row in ROWS} == set(CASES)


@pytest.mark.parametrize(
    ("change", "fault"),
    [
        ({"source": None}, "no source"),
        ({"source": " "}, "empty source"),
        ({"standing": "well known"}, "standing"),
        ({"standing": None}, "standing"),
        ({"case": "some case"}, "unknown case"),
        ({"expect": []}, "nothing expected"),
        ({"tolerance": 0.1}, "tolerance"),
        ({"sauce": "x"}, "unknown key"),
    ],
)
def test_a_bad_row_is_seen(change: dict, fault: str) -> None:
    row = {key: value for key, value in (ROWS[0] | change).items() if value is not None}
    assert any(fault in found for found in faults(row))


def test_a_wrong_value_is_seen() -> None:
    row = ROWS[0]
    wrong = [row["expect"][0] * 1.0001, *row["expect"][1:]]
    assert "value 0" in difference(CASES[row["case"]](**row["given"]), wrong, 1e-6)
    assert difference(["stays"], ["reject"], 1e-6)
