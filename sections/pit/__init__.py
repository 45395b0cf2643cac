"""Pit: what lies along the wall, zone by zone and station by station."""
