"""Bending of round wire: moment, springback of radius and angle, developed length of an arc.

Vocabulary: *loaded* = while the wire is held against its former; *finished* (relaxed) = after it has
sprung back. Radii named centreline run to the wire's centreline, radii named inside to its inner face.

The model. Plane sections stay plane, so the strain at height y above the neutral axis is y/R. Stress is
the lesser of the elastic E*strain and the flow stress K*strain^n, the same in tension and compression,
so the bar keeps an elastic core where the first is the lesser; n = 0 is the ideal plastic metal whose
flow stress K is its yield stress. Unloading is elastic: 1/R_finished = 1/R_loaded - M/(E I), and the
length of the centreline stays. Sources: S. Timoshenko, Strength of Materials II, plastic bending (from
memory) for the elastic core; J. H. Hollomon 1945 for the flow stress; the integrals are our own and are
checked in tests/published against direct integration of the stress over the section.

Where it stops holding: strains are engineering strains, tension and compression are taken as equal, the
section stays round, and K and n differ between batches. Expect the springback of a real wire within a
factor of two until a trial bend has been measured.
"""

from __future__ import annotations

import math

_MPA_PER_GPA = 1000.0
_SERIES_TERMS = 64  # at the split below the 64th term is under 0.5^64, far below double precision


def moment_ratio(core_ratio: float, hardening_exponent: float = 0.0) -> float:
    """Bending moment of a round section as a multiple of its moment at first yield.

    core_ratio: half height of the elastic core / wire radius, (0, 1], or 0 with n = 0 (no core left).
    hardening_exponent: n of the flow stress K*strain^n, [0, 1).
    Returns 1 when the core fills the section; 16/(3 pi) for an ideal plastic section without core.
    Raises ValueError outside those ranges. Source: module docstring; for n = 0 it equals the closed form
    (2/3pi)[(5 - 2c^2) sqrt(1 - c^2) + 3 asin(c)/c].
    """
    c, n = core_ratio, hardening_exponent
    if not 0.0 <= n < 1.0:
        raise ValueError(f"hardening exponent: got {n:g}, need 0 <= n < 1 (0 = ideal plastic)")
    if not 0.0 <= c <= 1.0 or (c == 0.0 and n > 0.0):
        raise ValueError(f"elastic core ratio: got {c:g}, need 0 < core <= 1 (0 only where n = 0)")
    # M = 4 (E r^4/R) below + 4 K r^3 (r/R)^n above, over first yield's (pi/4) E r^4 c/R; both stresses
    # meet at y = c r, so K (r/R)^n = E (r/R) c^(1 - n) and all but c and n cancels
    plastic = math.pow(c, -n) * _strip_integral_above(c, n)
    core = _strip_integral_below(c, 1.0) / c if c > 0.0 else 0.0
    return 16.0 / math.pi * (plastic + core)


FULLY_PLASTIC_RATIO = 16.0 / (3.0 * math.pi)
"""Fully plastic moment over first-yield moment of an ideal plastic round bar, 16/(3 pi) = 1.6977."""


def plastic_moment_nmm(
    loaded_centreline_radius_mm: float,
    diameter_mm: float,
    youngs_modulus_gpa: float,
    strength_coefficient_mpa: float,
    hardening_exponent: float,
) -> float:
    """Moment in N*mm that holds the wire at `loaded_centreline_radius_mm`.

    Never above the elastic moment E I / R, so a wire never springs back past straight. Where the core is
    small it tends to 2 K r^(n+3) R^(-n) B((n+2)/2, 3/2), B the beta function (n = 0: 4/3 K r^3).
    Raises ValueError for a radius, size or constant that no wire can have.
    """
    _check_wire(diameter_mm, youngs_modulus_gpa, strength_coefficient_mpa, hardening_exponent)
    _check_radius("loaded centreline radius", loaded_centreline_radius_mm, diameter_mm)
    return _moment_nmm(
        1.0 / loaded_centreline_radius_mm,
        diameter_mm / 2.0,
        youngs_modulus_gpa * _MPA_PER_GPA,
        strength_coefficient_mpa,
        hardening_exponent,
    )


