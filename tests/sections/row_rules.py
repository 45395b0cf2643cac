"""The rules every smeared member keeps, whatever it is."""

from __future__ import annotations

from math import isclose


def assert_rows_hold(made) -> None:
    """Real value x factor = section value, factor = product of its parts, and every preload comes back whole."""
    assert made.smear
    for row in made.smear:
        real, section = getattr(made.real, row.real_key), getattr(made.section, row.section_key)
        assert isclose(real * row.factor, section, rel_tol=1e-12), row
        parts = row.parts
        product = parts.per_spacing * parts.cos_beta_power * parts.phi * parts.EI_factor * parts.plane_strain
        assert isclose(row.factor, product * parts.net_of_soil, rel_tol=1e-12), row
    keys = {row.section_key for row in made.smear}
    for key, unit in (("preload_kN_per_m", "kN/m"), ("preload_kN_per_rad", "kN/rad")):
        if key in keys:
            back = next(row for row in made.back if row.quantity == "N" and row.from_unit == unit)
            assert isclose(getattr(made.section, key) * back.factor, made.real.preload_kN, rel_tol=1e-12)


def back(made, quantity: str, unit: str):
    """The one row that takes a quantity in a unit back."""
    (row,) = (row for row in made.back if row.quantity == quantity and row.from_unit == unit)
    return row


def also(made, quantity: str, unit: str, word: str) -> float:
    """Factor of what else that value gives, by a word of its text."""
    (factor,) = (each.factor for each in back(made, quantity, unit).also if word in each.gives)
    return factor
