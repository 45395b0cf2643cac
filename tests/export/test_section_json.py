"""The JSON that other programs read: canonical, strict, equal bytes, finite numbers only."""

from __future__ import annotations

import hashlib
import json
from dataclasses import replace
from pathlib import Path

import pytest
from builders_export import CENTRES, STRUT_EA, Job, first_pit_job
from hypothesis import given
from hypothesis import strategies as st

from export.canonical import canonical_text
from export.section_json import (
    NOT_INCLUDED,
    proposal_text,
    read_proposal,
    read_section,
    section_text,
    write_proposal,
    write_section,
)
from ingest.errors import InputError
from ingest.model import NOTICE

FINITE = st.floats(allow_nan=False, allow_infinity=False)


def proposal_of(job: Job) -> str:
    return proposal_text(job.proposal, job.site.inputs, ["proposal.json"])


def test_the_envelope_stands_first_in_the_order_of_the_contract(first_pit: Job) -> None:
    tree = json.loads(proposal_of(first_pit))
    assert list(tree)[:7] == ["schema", "tool", "notice", "limits", "written", "inputs", "frame"]
    assert tree["schema"] == "cutworthy/proposal/1"
    assert tree["notice"] == NOTICE


def test_every_key_is_written_and_null_means_not_given(first_pit: Job) -> None:
    member = json.loads(section_text(first_pit.definitions[0], None))["members"][2]
    assert member["real"]["preload_kN"] is None
    assert set(member["section"]) == {
        "EA_kN_per_m",
        "EI_kNm2_per_m",
        "weight_kN_per_m2",
        "net_of_soil",
        "plane_strain_factor_included",
        "thickness",
        "E_kPa",
        "preload_kN_per_m",
        "resists",
        "limit_kN_per_m",
        "contact_kPa",
        "k_effective_kN_per_m_per_m",
        "soil_displaced_m3_per_m2",
        "free_strain",
    }


def test_stretches_are_written_with_from_and_to(first_pit: Job) -> None:
    tree = json.loads(proposal_of(first_pit))
    assert tree["pits"][0]["runs"][0]["from"] == 0.0
    assert tree["unrepresented"][0]["from"] == 98.5
    assert "start" not in tree["pits"][0]["runs"][0]


def test_numbers_have_nine_digits_and_world_coordinates_a_tenth_of_a_millimetre(first_pit: Job) -> None:
    pit = replace(
        first_pit.proposal.pits[0], length=100.00000123456, perimeter=((500000.12345678, 180000.98765432),) * 3
    )
    tree = json.loads(proposal_of(replace(first_pit, proposal=replace(first_pit.proposal, pits=(pit,)))))
    assert tree["pits"][0]["length"] == 100.000001
    assert tree["pits"][0]["perimeter"][0] == [500000.1235, 180000.9877]


def test_section_coordinates_keep_nine_digits_while_the_line_is_world(first_pit: Job) -> None:
    line = ((500000.12345678, 180000.0), (500000.0, 180060.0))
    definition = replace(first_pit.definitions[0], line=line, score=12.3456789012)
    tree = json.loads(section_text(definition, None))
    assert tree["line"][0][0] == 500000.1235
    assert tree["score"] == 12.3456789


@pytest.mark.parametrize("wrong", [float("nan"), float("inf"), float("-inf")])
def test_a_number_that_is_not_finite_is_refused_with_its_key_path(first_pit: Job, wrong: float) -> None:
    member = first_pit.definitions[0].members[2]
    broken = replace(member, real=replace(member.real, EA_kN=wrong))
    definition = replace(first_pit.definitions[0], members=(*first_pit.definitions[0].members[:2], broken))
    with pytest.raises(ValueError, match=r"members\[2\]\.real\.EA_kN"):
        section_text(definition, None)


def test_a_section_carries_the_conventions_and_what_is_not_included(first_pit: Job) -> None:
    tree = json.loads(section_text(first_pit.definitions[0], "ab" * 32))
    assert tree["conventions"]["per"] == "m"
    assert tree["conventions"]["settlement"] == "positive down"
    assert NOTICE in tree["notice"]
    assert NOT_INCLUDED in tree["notice"]
    assert tree["proposal_sha256"] == "ab" * 32


def test_an_axisymmetric_section_is_per_radian(first_pit: Job) -> None:
    tree = json.loads(section_text(replace(first_pit.definitions[0], kind="axisymmetric"), None))
    assert tree["conventions"]["per"] == "rad"


