"""The published schemas: made from the records, committed, and never changed without a version step."""

from __future__ import annotations

import hashlib
import json

import pytest
from builders_export import Job
from jsonschema import Draft202012Validator

from export.schema import SCHEMAS, make_schema, published, read_schema
from export.section_json import proposal_text, section_text


@pytest.mark.parametrize("name", SCHEMAS)
def test_the_published_schema_is_what_the_records_give(name: str) -> None:
    assert read_schema(name) == make_schema(name), "run `python -m export.schema.make`, with a version step"


@pytest.mark.parametrize("name", SCHEMAS)
def test_a_schema_keeps_its_content_as_long_as_it_keeps_its_version(name: str) -> None:
    text = read_schema(name)
    version = json.loads(text)["properties"]["schema"]["const"]
    assert published()[version] == hashlib.sha256(text.encode()).hexdigest()


@pytest.mark.parametrize("name", SCHEMAS)
def test_a_schema_is_itself_valid_and_closed(name: str) -> None:
    tree = json.loads(read_schema(name))
    Draft202012Validator.check_schema(tree)
    assert tree["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    assert tree["additionalProperties"] is False
    assert set(tree["required"]) == set(tree["properties"])


@pytest.mark.parametrize("which", ["first_pit", "showcase"])
def test_what_is_written_fits_its_schema(which: str, request: pytest.FixtureRequest) -> None:
    job: Job = request.getfixturevalue(which)
    written = {
        "proposal": [proposal_text(job.proposal, job.site.inputs, ["proposal.json"])],
        "section": [section_text(one, "ab" * 32) for one in job.definitions],
    }
    for name, texts in written.items():
        validator = Draft202012Validator(json.loads(read_schema(name)))
        for text in texts:
            assert [error.json_path for error in validator.iter_errors(json.loads(text))] == []


def test_a_missing_or_unknown_key_does_not_fit(first_pit: Job) -> None:
    validator = Draft202012Validator(json.loads(read_schema("section")))
    tree = json.loads(section_text(first_pit.definitions[0], None))
    tree["members"][0].pop("role")
    tree["ground"]["colour"] = "brown"
    assert sorted(error.json_path for error in validator.iter_errors(tree)) == ["$.ground", "$.members[0]"]


def test_there_is_no_schema_of_another_name() -> None:
    with pytest.raises(KeyError, match="proposal, section"):
        read_schema("report")
