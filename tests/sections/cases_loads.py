"""What each case of check_values.toml asks of the load, footing and material functions."""

from __future__ import annotations

import numpy as np
from scipy.integrate import quad

from ingest import concrete, steel
from sections.smearing import footing, load_repeats, loads, yielding_wall


def point_load_resultants(Q, x, H):
    return [Q * loads.point_resultant(x, H), loads.line_resultant(x, H), loads.width_by_resultant(x, H)]


def widths_at_depth(x, depths, deep):
    return [*(loads.width_at_depth(x, z) for z in depths), loads.width_by_resultant(x, deep)]


def point_and_line_stress(Q, x, z, width):
    return [float(loads.point_stress(Q, x, 0.0, z)), float(loads.line_stress(Q / width, x, z))]


def integral_along_the_wall(Q, x, z):
    whole = quad(lambda y: float(loads.point_stress(Q, x, y, z)), -np.inf, np.inf, epsrel=1e-10)[0]
    return [whole, float(loads.line_stress(Q, x, z))]


def strip_stress(p, x1, x2, z, halves):
    parts = [float(loads.finite_strip_stress(p, x1, x2, b, b, z)) for b in halves]
    return [float(loads.strip_stress(p, x1, x2, z)), *parts]


def strip_resultant(p, x1, x2, H, halves):
    endless = quad(lambda z: float(loads.strip_stress(p, x1, x2, z)), 0.0, H, epsrel=1e-10)[0]
    return [endless, *(loads.area_ratios(x1, x2, H, b, b)[0] for b in halves)]


def perpendicular_line(q, x1, x2, H):
    W = loads.perpendicular_widths(x1, x2, H)[0]
    return [W, q / W]


def yielding(load, x, z, H):
    return [float(yielding_wall.line_pressure(load, x, H, z)), float(yielding_wall.point_pressure(load, x, H, z))]


def own_width(pairs, H):
    exact = [loads.own_width(x, b, H) for x, b in pairs]
    closed = [loads.own_width_closed(x, b, H) for x, b in pairs]
    return [*(W for W, _ in exact), *(W for _, W in exact), *closed]


def row_peak(x, H, over_x):
    return [load_repeats.peak_by_resultant(x, H, x * each) for each in over_x]


def width_by_moment(H, xs):
    widths = [loads.width_by_moment(x, H) for x in xs]
    return [*(W / loads.width_by_resultant(x, H) for W, x in zip(widths, xs, strict=True)), widths[1]]


def bearing_factors(phi):
    found = [footing.bearing_factors(each) for each in phi]
    return [*(f.Nq for f in found), *(f.Nc for f in found), *(f.Ng for f in found)]


def footing_on_the_wall(places, B, L):
    ratios = [loads.area_ratios(x0, x0 + B, H, L / 2, L / 2) for x0, H in places]
    return [*(r for r, _ in ratios), *(m for _, m in ratios)]


def tube(designation):
    shape = steel.find_shape(designation)
    I, A = shape.I_major, shape.A  # noqa: E741
    return [A * 1e4, I * 1e8, 2 * I / shape.depth * 1e6, (I / A) ** 0.5 * 100, A * steel.DENSITY]


def rolled_section(designation):
    shape = steel.find_shape(designation)
    W = 2 * shape.I_major / shape.depth
    return [shape.A * 1e4, shape.I_major * 1e8, shape.I_minor * 1e8, W * 1e6, shape.A * steel.DENSITY]


def hollow_section(designation):
    shape = steel.find_shape(designation)
    return [shape.A * 1e4, shape.I_major * 1e8]


def constants():
    return [
        concrete.ALPHA_T, concrete.NU_UNCRACKED, concrete.NU_CRACKED, concrete.UNIT_WEIGHT_PLAIN,
        concrete.UNIT_WEIGHT_REINFORCED, steel.E_STEEL, steel.G_STEEL, steel.NU_STEEL, steel.ALPHA_T, steel.DENSITY,
        steel.E_STRAND, steel.E_PRESTRESSING_BAR,
    ]  # fmt: skip


def classes(fck):
    return [concrete.find_concrete(f"C{each}") for each in fck]


def aggregates_of(fck, aggregates):
    plain = concrete.elastic_modulus(fck)
    return [concrete.elastic_modulus(fck, each) / plain for each in aggregates]


CASES = {
    "point load resultants": point_load_resultants,
    "width over distance": lambda ratios: [loads.width_by_resultant(m, 1.0) / m for m in ratios],
    "widths at depth": widths_at_depth,
    "point and line stress": point_and_line_stress,
    "integral along the wall": integral_along_the_wall,
    "finite length factor": lambda over_r: [float(loads.finite_length_factor(2.0, 2 * b, 2 * b)) for b in over_r],
    "strip stress": strip_stress,
    "strip resultant": strip_resultant,
    "perpendicular line": perpendicular_line,
    "yielding wall": yielding,
    "own width deep": lambda pairs, deep: [loads.own_width(x, b, deep)[0] for x, b in pairs],
    "own width": own_width,
    "trade width share": lambda pairs, H: [loads.own_width(x, b, H)[1] / (b + 2 * x) for x, b in pairs],
    "row peak by resultant": row_peak,
    "row peak at the surface": lambda x, over_x: [load_repeats.peak_near_surface(x, x * each) for each in over_x],
    "width by moment": width_by_moment,
    "decay along the wall": loads.decay_along_wall,
    "corner influence": lambda pairs: [footing.corner_influence(m, n) for m, n in pairs],
    "strip centre": lambda depths: [footing.strip_influence(1.0, z) for z in depths],
    "footing over strip": lambda L, depths: [footing.stress_ratio(1.0, L, z) for z in depths],
    "bearing factors": bearing_factors,
    "shape factors": lambda phi, B, L: [
        footing.shape_factors(phi, B, L).sq,
        footing.shape_factors(phi, B, L).sc,
    ],
    "footing on the wall": footing_on_the_wall,
    "vertical stress ratio": lambda B, L, depths: [footing.stress_ratio(B, L, z) for z in depths],
    "tube": tube,
    "rolled section": rolled_section,
    "hollow section": hollow_section,
    "constants": constants,
    "concrete fcm": lambda fck: [c.fcm for c in classes(fck)],
    "concrete Ecm": lambda fck: [c.Ecm / 1e6 for c in classes(fck)],
    "concrete Ecm table": lambda fck: [c.Ecm_table / 1e6 for c in classes(fck)],
    "concrete fctm": lambda fck: [c.fctm for c in classes(fck)],
    "concrete aggregate": aggregates_of,
}
