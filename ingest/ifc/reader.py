"""Read an IFC file: every product becomes a part, or is counted as context or ignored with a reason."""

from __future__ import annotations

import gc
from collections import Counter
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray
from shapely.errors import GEOSException

from ingest.ifc.doubts import Doubts
from ingest.ifc.elements import Element, NoPart, SectionTable
from ingest.ifc.georeference import read_georeference
from ingest.ifc.ground import read_borehole
from ingest.ifc.inventory import Inventory, Product
from ingest.ifc.makers import make_parts
from ingest.ifc.opening import Opened, open_model
from ingest.ifc.proxies import read_only
from ingest.ifc.representations import NO_GEOMETRY
from ingest.ifc.unreadable import UNREADABLE
from ingest.model import Borehole
from ingest.parts import FileParts, Part

Floats: TypeAlias = NDArray[np.float64]


def read_ifc(path: Path, *, length_unit: str | None = None) -> FileParts:
    """Read an IFC file (2X3, 4, 4X3; STEP text or IFCZIP).

    Args:
        path: The file.
        length_unit: The engineer's word for the length unit, which stands above the file's.

    Returns:
        Parts in metres: in world coordinates where the file has a map conversion, else in the model's own. Entities
        are the products without site, building and storey; each is a part, or counted in `context` or `ignored`.
        Properties are tags, numbers in m, kN, kPa and degrees where their measure is known. Structural actions have
        the tags `load_kind`, `load_unit` and, positive downwards, `load_value`.

    Raises:
        InputError: If the file cannot be read, or `length_unit` is unknown.
    """
    # numbers that run over are found and named at the end
    with collector_paused(), read_only(), np.errstate(all="ignore"):
        opened = open_model(path)
        first = _Reading(opened, path.name, length_unit)
        read = first.result()
        if first.likelier_unit is None:
            return read
        return _Reading(opened, path.name, None, guess=first.likelier_unit).result()


@contextmanager
def collector_paused() -> Iterator[None]:
    """Stop the cyclic garbage collector while millions of small objects are made (measured: an eighth of the time)."""
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            gc.enable()


