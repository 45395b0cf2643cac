"""The consumers read the JSON of a section and nothing else: no module of the tool is imported in this folder."""
