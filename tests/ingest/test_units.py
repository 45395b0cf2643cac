"""Units of length against their definitions."""

from __future__ import annotations

from fractions import Fraction

import pytest

from ingest.units import METRES, metres_per, unit_name

DEFINITIONS = {
    # International yard and pound agreement 1959: 1 yd = 0.9144 m exactly, 3 ft = 1 yd, 12 in = 1 ft, 1760 yd = 1 mi
    "yard": Fraction(9144, 10000),
    "foot": Fraction(9144, 30000),
    "inch": Fraction(9144, 360000),
    "mile": Fraction(9144, 10000) * 1760,
    # Mendenhall order 1893, kept for surveys: 1 m = 39.37 in, so 1 US survey foot = 1200/3937 m
    "us_survey_foot": Fraction(1200, 3937),
    "us_survey_inch": Fraction(100, 3937),
    "us_survey_yard": Fraction(3600, 3937),
    "us_survey_mile": Fraction(1200, 3937) * 5280,
    # SI brochure, 9th edition: prefixes
    "km": Fraction(1000),
    "hm": Fraction(100),
    "dam": Fraction(10),
    "m": Fraction(1),
    "dm": Fraction(1, 10),
    "cm": Fraction(1, 100),
    "mm": Fraction(1, 1000),
    "um": Fraction(1, 10**6),
    "nm": Fraction(1, 10**9),
}


def test_every_unit_has_its_definition() -> None:
    assert set(METRES) == set(DEFINITIONS)
    for name, exact in DEFINITIONS.items():
        assert METRES[name] == pytest.approx(float(exact), rel=1e-15), name


def test_the_two_feet_differ_by_two_parts_in_a_million() -> None:
    # 1200/3937 against 0.3048: over a national grid easting of 500 km that is a metre
    assert 500_000 * (metres_per("US survey foot") / metres_per("foot") - 1) == pytest.approx(1.0, abs=1e-5)


@pytest.mark.parametrize(
    ("written", "known"),
    [
        ("Metre", "m"), ("meters", "m"), ("MILLIMETER", "mm"), ("Centimeters", "cm"),
        ("in", "inch"), ("Feet", "foot"), ("ft", "foot"), ("yd", "yard"), ("micron", "um"),
        ("US survey feet", "us_survey_foot"), ("us-ft", "us_survey_foot"),
    ],
)  # fmt: skip
def test_units_are_known_by_their_usual_names(written: str, known: str) -> None:
    assert unit_name(written) == known


def test_an_unknown_unit_is_refused_with_the_nearest_known_one() -> None:
    with pytest.raises(ValueError, match="nearest known unit is millimetre"):
        unit_name("milimetre")
    with pytest.raises(ValueError, match="known units are mm, cm"):
        unit_name("xyzzyx")
