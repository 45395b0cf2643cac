"""Positions of the attributes that are read for every product; by position costs a third of by name.

They are the same in IFC2X3, IFC4 and IFC4X3; a test holds them against the schemas.
"""

from __future__ import annotations

GUID = 0
NAME = 2
DESCRIPTION = 3
OBJECT_TYPE = 4
PLACEMENT = 5
REPRESENTATION = 6
TAG = 7

RELATIVE_TO = 0
RELATIVE_PLACEMENT = 1
LOCATION = 0
AXIS = 1
REF_DIRECTION = 2
REF_DIRECTION_2D = 1
COORDINATES = 0

REPRESENTATIONS = 2
IDENTIFIER = 1
REPRESENTATION_TYPE = 2
ITEMS = 3

SWEPT_AREA = 0
POSITION = 1
EXTRUDED_DIRECTION = 2
DEPTH = 3

PROFILE_NAME = 1
PROFILE_POSITION = 2

MAPPING_SOURCE = 0
MAPPING_TARGET = 1
MAPPING_ORIGIN = 0
MAPPED_REPRESENTATION = 1

RELATED_OBJECTS = 4
RELATING = 5
"""RelatedObjects and the relating object of IfcRelDefinesByProperties, ...ByType, IfcRelAssociates."""
RELATED_ELEMENTS = 4
RELATING_STRUCTURE = 5
WHOLE = 4
PARTS = 5
"""RelatingObject and RelatedObjects of IfcRelAggregates and IfcRelNests."""
