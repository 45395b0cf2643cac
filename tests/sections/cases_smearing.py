"""What each case of check_values.toml asks of the smearing functions: members, walls, posts, anchors, rings."""

from __future__ import annotations

from math import cos, pi, radians, sin

import numpy as np

from sections.member import RealMember
from sections.smearing import anchors, bearing_row, chain, king_posts, opposite_wall, overdig, ring
from sections.smearing import member as smear
from sections.smearing import wall as smear_wall
from sections.smearing.hand_over_ring import load_per_radian, ring_line_load, ring_over_footing
from sections.smearing.ring_supports import smear_diametral_struts, smear_ring_anchors, smear_ring_beam
from sections.smearing.ring_wall import ring_spacing, smear_ring_pile_wall
from sections.smearing.support_rows import smear_corner_strut, smear_support
from sections.smearing.thrust_line import find_thrust_line
from sections.smearing.wall_rows import post, round_pile, smear_continuous_wall, smear_pile_wall, smear_sheet_wall


def real_member(skew, inclination, spacing, **more):
    return RealMember(skew=skew, inclination=inclination, spacing=spacing, **more)


def back(rows, quantity, unit=None):
    return next(row for row in rows if row.quantity == quantity and unit in (None, row.from_unit))


def member_smeared(EA, EI, skew, inclination, spacing):
    made = smear_support(real_member(skew, inclination, spacing, EA_kN=EA, EI_kNm2=EI), "strut")
    direction = smear.Direction(skew=skew, inclination=inclination)
    section = made.section
    factor = back(made.back, "N").factor
    assert back(made.back, "M").factor == factor
    return [
        direction.cos_beta, direction.apparent_inclination, section.EA_kN_per_m, section.EI_kNm2_per_m, factor
    ]  # fmt: skip


def in_plane_stiffness(EA, length, skew, inclination, spacing):
    return smear.in_plane_stiffness(EA, length, spacing, smear.Direction(skew=skew, inclination=inclination))


def stiffness_times_length(EA, skew, inclination, spacing):
    return 7.0 * in_plane_stiffness(EA, 7.0, skew, inclination, spacing)


def preload_per_metre(preload, skew, inclination, spacing):
    made = smear_support(real_member(skew, inclination, spacing, preload_kN=preload), "anchor")
    return made.section.preload_kN_per_m


def member_force_and_thrust(N, skew, inclination, spacing):
    row = back(smear_support(real_member(skew, inclination, spacing), "strut").back, "N")
    return [N * row.factor, N * row.also[0].factor]


def bar_in_space(EA, length, skew, inclination, spacing, ux, uz):
    """Bar theory in space, written out with vectors, beside what the section and its way back give."""
    psi, delta = radians(skew), radians(inclination)
    d = np.array([cos(delta) * cos(psi), cos(delta) * sin(psi), sin(delta)])
    N_space = EA / length * float(d @ np.array([ux, 0.0, uz]))
    made = smear_support(real_member(skew, inclination, spacing, EA_kN=EA, length=length), "strut")
    direction = smear.Direction(skew=skew, inclination=inclination)
    alpha = radians(direction.apparent_inclination)
    drawn = smear.projected_length(length, direction)
    N_section = made.section.EA_kN_per_m / drawn * (ux * cos(alpha) + uz * sin(alpha))
    row = back(made.back, "N")
    vertical, horizontal = (next(a.factor for a in row.also if word in a.gives) for word in ("vertical", "horizontal"))
    assert abs(N_section * horizontal - N_space * d[0]) < 1e-9 * abs(N_space)
    assert abs(N_section * vertical - N_space * d[2]) < 1e-9 * abs(N_space)
    return [N_space, N_section, N_section * row.factor, N_section * horizontal, N_section * vertical]


def warmed_member(EA, alpha, warming, skew, inclination, spacing):
    link = chain.support_chain(EA, 12.0)
    strain = chain.free_strain(alpha, warming)
    made = smear_support(real_member(skew, inclination, spacing, EA_kN=EA, free_strain=strain), "strut")
    N = made.section.EA_kN_per_m * made.section.free_strain
    return [chain.restraint_force(link, alpha, warming), made.section.free_strain, N, N * back(made.back, "N").factor]