def test_the_hash_of_a_section_is_that_of_the_proposal_file(first_pit: Job, tmp_path: Path) -> None:
    digest = write_proposal(first_pit.proposal, first_pit.site.inputs, tmp_path, ["proposal.json"])
    write_section(first_pit.definitions[0], tmp_path / "sections" / "S1.json", digest)
    written = hashlib.sha256((tmp_path / "proposal.json").read_bytes()).hexdigest()
    assert read_section(tmp_path / "sections" / "S1.json").proposal_sha256 == written


def test_what_is_read_back_and_written_again_has_the_same_bytes(first_pit: Job, tmp_path: Path) -> None:
    write_proposal(first_pit.proposal, first_pit.site.inputs, tmp_path, ["proposal.json", "a.csv"])
    again = read_proposal(tmp_path / "proposal.json")
    assert again.pits == first_pit.proposal.pits
    (tmp_path / "b").mkdir()
    plain = type(first_pit.proposal)(**{name: getattr(again, name) for name in first_pit.proposal.__dataclass_fields__})
    write_proposal(plain, again.inputs, tmp_path / "b", again.written)
    assert (tmp_path / "b" / "proposal.json").read_bytes() == (tmp_path / "proposal.json").read_bytes()


def test_real_times_factor_is_the_section_value_in_the_file(first_pit: Job, tmp_path: Path) -> None:
    # CHS 508x16 at 5.00 m: EA' = 5193429.65 / 5 = 1038685.93 kN/m (geometry; E from EN 1993-1-1, recalled)
    write_section(first_pit.definitions[0], tmp_path / "S1.json", None)
    strut = json.loads((tmp_path / "S1.json").read_text())["members"][2]
    line = strut["smear"][0]
    assert strut["real"][line["real_key"]] == pytest.approx(5193429.65, abs=0.01)
    assert strut["section"][line["section_key"]] == pytest.approx(1038685.93, abs=0.01)
    assert strut["real"][line["real_key"]] * line["factor"] == pytest.approx(strut["section"][line["section_key"]])
    assert pytest.approx(5193429.648, abs=0.001) == STRUT_EA
    assert CENTRES == 1.0


def test_the_same_objects_give_the_same_bytes_and_free_keys_are_sorted(first_pit: Job) -> None:
    assert proposal_of(first_pit) == proposal_of(first_pit_job())
    turned = replace(first_pit.proposal, ledger=dict(reversed(list(first_pit.proposal.ledger.items()))))
    assert proposal_of(replace(first_pit, proposal=turned)) == proposal_of(first_pit)


@pytest.mark.parametrize(
    ("change", "place"),
    [
        (lambda tree: tree["members"][0].update(colour="red"), "members[0].colour"),
        (lambda tree: tree["members"][1]["real"].update(EA_kN="much"), "members[1].real.EA_kN"),
        (lambda tree: tree["members"][1]["real"].update(EA_kN=True), "members[1].real.EA_kN"),
        (lambda tree: tree["members"][2].update(form="rope"), "members[2].form"),
        (lambda tree: tree.pop("extent"), "extent"),
        (lambda tree: tree.update(schema="cutworthy/section/9"), "schema"),
    ],
)
def test_a_changed_section_is_refused_with_file_and_key_path(first_pit: Job, tmp_path: Path, change, place) -> None:
    tree = json.loads(section_text(first_pit.definitions[0], None))
    change(tree)
    (tmp_path / "S1.json").write_text(json.dumps(tree))
    with pytest.raises(InputError) as caught:
        read_section(tmp_path / "S1.json")
    assert caught.value.file == "S1.json"
    assert caught.value.place == place
    assert caught.value.remedy


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "no JSON"),
        ("{", "no JSON"),
        ('{"a": NaN}', "NaN"),
        ("[]", "schema"),
        ("[" * 100_000, "nested"),
        ("\ud800", "text"),
    ],
)
def test_what_is_no_json_of_ours_is_refused_in_words(tmp_path: Path, text: str, said: str) -> None:
    (tmp_path / "x.json").write_bytes(text.encode("utf-8", "surrogatepass"))
    with pytest.raises(InputError, match=said):
        read_proposal(tmp_path / "x.json")


@given(
    st.dictionaries(st.text(), st.lists(FINITE | st.integers(-(10**12), 10**12) | st.text() | st.none()), max_size=6)
)
def test_canonical_text_is_json_and_rounds_once_for_all(tree: dict[str, list[object]]) -> None:
    text = canonical_text(tree)
    again = json.loads(text)
    assert list(again) == list(tree)
    assert canonical_text(again) == text
    assert "-0.0" not in [str(value) for values in again.values() for value in values if isinstance(value, float)]


@given(FINITE)
def test_a_written_number_is_within_half_a_unit_of_its_ninth_digit(value: float) -> None:
    assert json.loads(canonical_text(value)) == pytest.approx(value, rel=5.1e-9, abs=0)