def relaxed_radius_mm(
    loaded_centreline_radius_mm: float,
    diameter_mm: float,
    youngs_modulus_gpa: float,
    strength_coefficient_mpa: float,
    hardening_exponent: float,
) -> float:
    """Finished centreline radius in mm of a wire let go from `loaded_centreline_radius_mm`.

    Returns math.inf when the wire never left its elastic range and springs back straight.
    Raises ValueError as `plastic_moment_nmm`.
    """
    moment_nmm = plastic_moment_nmm(
        loaded_centreline_radius_mm,
        diameter_mm,
        youngs_modulus_gpa,
        strength_coefficient_mpa,
        hardening_exponent,
    )
    stiffness_nmm2 = _stiffness_nmm2(diameter_mm / 2.0, youngs_modulus_gpa * _MPA_PER_GPA)
    finished_curvature = 1.0 / loaded_centreline_radius_mm - moment_nmm / stiffness_nmm2
    # below rounding error of the difference nothing is left to divide by: the wire is straight again
    if finished_curvature * loaded_centreline_radius_mm < 1e-14:
        return math.inf
    return 1.0 / finished_curvature


def loaded_radius_mm(
    finished_centreline_radius_mm: float,
    diameter_mm: float,
    youngs_modulus_gpa: float,
    strength_coefficient_mpa: float,
    hardening_exponent: float,
) -> float:
    """Centreline radius in mm to form the wire at, so that it springs back to the finished one.

    The finished curvature rises with the loaded one (stress never rises faster than E*strain), so one
    bisection finds the only answer, to 1e-12 of the radius.
    Raises ValueError when the finished radius is no wire's (as `plastic_moment_nmm`), or when the former
    would have to be tighter than the wire itself: inside radius below zero.
    """
    _check_wire(diameter_mm, youngs_modulus_gpa, strength_coefficient_mpa, hardening_exponent)
    _check_radius("finished centreline radius", finished_centreline_radius_mm, diameter_mm)
    radius_mm, modulus_mpa = diameter_mm / 2.0, youngs_modulus_gpa * _MPA_PER_GPA
    stiffness_nmm2 = _stiffness_nmm2(radius_mm, modulus_mpa)
    wanted = 1.0 / finished_centreline_radius_mm

    def excess(curvature: float) -> float:
        moment = _moment_nmm(curvature, radius_mm, modulus_mpa, strength_coefficient_mpa, hardening_exponent)
        return curvature - moment / stiffness_nmm2 - wanted

    low, high = wanted, 1.0 / radius_mm
    if excess(high) < 0.0:
        raise ValueError(
            f"springback: no former bends wire of {diameter_mm:g} mm so that it relaxes to a centreline "
            f"radius of {finished_centreline_radius_mm:g} mm; it would have to be tighter than the wire "
            "itself. Use a larger bend radius or a softer temper."
        )
    while high - low > 1e-12 * high:
        middle = (low + high) / 2.0
        if not low < middle < high:
            break
        if excess(middle) < 0.0:
            low = middle
        else:
            high = middle
    return 2.0 / (low + high)


def loaded_angle_deg(finished_angle_deg: float, finished_radius_mm: float, loaded_radius_mm: float) -> float:
    """Angle in degrees to bend to, so that `finished_angle_deg` is left.

    Both radii to the centreline. The arc keeps its length, so angle x radius stays the same.
    Raises ValueError for radii that are not positive and finite, or a loaded one above the finished one.
    """
    if not 0.0 < loaded_radius_mm <= finished_radius_mm < math.inf:
        raise ValueError(
            f"bend radii: got loaded {loaded_radius_mm:g} mm and finished {finished_radius_mm:g} mm, "
            "need 0 < loaded <= finished (a bend opens when let go)"
        )
    return finished_angle_deg * finished_radius_mm / loaded_radius_mm


def developed_arc_mm(
    angle_deg: float, inside_radius_mm: float, diameter_mm: float, neutral_axis_factor: float
) -> float:
    """Length in mm of straight wire that one bend takes up.

    neutral_axis_factor: depth of the unstretched fibre from the bend's inside / wire diameter, 0 to 1
    (0.5 = centreline). Raises ValueError outside that, or for a negative radius or angle.
    """
    if not 0.0 <= neutral_axis_factor <= 1.0:
        raise ValueError(f"neutral axis factor: got {neutral_axis_factor:g}, need 0 to 1 (0.5 = centreline)")
    if inside_radius_mm < 0.0 or angle_deg < 0.0 or diameter_mm <= 0.0:
        raise ValueError(
            f"bend: got angle {angle_deg:g} deg, inside radius {inside_radius_mm:g} mm, wire "
            f"{diameter_mm:g} mm; need angle and radius of at least 0, wire above 0"
        )
    return math.radians(angle_deg) * (inside_radius_mm + neutral_axis_factor * diameter_mm)


