"""Rows of the proposal: nothing is listed twice, and nothing hides behind another's id."""

from __future__ import annotations

from ingest.trail import Finding
from sections.propose import _by_id


def finding(name: str, text: str) -> Finding:
    return Finding(id=name, code="c", severity="note", where="w", text=text)


def test_equal_rows_are_listed_once_and_different_ones_under_one_id_are_all_kept() -> None:
    rows = _by_id([finding("a", "one"), finding("a", "one"), finding("a", "two"), finding("", "x"), finding("", "y")])
    assert [(row.id, row.text) for row in rows] == [("a", "one"), ("a-2", "two"), ("note-3", "x"), ("note-4", "y")]
