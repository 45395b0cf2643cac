"""The published JSON Schemas (2020-12) of `proposal.json` and of a section, made from the records, kept as files.

`python -m export.schema.make` writes them. `published.json` holds the SHA-256 of every schema that ever went out, by
its version: a schema that changes needs a new version in `export.section_json`.
"""

from __future__ import annotations

import json
from importlib import resources
from typing import Any

SCHEMAS = ("proposal", "section")


def read_schema(name: str) -> str:
    """The published schema as text.

    Args:
        name: One of `SCHEMAS`.

    Raises:
        KeyError: When there is no schema of that name.
    """
    if name not in SCHEMAS:
        raise KeyError(f"no schema {name!r}; there are {', '.join(SCHEMAS)}")
    return resources.files(__name__).joinpath(f"{name}.json").read_text(encoding="utf-8")


def make_schema(name: str) -> str:
    """Make a schema anew from the records of the code.

    Every key is required, since every key is written; `null` stands for what was not given.
    """
    from export.canonical import canonical_text
    from export.section_json import ProposalDocument, SectionDocument, adapter

    documents: dict[str, Any] = {"proposal": ProposalDocument, "section": SectionDocument}
    tree = adapter(documents[name]).json_schema(by_alias=True, mode="serialization")
    version = tree["properties"]["schema"]["const"]
    head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "$id": f"urn:{version.replace('/', ':')}"}
    return canonical_text(
        {**head, "title": f"cutworthy {name}", **_tidy({k: v for k, v in tree.items() if k != "title"})}
    )


def published() -> dict[str, str]:
    """SHA-256 of each schema that went out, by its version."""
    text = resources.files(__name__).joinpath("published.json").read_text(encoding="utf-8")
    return {str(version): str(digest) for version, digest in json.loads(text).items()}


def _tidy(tree: Any) -> Any:
    """Drop made-up titles and defaults, and require every key."""
    if isinstance(tree, list):
        return [_tidy(one) for one in tree]
    if not isinstance(tree, dict):
        return tree
    is_schema = "type" in tree or "$ref" in tree or "anyOf" in tree
    kept = {key: value for key, value in tree.items() if not (is_schema and key in ("title", "default"))}
    if "properties" in kept and kept.get("type") == "object":
        kept["required"] = list(kept["properties"])
        kept["properties"] = {key: _tidy(value) for key, value in kept["properties"].items()}
    return {key: value if key in ("properties", "required") else _tidy(value) for key, value in kept.items()}