def corner_strut(EA, length, spacing, skew, movement):
    made = smear_corner_strut(real_member(skew, 0.0, spacing, EA_kN=EA, length=length))
    L_eff, row = made.real.L_eff, back(made.back, "N")
    direction = smear.Direction(skew=skew)
    k = smear.corner_stiffness(EA, length, skew, spacing)
    drawn = made.section.EA_kN_per_m / smear.projected_length(L_eff, direction)
    assert abs(drawn / k - 1) < 1e-12
    N = smear.corner_force(EA, length, skew, movement)
    assert abs(k * movement * row.factor / N - 1) < 1e-12
    thrust = smear.thrust_to_shear_stop((N,), skew)
    assert abs(row.also[0].factor * N / row.factor / thrust - 1) < 1e-12
    return [L_eff, k, smear.in_plane_stiffness(EA, length, spacing, direction), N, thrust]


def wall_values(made, E):
    real, section = made.real, made.section
    s = real.spacing
    I = real.EI_kNm2 / E  # noqa: E741
    return [
        real.EA_kN / E / s, I / s, section.EA_kN_per_m, section.EI_kNm2_per_m, section.thickness, section.E_kPa,
        smear_wall.thickness_keeping_EI(I, s), section.weight_kN_per_m2,
    ]  # fmt: skip


def pile_wall(diameter, spacing, E, unit_weight):
    pile = round_pile(diameter=diameter, E=E, unit_weight=unit_weight, centres=spacing, which="all")
    return wall_values(smear_pile_wall(pile), E)


def secant_males(diameter, centres, E, unit_weight):
    pile = round_pile(diameter=diameter, E=E, unit_weight=unit_weight, centres=centres, which="male")
    return wall_values(smear_pile_wall(pile), E)


def pile_wall_EI(diameter, spacing, E):
    A, I = smear_wall.circle_area(diameter), smear_wall.circle_inertia(diameter)  # noqa: E741
    return smear_wall.per_metre(E, A, I, spacing)[1]


def equivalent_modulus_share(diameter, spacing):
    A, I = smear_wall.circle_area(diameter), smear_wall.circle_inertia(diameter)  # noqa: E741
    return smear_wall.equivalent_wall(*smear_wall.per_metre(1.0, A, I, spacing))[1]


def continuous_wall(E, thickness, nu):
    plain = smear_continuous_wall(E=E, thickness=thickness)
    wide = smear_continuous_wall(E=E, thickness=thickness, nu=nu)
    assert smear_wall.continuous_per_metre(E, thickness, nu)[1] == wide.section.EI_kNm2_per_m
    return [plain.section.EA_kN_per_m, plain.section.EI_kNm2_per_m, wide.section.EI_kNm2_per_m]


def sheet_wall(E, A, I):  # noqa: E741
    section = smear_sheet_wall(E=E, A=A, I=I).section
    assert smear_wall.sheet_per_metre(E, A, I) == (section.EA_kN_per_m, section.EI_kNm2_per_m)
    return [section.EA_kN_per_m, section.EI_kNm2_per_m, section.thickness, section.E_kPa]


def overlap(diameter, centres, depths, set_out, verticality=None):
    return list(smear_wall.overlap(diameter, centres, np.array(depths), set_out=set_out, verticality=verticality))


def posts_EI(E, A, I, spacing):  # noqa: E741
    made = smear_pile_wall(post(E=E, A=A, I=I, unit_weight=77.0, spacing=spacing), name="post")
    return made.section.EI_kNm2_per_m


def passive_coefficients(phi, delta):
    plain, rough = king_posts.coulomb_passive(phi, 0.0), king_posts.coulomb_passive(phi, delta)
    return [plain, rough, plain / rough]


def passive_share(width, spacings, left):
    shares = [king_posts.passive_share(width, s) for s in spacings]
    return [*shares, *(left / share for share in shares)]


def clay_resistance(su, width, spacing, depths, ignored):
    return [king_posts.clay_resistance(z, su, width, spacing, ignored=ignored) for z in depths]


def constant_clay_resistance(su, width, spacing, depths, adhesion):
    return [bearing_row.lateral_limit(su, width, spacing, adhesion) * z for z in depths]


def anchor_free_length(strands, strand_area, E, spacing, free_length):
    EA = anchors.tendon_rigidity(strands, strand_area, E)
    real = real_member(0.0, 0.0, spacing, EA_kN=EA, length=free_length)
    per_metre = anchors.smear_free_length(real).section.EA_kN_per_m
    return [EA, per_metre, smear.in_plane_stiffness(EA, free_length, spacing, smear.Direction())]


