"""Verdicts: bands combined, words found, cuts chosen."""