def _moment_nmm(
    curvature_per_mm: float,
    radius_mm: float,
    modulus_mpa: float,
    strength_coefficient_mpa: float,
    hardening_exponent: float,
) -> float:
    # the strain at which K*strain^n and E*strain meet; below it the metal is elastic
    yield_strain = math.pow(strength_coefficient_mpa / modulus_mpa, 1.0 / (1.0 - hardening_exponent))
    core_ratio = yield_strain / (curvature_per_mm * radius_mm)
    stiffness_nmm2 = _stiffness_nmm2(radius_mm, modulus_mpa)
    if core_ratio >= 1.0:
        return stiffness_nmm2 * curvature_per_mm
    return stiffness_nmm2 * yield_strain / radius_mm * moment_ratio(core_ratio, hardening_exponent)


def _stiffness_nmm2(radius_mm: float, modulus_mpa: float) -> float:
    """E I of a round bar, I = pi r^4 / 4."""
    return modulus_mpa * math.pi * radius_mm**4 / 4.0


def _strip_integral_below(c: float, n: float) -> float:
    """Integral of t^(n+1) sqrt(1 - t^2) over t from 0 to c: the section's strips within the core."""
    if c * c > 0.5:
        return _strip_integral_whole(n) - _strip_integral_above(c, n)
    # binomial series of sqrt(1 - t^2), integrated term by term; c^2 <= 0.5 makes it quick
    total, term = 0.0, 1.0
    for k in range(_SERIES_TERMS):
        total += term / (n + 2.0 + 2.0 * k)
        term *= -(0.5 - k) / (k + 1.0) * c * c
    return total * math.pow(c, n + 2.0)


def _strip_integral_above(c: float, n: float) -> float:
    """The same from c to 1: the strips outside the core."""
    if c * c <= 0.5:
        return _strip_integral_whole(n) - _strip_integral_below(c, n)
    # with u = sqrt(1 - t^2) it is the integral of (1 - u^2)^(n/2) u^2 over u from 0 to sqrt(1 - c^2)
    u = math.sqrt(1.0 - c * c)
    total, term = 0.0, 1.0
    for k in range(_SERIES_TERMS):
        total += term / (2.0 * k + 3.0)
        term *= -(n / 2.0 - k) / (k + 1.0) * u * u
    return total * u**3


def _strip_integral_whole(n: float) -> float:
    """Half the beta function B((n + 2)/2, 3/2): the strips of the whole half section."""
    return math.gamma(n / 2.0 + 1.0) * math.gamma(1.5) / math.gamma(n / 2.0 + 2.5) / 2.0


def _check_wire(diameter_mm: float, modulus_gpa: float, coefficient_mpa: float, exponent: float) -> None:
    for what, value in (
        ("wire diameter in mm", diameter_mm),
        ("Young's modulus in GPa", modulus_gpa),
        ("strength coefficient in MPa", coefficient_mpa),
    ):
        if not 0.0 < value < math.inf:
            raise ValueError(f"{what}: got {value:g}, need a positive finite number")
    if not 0.0 <= exponent < 1.0:
        raise ValueError(f"hardening exponent: got {exponent:g}, need 0 <= n < 1 (0 = ideal plastic)")
    if coefficient_mpa >= modulus_gpa * _MPA_PER_GPA:
        raise ValueError(
            f"strength coefficient: got {coefficient_mpa:g} MPa against a modulus of {modulus_gpa:g} GPa; "
            "it must be far below the modulus. Check the units: MPa and GPa."
        )


def _check_radius(what: str, radius_mm: float, diameter_mm: float) -> None:
    if not diameter_mm / 2.0 <= radius_mm < math.inf:
        raise ValueError(
            f"{what}: got {radius_mm:g} mm for wire of {diameter_mm:g} mm, need a finite radius of at "
            f"least {diameter_mm / 2.0:g} mm (inside radius 0)"
        )
