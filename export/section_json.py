"""The two JSON documents other programs read: `proposal.json` and `sections/S1.json`, written and read back.

A document is the record of the sections room plus what only the file has: schema, tool, notice, hashes. The hash
`proposal_sha256` of a section is the SHA-256 of the bytes of `proposal.json` beside it, so `sha256sum` checks it.
"""

from __future__ import annotations

import hashlib
import json
from collections.abc import Sequence
from dataclasses import dataclass, fields
from pathlib import Path
from typing import Any, Literal, TypeVar, cast

from pydantic import TypeAdapter, ValidationError

from export import VERSION
from export.canonical import canonical_text, sort_free_keys
from ingest.errors import InputError
from ingest.model import NOTICE, InputFile
from ingest.receive import refuse_device
from ingest.record import record
from sections.definition import SectionDefinition
from sections.proposal import Proposal

PROPOSAL_SCHEMA = "cutworthy/proposal/1"
SECTION_SCHEMA = "cutworthy/section/1"
NOT_INCLUDED = "NOT INCLUDED: unplanned over-dig, minimum surcharge"
"""Printed with every section until the brief has a key that answers it."""
SECTION_NOTICE = f"{NOTICE} {NOT_INCLUDED}."
MOST_PROBLEMS = 12

T = TypeVar("T")
_ADAPTERS: dict[type[Any], TypeAdapter[Any]] = {}


@record
class Tool:
    """Who wrote the file."""

    name: Literal["cutworthy"] = "cutworthy"
    version: str = VERSION


@record
class Conventions:
    """Signs and units of a section, in words."""

    x_positive: str = "from the line's first point"
    z: str = "level"
    N_and_hoop: str = "tension positive, preload likewise (a strut's is negative)"
    moment_positive: str = "tension on the excavated face"
    V: str = "dM/ds along `points` (top to toe, head to far end)"
    reaction: str = "on the wall, positive towards the retained side"
    settlement: str = "positive down"
    per: Literal["m", "rad"]
    units_accepted: tuple[str, ...] = ("kN/m", "kNm/m", "kN/rad", "kNm/rad", "kN", "kNm", "kPa", "m", "mm")
    """Units of results that come back."""


@record
class ProposalDocument(Proposal):
    """`proposal.json`: the proposal with what only the file has."""

    schema: Literal["cutworthy/proposal/1"] = "cutworthy/proposal/1"
    tool: Tool = Tool()
    notice: str = NOTICE
    written: tuple[str, ...]
    inputs: tuple[InputFile, ...]


@record
class SectionDocument(SectionDefinition):
    """`sections/S1.json`: the definition with what only the file has; a cut of one's own has no `proposal_sha256`."""

    schema: Literal["cutworthy/section/1"] = "cutworthy/section/1"
    tool: Tool = Tool()
    notice: str = SECTION_NOTICE
    proposal_sha256: str | None
    conventions: Conventions


PROPOSAL_FIRST = ("schema", "tool", "notice", "limits", "written", "inputs", "frame")
SECTION_FIRST = ("schema", "id", "kind", "tool", "notice", "proposal_sha256", "line", "represents", "conventions")
WORLD_KEYS = frozenset({"perimeter", "centre", "point", "points", "outline", "line", "offset"})


def adapter(document: type[T]) -> TypeAdapter[T]:
    """The reader, writer and schema maker of one document."""
    if document not in _ADAPTERS:
        _ADAPTERS[document] = TypeAdapter(document)
    return cast("TypeAdapter[T]", _ADAPTERS[document])


def proposal_text(proposal: Proposal, inputs: Sequence[InputFile], written: Sequence[str]) -> str:
    """Text of `proposal.json`.

    Args:
        proposal: The proposal, world coordinates.
        inputs: The files of the run, with hashes.
        written: Every file of the folder, relative, with forward slashes; sorted here.

    Raises:
        ValueError: On a non-finite number, naming its key path.
    """
    document = ProposalDocument(**_content(proposal), written=tuple(sorted(written)), inputs=tuple(inputs))
    return _text(document, PROPOSAL_FIRST, lambda keys: bool(WORLD_KEYS.intersection(keys)))


def section_text(definition: SectionDefinition, proposal_sha256: str | None) -> str:
    """Text of one section file.

    Args:
        definition: The section.
        proposal_sha256: SHA-256 of the bytes of the `proposal.json` it belongs to, None when it belongs to none.

    Raises:
        ValueError: On a non-finite number, naming its key path.
    """
    document = SectionDocument(
        **_content(definition),
        proposal_sha256=proposal_sha256,
        conventions=Conventions(per="m" if definition.kind == "plane_strain" else "rad"),
    )
    return _text(document, SECTION_FIRST, lambda keys: keys[:1] == ("line",) or keys == ("axis", "point"))


