"""`requirements.ids`: what a model must carry for this job, as IDS 1.0 (buildingSMART), for its author to check.

Sizes are asked for by the standard's own quantity sets, for IDS looks at data and not at shapes: diameter or thickness
by cross-section or width, the toe by the length below the head. The XML is written here: the library that checks such
files brings a web server with it, so it serves the tests only.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from xml.etree import ElementTree as ET

from export.report.markup import clean
from export.report.words import KIND_OF_WALL, ROLE_NAMES
from export.stamp import Stamp
from ingest.model import NOTICE, Site
from sections.proposal import Proposal

NAMESPACE = "http://standards.buildingsmart.org/IDS"
XSD = "http://www.w3.org/2001/XMLSchema"
INSTANCE = "http://www.w3.org/2001/XMLSchema-instance"
VERSIONS = "IFC2X3 IFC4 IFC4X3_ADD2"
ANY_SET = ".*"
"""Pattern of the names of sets: a property counts whichever set it stands in."""
PILES = frozenset({"secant", "contiguous", "king_post"})
WALL_CLASSES = ("IFCWALL", "IFCWALLSTANDARDCASE")
PROPS = frozenset({"strut", "corner_strut", "raker"})


@dataclass(frozen=True)
class Asked:
    """One thing an element must carry: an attribute, a material, or a value of a set with its measure."""

    what: str
    why: str
    of_set: str = ""
    measure: str = ""


@dataclass(frozen=True)
class Specification:
    """What elements of these classes must carry."""

    name: str
    entities: tuple[str, ...]
    predefined: str
    why: str
    asked: tuple[Asked, ...]


NAME = Asked("Name", "so that questions and results can name it")
TYPE = Asked("PredefinedType", "tells what the element is for")
MATERIAL = Asked("Material", "strength class: the stiffness per metre follows from it")


def _quantities(kind: str, *rows: tuple[str, str, str]) -> tuple[Asked, ...]:
    return tuple(Asked(what, why, f"Qto_{kind}BaseQuantities", measure) for what, measure, why in rows)


LENGTH, AREA = "IFCLENGTHMEASURE", "IFCAREAMEASURE"
PILE_SIZES = _quantities(
    "Pile",
    ("Length", LENGTH, "toe level = head level less length"),
    ("CrossSectionArea", AREA, "diameter, or the size of a post"),
)
WALL_SIZES = _quantities(
    "Wall", ("Width", LENGTH, "thickness of the wall"), ("Height", LENGTH, "toe level = top level less height")
)
BAR_SIZES = _quantities(
    "Member", ("Length", LENGTH, "length from wall to wall"), ("CrossSectionArea", AREA, "axial stiffness")
)
BEAM_SIZES = _quantities("Beam", ("CrossSectionArea", AREA, "stiffness along the wall"))
ANCHOR_SIZES = (
    Asked("CrossSectionArea", "axial stiffness of the tendon"),
    Asked("TensionForce", "lock-off load"),
    Asked("Free length", "stiffness of the anchor", ANY_SET),
    Asked("Bond length", "where the force goes into the ground", ANY_SET),
    Asked("Bond diameter", "contact area of the grout", ANY_SET),
)


def write_ids(proposal: Proposal, site: Site, folder: Path) -> str:
    """Write `requirements.ids`.

    Args:
        proposal: What was found tells which kinds of element the model must carry.
        site: For title and date.
        folder: Where to write.

    Returns:
        Name of the file.
    """
    root = ET.Element(
        "ids",
        {
            "xmlns": NAMESPACE,
            "xmlns:xs": XSD,
            "xmlns:xsi": INSTANCE,
            "xsi:schemaLocation": f"{NAMESPACE} {NAMESPACE}/1.0/ids.xsd",
        },
    )
    info = ET.SubElement(root, "info")
    about = f"Data a model must carry for sections of the excavation {site.name}".strip()
    for name, words in (
        ("title", about),
        ("description", f"Sizes, levels and materials of what holds the ground. {NOTICE}"),
        ("date", Stamp.of(site).day.isoformat()),
        ("purpose", "Sections for analysis of the excavation"),
    ):
        ET.SubElement(info, name).text = clean(words)
    listed = ET.SubElement(root, "specifications")
    for number, one in enumerate(find_specifications(proposal), start=1):
        _specify(listed, one, number)
    ET.indent(root)
    text = ET.tostring(root, encoding="unicode", xml_declaration=False)
    declaration = '<?xml version="1.0" encoding="UTF-8"?>\n'
    (folder / "requirements.ids").write_text(f"{declaration}{text}\n", encoding="utf-8", newline="\n")
    return "requirements.ids"


def find_specifications(proposal: Proposal) -> list[Specification]:
    """What this job needs, by the walls and members found; walls alone where nothing was found."""
    kinds = sorted({run.wall.kind for pit in proposal.pits for run in pit.runs} - {"none"})
    roles = {str(member.role) for pit in proposal.pits for member in pit.members}
    rows = [*_walls(kinds), *_supports(roles)]
    if "bearing_pile" in roles and not PILES & set(kinds):
        rows.append(Specification("Bearing piles", ("IFCPILE",), "", "piles below the floor", _all(*PILE_SIZES)))
    if "slab" in roles:
        rows.append(
            Specification(
                "Slabs", ("IFCSLAB",), "", "slabs that prop the wall or close the dig", (NAME, TYPE, MATERIAL)
            )
        )
    return rows


def _walls(kinds: Sequence[str]) -> list[Specification]:
    piles = [kind for kind in kinds if kind in PILES]
    panels = [kind for kind in kinds if kind not in PILES]
    rows = []
    if piles:
        rows.append(Specification("Retaining wall of piles", ("IFCPILE",), "", _named(piles), _all(*PILE_SIZES)))
    if panels or not kinds:
        asked = (NAME, MATERIAL, *WALL_SIZES)
        rows.append(Specification("Retaining wall", WALL_CLASSES, "RETAININGWALL", _named(panels), asked))
    return rows


def _named(kinds: Sequence[str]) -> str:
    found = ", ".join(KIND_OF_WALL.get(kind, kind) for kind in kinds)
    return f"found here: {found}" if found else "no wall was found yet"


def _supports(roles: set[str]) -> list[Specification]:
    rows = []
    props = sorted(PROPS & roles)
    if props:
        words = ", ".join(ROLE_NAMES[role] for role in props)
        why = f"found here: {words}; the level is that of the axis as modelled"
        rows.append(Specification("Struts and rakers", ("IFCMEMBER",), "STRUT", why, (NAME, MATERIAL, *BAR_SIZES)))
    if "anchor" in roles:
        why = "ground anchors, modelled from the head to the far end of the bond length"
        rows.append(Specification("Ground anchors", ("IFCTENDON",), "", why, (NAME, *ANCHOR_SIZES)))
    if "waler" in roles:
        why = "walers and ring beams, modelled at their level"
        rows.append(Specification("Walers", ("IFCBEAM",), "", why, (NAME, MATERIAL, *BEAM_SIZES)))
    return rows


def _all(*sizes: Asked) -> tuple[Asked, ...]:
    return (NAME, TYPE, MATERIAL, *sizes)


def _specify(listed: ET.Element, one: Specification, number: int) -> None:
    marks = {"name": one.name, "ifcVersion": VERSIONS, "identifier": f"R{number}", "description": one.why}
    specification = ET.SubElement(listed, "specification", marks)
    applies = ET.SubElement(specification, "applicability", {"minOccurs": "1", "maxOccurs": "unbounded"})
    entity = ET.SubElement(applies, "entity")
    _value(entity, "name", *one.entities)
    if one.predefined:
        _value(entity, "predefinedType", one.predefined)
    required = ET.SubElement(specification, "requirements")
    for kind in ("attribute", "property", "material"):
        for asked in one.asked:
            if _kind(asked) == kind:
                _require(required, kind, asked)


def _kind(asked: Asked) -> str:
    return "property" if asked.of_set else "material" if asked is MATERIAL else "attribute"


def _require(required: ET.Element, kind: str, asked: Asked) -> None:
    marks = {"dataType": asked.measure} if asked.measure else {}
    element = ET.SubElement(required, kind, {**marks, "cardinality": "required", "instructions": asked.why})
    if kind == "attribute":
        _value(element, "name", asked.what)
    elif kind == "property":
        _value(element, "propertySet", asked.of_set)
        _value(element, "baseName", asked.what)


def _value(parent: ET.Element, name: str, *words: str) -> None:
    """One value, a choice of several, or the pattern for any."""
    element = ET.SubElement(parent, name)
    if words == (ANY_SET,) or len(words) > 1:
        kind = "xs:pattern" if words == (ANY_SET,) else "xs:enumeration"
        restriction = ET.SubElement(element, "xs:restriction", {"base": "xs:string"})
        for word in words:
            ET.SubElement(restriction, kind, {"value": word})
    else:
        ET.SubElement(element, "simpleValue").text = words[0]
