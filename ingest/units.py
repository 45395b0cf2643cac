"""Declared unit -> metres."""

from __future__ import annotations

import difflib

INCH = 0.0254
FOOT = 0.3048
US_SURVEY_FOOT = 1200.0 / 3937.0

METRES: dict[str, float] = {
    "mm": 1e-3,
    "cm": 1e-2,
    "dm": 1e-1,
    "m": 1.0,
    "dam": 1e1,
    "hm": 1e2,
    "km": 1e3,
    "um": 1e-6,
    "nm": 1e-9,
    "inch": INCH,
    "foot": FOOT,
    "yard": 0.9144,
    "mile": 1609.344,
    "us_survey_inch": US_SURVEY_FOOT / 12,
    "us_survey_foot": US_SURVEY_FOOT,
    "us_survey_yard": 3 * US_SURVEY_FOOT,
    "us_survey_mile": 5280 * US_SURVEY_FOOT,
}
"""One unit of length in metres.

The international yard is 0.9144 m exactly, so the foot 0.3048 m and the inch 25.4 mm (international yard and pound
agreement of 1959). The US survey foot is 1200/3937 m exactly (Mendenhall order of 1893). SI prefixes: SI brochure.
"""

_OTHER_NAMES: dict[str, str] = {
    "millimetre": "mm",
    "centimetre": "cm",
    "decimetre": "dm",
    "metre": "m",
    "decametre": "dam",
    "hectometre": "hm",
    "kilometre": "km",
    "micrometre": "um",
    "micron": "um",
    "nanometre": "nm",
    "in": "inch",
    "inches": "inch",
    '"': "inch",
    "ft": "foot",
    "feet": "foot",
    "'": "foot",
    "yd": "yard",
    "mi": "mile",
    "us_survey_feet": "us_survey_foot",
    "us_foot": "us_survey_foot",
    "us_ft": "us_survey_foot",
    "ftus": "us_survey_foot",
    "survey_foot": "us_survey_foot",
}


def unit_name(name: str) -> str:
    """Bring the name of a length unit to the one form used in this project.

    Args:
        name: As a file or a brief has it; case, plural and the spelling -meter do not matter.

    Returns:
        A key of `METRES`.

    Raises:
        ValueError: For a unit that is not known; the message names the nearest known one.

    Example:
        >>> unit_name("Millimeters"), unit_name("US survey feet")
        ('mm', 'us_survey_foot')
    """
    plain = name.strip().lower().replace(" ", "_").replace("-", "_").replace("meter", "metre")
    for form in (plain, plain.removesuffix("s")):
        if form in METRES:
            return form
        if form in _OTHER_NAMES:
            return _OTHER_NAMES[form]
    near = difflib.get_close_matches(plain, [*METRES, *_OTHER_NAMES], n=1, cutoff=0.5)
    hint = f"; the nearest known unit is {near[0]}" if near else f"; known units are {', '.join(METRES)}"
    raise ValueError(f"unknown unit of length {name!r}{hint}")


def metres_per(name: str) -> float:
    """Length of one unit in metres.

    Args:
        name: Name of the unit, see `unit_name`.

    Returns:
        Metres in one unit.

    Raises:
        ValueError: For a unit that is not known.

    Example:
        >>> metres_per("ft")
        0.3048
    """
    return METRES[unit_name(name)]
