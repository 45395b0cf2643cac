"""What each IFC class is read as: a wall, a bar, a plate, a load ... or only counted as context."""

from __future__ import annotations

from typing import Any, Literal

Entity = Any
Group = Literal["wall", "bar", "plate", "any", "line", "load", "terrain", "ground", "setting", "context"]

_READ: tuple[tuple[str, Group, str], ...] = (
    ("IfcSite", "setting", ""),
    ("IfcBuildingStorey", "setting", ""),
    ("IfcBuilding", "setting", ""),
    ("IfcEarthworksCut", "plate", ""),
    ("IfcOpeningElement", "context", "opening"),
    ("IfcFeatureElement", "context", "feature of another element"),
    ("IfcSpace", "context", "space"),
    ("IfcSpatialZone", "context", "spatial zone"),
    ("IfcSpatialElement", "context", "spatial structure"),
    ("IfcSpatialStructureElement", "context", "spatial structure"),
    ("IfcStructuralAction", "load", ""),
    ("IfcStructuralReaction", "context", "reaction of an analysis"),
    ("IfcStructuralItem", "context", "analysis model"),
    ("IfcWall", "wall", ""),
    ("IfcPlate", "wall", ""),
    ("IfcSlab", "plate", ""),
    ("IfcFooting", "plate", ""),
    ("IfcPavement", "plate", ""),
    ("IfcCourse", "plate", ""),
    ("IfcEarthworksElement", "plate", ""),
    ("IfcPile", "bar", ""),
    ("IfcDeepFoundation", "bar", ""),
    ("IfcColumn", "bar", ""),
    ("IfcBeam", "bar", ""),
    ("IfcMember", "bar", ""),
    ("IfcTendon", "bar", ""),
    ("IfcTendonAnchor", "bar", ""),
    ("IfcTendonConduit", "bar", ""),
    ("IfcRail", "bar", ""),
    ("IfcFlowSegment", "bar", ""),
    ("IfcGeotechnicalElement", "ground", ""),
    ("IfcGeographicElement", "terrain", ""),
    ("IfcAnnotation", "line", ""),
    ("IfcAlignment", "line", ""),
    ("IfcLinearElement", "context", "piece of an alignment"),
    ("IfcGrid", "context", "grid"),
    ("IfcPositioningElement", "context", "referent of an alignment"),
    ("IfcPort", "context", "port"),
    ("IfcVirtualElement", "context", "virtual element"),
    ("IfcBuildingElementPart", "any", ""),
    ("IfcReinforcingElement", "context", "reinforcement"),
    ("IfcElementComponent", "context", "fitting or fastener"),
    ("IfcFastener", "context", "fitting or fastener"),
    ("IfcEquipmentElement", "context", "services"),
    ("IfcDoor", "context", "door"),
    ("IfcWindow", "context", "window"),
    ("IfcCovering", "context", "covering"),
    ("IfcCurtainWall", "context", "curtain wall"),
    ("IfcRailing", "context", "railing"),
    ("IfcRoof", "context", "roof"),
    ("IfcStair", "context", "stair or ramp"),
    ("IfcStairFlight", "context", "stair or ramp"),
    ("IfcRamp", "context", "stair or ramp"),
    ("IfcRampFlight", "context", "stair or ramp"),
    ("IfcChimney", "context", "chimney"),
    ("IfcShadingDevice", "context", "shading device"),
    ("IfcFurnishingElement", "context", "furniture"),
    ("IfcDistributionElement", "context", "services"),
    ("IfcTransportElement", "context", "transport element"),
    ("IfcTransportationDevice", "context", "transport element"),
)
"""First match wins. Everything else that is a product is read by its shape alone."""

COUNTED_OUT = ("IfcSite", "IfcBuilding", "IfcBuildingStorey")
WHOLE_FROM_PARTS: frozenset[Group] = frozenset({"wall", "bar", "plate"})
"""Groups whose elements may hang their body on the parts they are made of."""


class Classes:
    """Looks up the group of a product by its class, walking up the schema once per class."""

    def __init__(self) -> None:
        self._known: dict[str, tuple[str, Group, str]] = {}

    def of(self, product: Entity) -> tuple[str, Group, str]:
        """Class and group of a product, and the reason when it is context only."""
        name = product.is_a()
        known = self._known.get(name)
        if known is None:
            found: tuple[Group, str] = next(
                ((group, reason) for base, group, reason in _READ if product.is_a(base)), ("any", "")
            )
            known = self._known[name] = (name, *found)
        return known
