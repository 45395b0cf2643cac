"""IFC: the only folder that imports ifcopenshell."""