def write_proposal(proposal: Proposal, inputs: Sequence[InputFile], folder: Path, written: Sequence[str]) -> str:
    """Write `proposal.json` into a folder and return the SHA-256 of its bytes."""
    data = proposal_text(proposal, inputs, written).encode()
    (folder / "proposal.json").write_bytes(data)
    return hashlib.sha256(data).hexdigest()


def write_section(definition: SectionDefinition, path: Path, proposal_sha256: str | None) -> None:
    """Write one section file, making its folder when needed."""
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_bytes(section_text(definition, proposal_sha256).encode())


def read_proposal(path: Path) -> ProposalDocument:
    """Read a `proposal.json` strictly: unknown keys, wrong types and non-finite numbers are refused.

    Raises:
        InputError: Naming file and key path.
    """
    return _read(path, ProposalDocument, PROPOSAL_SCHEMA)


def read_section(path: Path) -> SectionDocument:
    """Read a section file strictly: unknown keys, wrong types and non-finite numbers are refused.

    Raises:
        InputError: Naming file and key path.
    """
    return _read(path, SectionDocument, SECTION_SCHEMA)


def _content(item: Any) -> dict[str, Any]:
    return {field.name: getattr(item, field.name) for field in fields(item)}


def _text(document: Any, first: tuple[str, ...], is_world: Any) -> str:
    tree = adapter(type(document)).dump_python(document, by_alias=True, warnings="error")
    keys = [*first, *(key for key in tree if key not in first)]
    return canonical_text({key: _in_order(tree[key], getattr(document, key)) for key in keys}, is_world)


def _in_order(tree: Any, item: Any) -> Any:
    """Sort the keys of free-named objects; those of records keep the order of their fields."""
    if isinstance(item, dict):
        return {key: _in_order(tree[key], item[key]) for key in sort_free_keys(item)}
    if isinstance(item, tuple):
        return [_in_order(part, one) for part, one in zip(tree, item, strict=True)]
    if hasattr(item, "__dataclass_fields__"):
        return {
            key: _in_order(value, getattr(item, field.name))
            for (key, value), field in zip(tree.items(), fields(item), strict=True)
        }
    return tree


@dataclass(frozen=True)
class _NotFiniteError(Exception):
    word: str


def _refuse(word: str) -> float:
    raise _NotFiniteError(word)


def _text_of(path: Path) -> str:
    try:
        refuse_device(path)
        return path.read_text(encoding="utf-8")
    except (OSError, UnicodeDecodeError) as error:
        reason = error.strerror if isinstance(error, OSError) else f"no UTF-8 at byte {error.start}"
        problem = f"cannot be read as text: {reason}"
        raise InputError(path.name, "", problem, "name a JSON file of this tool") from None


def _read(path: Path, document: type[T], schema: str) -> T:
    name, remedy = path.name, "write the file again with `cutworthy propose`, or undo the change made by hand"
    text = _text_of(path)
    try:
        tree = json.loads(text, parse_constant=_refuse)
    except json.JSONDecodeError as error:
        raise InputError(name, f"line {error.lineno}, column {error.colno}", f"no JSON: {error.msg}", remedy) from None
    except RecursionError:
        raise InputError(name, "", "no JSON of this tool: nested too deeply", remedy) from None
    except ValueError:  # Python reads no whole number of thousands of digits
        raise InputError(name, "", "holds a number too long to be one", remedy) from None
    except _NotFiniteError as error:
        raise InputError(name, "", f"{error.word} is not a number of JSON", remedy) from None
    found = tree.get("schema") if isinstance(tree, dict) else None
    if found != schema:
        raise InputError(
            name, "schema", f'expected "{schema}", found {json.dumps(found)[:60]}', "name a file of that kind"
        )
    try:
        return adapter(document).validate_json(text)
    except ValidationError as error:
        problems = [(_place(one["loc"]), _words(one), remedy) for one in error.errors(include_url=False)]
        raise InputError(name, *problems[0], others=problems[1:MOST_PROBLEMS]) from None


def _place(keys: Sequence[str | int]) -> str:
    path = ""
    for key in keys:
        path += f"[{key}]" if isinstance(key, int) else f".{key}" if path else key
    return path


def _words(error: Any) -> str:
    if error["type"] == "missing":
        return "this key is missing"
    if error["type"] == "unexpected_keyword_argument":
        return "no key of this schema"
    return f"{error['msg'].lower()}, found {json.dumps(error['input'], default=str)[:60]}"
