"""Screening: the folded wall on spreading ground and its two-dimensional twin."""
