"""Export: what leaves the office."""

ROOM = "cutworthy"
