"""Export: what leaves the office."""

ROOM = "cutworthy"
VERSION = "0.1.0"
