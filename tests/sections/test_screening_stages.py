"""The stages the screening runs: template by hand, and the brief's own with a removal."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from ingest.model import Site, Stage
from ingest.site import read_site
from sections.found import FoundPit
from sections.pit.find import find_pits
from sections.screening.stages import lay_stages

PIT = Path(__file__).parents[2] / "samples" / "first_pit"


def first_pit(*stages: Stage) -> tuple[Site, FoundPit]:
    site = replace(read_site([PIT / "first_pit.dxf"], PIT / "brief.toml"), stages=stages)
    (found,) = find_pits(site)
    return site, found


def test_without_stages_the_pit_is_dug_half_a_metre_below_the_struts_and_then_whole() -> None:
    # Struts of both directions at -1.5: cantilever dig to -2.0, then to -6.0 with all in.
    stages, names = lay_stages(*first_pit())
    assert stages == ((-2.0, (False, False)), (-6.0, (True, True)))
    assert names == ("dig to -2.00", "final dig")


def test_the_stages_of_the_brief_are_run_and_a_removal_is_one_more() -> None:
    given = (
        Stage(name="trial dig", dig_to=-3.0),
        Stage(name="struts", install=("STRUTS",)),
        Stage(name="to formation", dig_to=-6.0),
        Stage(name="long struts out", remove=("P1-strut-2",)),
    )
    stages, names = lay_stages(*first_pit(*given))
    assert stages == ((-3.0, (False, False)), (-6.0, (True, True)), (-6.0, (True, False)))
    assert names == ("trial dig", "to formation", "long struts out")


def test_a_brief_that_stops_above_the_floor_still_gets_the_final_dig() -> None:
    stages, names = lay_stages(*first_pit(Stage(name="half way", dig_to=-3.0, install=("STRUTS",))))
    assert stages == ((-3.0, (False, False)), (-6.0, (True, True)))
    assert names == ("half way", "final dig")


def test_a_row_no_stage_installs_counts_as_there_from_the_start() -> None:
    stages, _ = lay_stages(*first_pit(Stage(name="all", dig_to=-6.0)))
    assert stages == ((-6.0, (True, True)),)