def bond_length(diameter, length, tau, spacing):
    sheet = anchors.bond_sheet(diameter, length, tau, spacing)
    real = real_member(0.0, 0.0, spacing, bond_diameter=diameter, limit_kN=sheet.pull_out, contact_kPa=tau)
    section = anchors.smear_bond_length(real).section
    assert abs(section.contact_kPa / sheet.face_limit - 1) < 1e-12
    return [sheet.pull_out, section.limit_kN_per_m, sheet.face_limit, sheet.area_ratio]


def thick_ring(E, nu, a, b, p):
    free = ring.thick_ring_movement(p, E, nu, a, b)
    return [free, ring.thick_ring_movement(p, E, nu, a, b, plane_strain=True), *ring.thick_ring_hoop(p, a, b)]


def diametral_struts(EA, R, counts, nu, E):
    made = [smear_diametral_struts(RealMember(EA_kN=EA), radius=R, diameters=n, nu=nu).section for n in counts]
    disc = ring.equivalent_disc(EA, R, 2, nu)
    assert abs(made[1].disc_Et_kN_per_m / disc - 1) < 1e-12
    return [*(section.radial_stiffness_kN_per_m_per_rad / R for section in made), disc, disc / E]


def ring_beam(EA, R):
    per_metre, per_radian = ring.ring_beam_stiffness(EA, R)
    section = smear_ring_beam(RealMember(EA_kN=EA), radius=R).section
    assert abs(section.radial_stiffness_kN_per_m_per_rad / per_radian - 1) < 1e-12
    return [per_metre, per_radian]


def ring_of_anchors(EA, R, count, larger):
    made = smear_ring_anchors(real_member(0.0, 0.0, None, EA_kN=EA), radius=R, count=count)
    EA_rad = made.section.EA_kN_per_rad
    return [ring_spacing(R, count), EA_rad, EA_rad / R, EA_rad / larger]


def per_radian(value, count, R):
    return smear_ring_anchors(real_member(0.0, 0.0, None, EA_kN=value), radius=R, count=count).section.EA_kN_per_rad


def polygon(sides, R, p):
    found = ring.find_polygon(sides, R, p)
    return [
        found.sagitta, found.side, found.N, found.M_corner, found.M_mid, found.eccentricity, found.quotient,
        found.equal_area_radius,
    ]  # fmt: skip


def polygon_short(sides, R, p):
    found = ring.find_polygon(sides, R, p)
    return [found.sagitta, found.N, found.M_corner, found.eccentricity, found.quotient]


def out_of_round(EI, R, p, out_of_round):
    return [ring.buckling_pressure(EI, R), ring.shape_moment(p, R, out_of_round, EI), p * R * out_of_round]


def strut_on_a_ring(EI, R, ground):
    at = [ring.strut_moment(1.0, R, np.array([0.0, pi / 2]), EI, ground=k) / R for k in ground]
    return [*(float(M[0]) for M in at), *(float(M[1]) for M in at)]


def thrust(EI, R, p, out_of_round, dp, t, joint_step=0.0, ground=0.0):
    shape, N = ring.shape_moment(p, R, out_of_round, EI), ring.hoop_force(p, R)
    uneven = ring.uneven_moment(dp, R, EI, ground=ground)
    line = find_thrust_line(N=N, M_shape=shape, M_uneven=uneven, thickness=t, joint_step=joint_step)
    return shape, uneven, N, line


def thrust_line(**given):
    line = thrust(**given)[3]
    return [line.eccentricity, line.word]


def thrust_line_in_ground(E_ground, nu, **given):
    k = ring.ground_spring(E_ground, nu, given["R"])
    _, uneven, _, line = thrust(ground=k, **given)
    free = ring.uneven_moment(given["dp"], given["R"], given["EI"])
    return [k, uneven / free, uneven, line.eccentricity, line.word]


def thrust_line_in_full(**given):
    shape, uneven, N, line = thrust(**given)
    return [ring.buckling_pressure(given["EI"], given["R"]), shape, uneven, N, line.eccentricity, line.word]


def thrust_line_with_steps(**given):
    line = thrust(**given)[3]
    return [line.joint_limit, line.word]


