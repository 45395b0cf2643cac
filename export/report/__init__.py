"""Report: the drawing sheet an engineer signs and a checker reads."""
