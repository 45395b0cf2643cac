"""Sections: where a two-dimensional cut is fair, and what goes into it."""

ROOM = "cutworthy"
