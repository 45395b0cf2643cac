"""Perimeter: from drawn walls and piles to the wall axis, its corners and its runs."""
