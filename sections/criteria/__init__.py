"""Criteria: one engineering question a file, all with the same signature."""
