"""Section: one chosen cut turned into a section definition, and results turned back to members."""