def false_hoop(diameter, centres, E, R):
    pile = round_pile(diameter=diameter, E=E, unit_weight=None, centres=centres, which="all")
    section = smear_ring_pile_wall(pile, radius=R).section
    return [section.EA_vertical_kN_per_m / R**2, section.EA_hoop_kN_per_m]


def support_chain(EA, L_eff, k_packing, k_waler, warming, alpha, gap):
    link = chain.support_chain(EA, L_eff, k_packing=k_packing, k_waler=k_waler)
    N = chain.restraint_force(link, alpha, warming)
    lost = chain.force_lost_to_gap(link.k_effective, gap)
    return [EA / L_eff, link.k_effective, link.phi, N, EA * alpha * warming, lost]


def raker_foot(EA, length, inclination, radius, G, nu):
    k_v, k_h = chain.footing_stiffness(radius, G, nu)
    k_end = chain.stiffness_along(k_v, k_h, inclination)
    link = chain.support_chain(EA, length, k_end=k_end)
    return [k_v, k_h, k_end, link.k_effective, link.phi]


CASES = {
    "member smeared": member_smeared,
    "in-plane stiffness": in_plane_stiffness,
    "in-plane stiffness times length": stiffness_times_length,
    "preload per metre": preload_per_metre,
    "member force and thrust": member_force_and_thrust,
    "bar in space against the section": bar_in_space,
    "warmed member": warmed_member,
    "corner strut": corner_strut,
    "pile wall": pile_wall,
    "secant males": secant_males,
    "pile wall EI": pile_wall_EI,
    "equivalent modulus share": equivalent_modulus_share,
    "continuous wall": continuous_wall,
    "sheet wall": sheet_wall,
    "overlap": overlap,
    "plane strain factor": lambda nu: [smear_wall.plane_strain_factor(each) for each in nu],
    "posts EI": posts_EI,
    "passive coefficients": passive_coefficients,
    "least interface share": king_posts.least_interface_share,
    "passive share": passive_share,
    "clay factor": lambda width, depths: list(king_posts.clay_factor(np.array(depths), width)),
    "clay resistance": clay_resistance,
    "constant clay resistance": constant_clay_resistance,
    "shaft factor": bearing_row.shaft_factor,
    "base factor": bearing_row.base_factor,
    "flow-round factor": lambda adhesion: [bearing_row.flow_round_factor(a) for a in adhesion],
    "anchor free length": anchor_free_length,
    "bond length": bond_length,
    "largest lock-off": anchors.largest_lock_off,
    "ring": lambda E, t, R, p: [
        ring.ring_stiffness(E, t, R),
        ring.ring_movement(p, E, t, R),
        ring.hoop_force(p, R),
    ],
    "thick ring": thick_ring,
    "thick ring inside pressure": lambda p, a, b: list(ring.thick_ring_hoop_inside(p, a, b)),
    "disc": lambda E, t, R, nu, p: [ring.disc_stiffness(E, t, R, nu), p / ring.disc_stiffness(E, t, R, nu) * t],
    "diametral struts": diametral_struts,
    "ring beam": ring_beam,
    "footing as a ring": lambda Q, r, L: [load_per_radian(Q), ring_line_load(Q, r), ring_over_footing(r, L)],
    "ring of anchors": ring_of_anchors,
    "per radian": per_radian,
    "polygon": polygon,
    "polygon short": polygon_short,
    "out of round": out_of_round,
    "uneven pressure": lambda EI, R, dp: [ring.uneven_moment(dp, R, EI), ring.uneven_movement(dp, R, EI)],
    "strut on a ring": strut_on_a_ring,
    "thrust line": thrust_line,
    "thrust line in ground": thrust_line_in_ground,
    "thrust line in full": thrust_line_in_full,
    "thrust line with steps": thrust_line_with_steps,
    "false hoop": false_hoop,
    "pair of struts": lambda offsets: [ring.pair_factor(c * 7.0, 7.0) for c in offsets],
    "support chain": support_chain,
    "packing": chain.packing_stiffness,
    "raker foot": raker_foot,
    "opposite wall share": lambda skews: [opposite_wall.support_share(psi) for psi in skews],
    "opposite wall force": lambda skews: [opposite_wall.force_ratio(psi) for psi in skews],
    "opposite wall thrust": lambda N, skews: [opposite_wall.thrust_along(N, psi) for psi in skews],
    "over-dig": lambda height: [overdig.overdig_bs8002(height), overdig.overdig_en1997(height)],
}