class _Reading:
    """One run over one file."""

    def __init__(self, opened: Opened, file: str, length_unit: str | None, guess: str | None = None) -> None:
        self.file, self.sha256 = file, opened.sha256
        self.model = opened.model
        self.losses = list(opened.losses)
        self.inventory = Inventory(self.model, self.file, length_unit, guess)
        self.likelier_unit: str | None = None
        """Set when the file declares no length unit and metres make no likely site of it."""
        self.doubts = Doubts(self.file)
        self.context: Counter[str] = Counter()
        self.ignored: Counter[str] = Counter()
        self.parts: list[Part] = []
        self.setting: list[Part] = []
        self.boreholes: list[Borehole] = []
        self.sections = SectionTable()

    def result(self) -> FileParts:
        """Everything the file gave, once all of it is placed and accounted for."""
        inventory = self.inventory
        georeference = read_georeference(self.model, inventory.units)
        for product in inventory.products:
            if product.group != "context":
                self._describe(product)
        self._place(georeference.matrix)
        for product in inventory.products:
            self._make_parts(product)
        self._drop_endless()
        self.likelier_unit = self.doubts.about_units(inventory.units, self.parts)
        self.doubts.about_georeference(georeference)
        self.doubts.about_damage(inventory.damage(), self.losses)
        self._check_sum()
        units = inventory.units
        return FileParts(
            file=self.file,
            sha256=self.sha256,
            kind="ifc",
            schema_or_version=str(self.model.schema_identifier),
            length_unit=units.name,
            unit_scale=units.length,
            entities=inventory.entities,
            parts=tuple(self.parts),
            boreholes=tuple(self.boreholes),
            context=dict(sorted(self.context.items())),
            ignored=dict(sorted(self.ignored.items())),
            losses=tuple(self.losses),
            crs=georeference.crs,
            findings=self.doubts.findings(),
            assumptions=self.doubts.assumptions(),
            questions=self.doubts.questions(),
            setting=tuple(self.setting),
            place=georeference.place(units.length),
        )

    def _describe(self, product: Product) -> None:
        """Gather what has to be placed; nothing is placed yet."""
        try:
            self.inventory.describe(product)
        except (*UNREADABLE, RecursionError, OverflowError) as error:
            product.reason, product.fault = "attributes cannot be read", str(error)

    def _place(self, matrix: Floats) -> None:
        world, self.unplaced = self.inventory.placements.solve()
        self.world = np.einsum("ij,njk->nik", matrix, world)
        self.inventory.bodies.place(self.world, self.inventory.items)
        self.inventory.items.clear()
        self.inventory.placements.clear()

    def _make_parts(self, product: Product) -> None:
        if product.group == "context":
            self.context[product.reason] += 1
            return
        try:
            if product.part_of:
                self.context[product.part_of] += 1
            else:
                self._make(product)
                if product.rows is not None:
                    self.inventory.bodies.release(product.rows[0], product.rows[3])
        except NoPart as reason:
            self._leave_out(product, str(reason))
        except (*UNREADABLE, OverflowError, ZeroDivisionError, GEOSException, np.linalg.LinAlgError) as error:
            product.fault = product.fault or str(error)
            self._leave_out(product, "geometry cannot be read")

    def _drop_endless(self) -> None:
        """Take out elements with a number that is not finite; a single one would spoil the whole site."""
        endless = {part.source.item for part in find_endless(self.parts)}
        if endless:
            for item in sorted(endless):
                self.doubts.note_damage(item, "a coordinate or size is not finite")
            self.parts = [part for part in self.parts if part.source.item not in endless]
            self.ignored["coordinates are not finite numbers"] += len(endless)
        bad = find_endless(self.setting)
        self.setting = [part for part in self.setting if part not in bad]

    def _leave_out(self, product: Product, reason: str) -> None:
        if product.fault:
            self.doubts.note_damage(product.item, product.fault)
        if product.group == "setting":
            return
        if reason == NO_GEOMETRY and product.reason:
            reason = product.reason
        if product.has_parts and reason == NO_GEOMETRY:
            self.context["assembly of other elements"] += 1
        else:
            self.ignored[reason] += 1

    def _make(self, product: Product) -> None:
        element = self._element(product)
        if product.cls == "IfcBorehole":
            strata = [self._element(part) for part in self.inventory.parts_of(product)]
            self.boreholes.append(read_borehole(element, strata))
            self.context["borehole"] += 1
            return
        made = make_parts(element, self.sections)
        (self.setting if product.group == "setting" else self.parts).extend(made)
        if product.fault:
            self.doubts.note_damage(product.item, f"{product.fault}; read another way")

    def _element(self, product: Product) -> Element:
        if product.rows is None:
            raise NoPart(product.reason or NO_GEOMETRY)
        if self.unplaced[product.placement]:
            self.doubts.note_unplaced(product.item, self.inventory.placements.unread.get(product.placement))
            raise NoPart("placement refers to itself or cannot be read")
        element = self.inventory.element(product)
        first, axes, footprints, end = product.rows
        placed = self.inventory.bodies.take(first, end)
        if end == axes:
            element.bodies = placed
        else:
            split, last = axes - first, footprints - first
            element.bodies, element.axes, element.footprints = placed[:split], placed[split:last], placed[last:]
        if not element.bodies:
            self._stand_in(element, product)
        if product.group in ("setting", "ground"):
            x, y, z = self.world[product.placement][:3, 3].tolist()
            element.origin = (x, y, z)
        elif product.group == "plate":
            self._take_openings(element, product)
        return element

    def _stand_in(self, element: Element, product: Product) -> None:
        """What else can tell of an element without a body: its parts, or the section of its material."""
        if product.has_parts:
            self._take_from_parts(element, product)
        if element.axes:
            element.profile = self.inventory.profile_of(element)

    def _take_openings(self, element: Element, product: Product) -> None:
        for opening in self.inventory.openings_of(product):
            if opening.rows is not None:
                element.openings = (*element.openings, *self.inventory.bodies.take(*opening.rows[:2]))

    def _take_from_parts(self, element: Element, product: Product) -> None:
        for part in self.inventory.parts_of(product):
            if part.rows is not None and part.part_of:
                found = self.inventory.bodies.take(*part.rows[:2])
                element.bodies = (*element.bodies, *found)
                element.of_parts += bool(found)

    def _check_sum(self) -> None:
        items = {part.source.item for part in self.parts}
        total = len(items) + sum(self.context.values()) + sum(self.ignored.values())
        if total != self.inventory.entities:
            raise RuntimeError(f"{total} products accounted for, {self.inventory.entities} are in the file")


def find_endless(parts: list[Part]) -> list[Part]:
    """Parts with a coordinate, level or size that is not a finite number."""
    sums = [sum(x + y + z for x, y, z in part.points) + sum(s for s in _sizes(part) if s is not None) for part in parts]
    bad = np.flatnonzero(~np.isfinite(np.array(sums, float)))
    return [parts[i] for i in bad]


def _sizes(part: Part) -> tuple[float | None, ...]:
    section = part.section
    own = (part.z_top, part.z_bottom, part.radius, part.thickness)
    return own if section is None else (*own, section.A, section.I, section.width, section.depth, section.diameter)
