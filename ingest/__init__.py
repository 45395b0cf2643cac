"""Ingest: what was received, in metres, and where each fact came from."""

ROOM = "cutworthy"
