"""Antennas the field tests share, and currents put on them by hand. Lengths in metres; at LIGHT_HZ a wave is 1 m."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from wavejig.field import Model, Port, Response
from wavejig.field.elements import Elements, make_elements
from wavejig.field.shapes import chain, circle, grid_lines, plate
from wavejig.field.units import SPEED_OF_LIGHT_M_PER_S
from wavejig.field.unknowns import SEGMENT, find_unknowns, merge_points

LIGHT_HZ = SPEED_OF_LIGHT_M_PER_S  # one metre of wavelength

Array = NDArray[np.float64]


def dipole(length: float, radius: float, segments: int, *, at: tuple[float, float] = (0.0, 0.0)) -> Model:
    """Along z, fed in the middle (an even number of segments)."""
    x, y = at
    wires = chain([(x, y, -length / 2.0), (x, y, length / 2.0)], radius, counts=segments)
    return Model(wires=wires, ports=(Port(wire=segments // 2, end=0),))


def side_by_side(distance: float, radius: float, segments: int) -> Model:
    """Two half-wave dipoles along z, a distance apart along x, each with a port."""
    one, two = dipole(0.5, radius, segments), dipole(0.5, radius, segments, at=(distance, 0.0))
    ports = (Port(wire=segments // 2, end=0), Port(wire=segments + segments // 2, end=0))
    return Model(wires=one.wires + two.wires, ports=ports)


def over_plane(length: float, radius: float, segments: int, height: float) -> Model:
    """A dipole along y over an infinite sheet."""
    wires = chain([(0.0, -length / 2.0, height), (0.0, length / 2.0, height)], radius, counts=segments)
    return Model(wires=wires, ports=(Port(wire=segments // 2, end=0),), plane="z=0")


def loop(
    circumference: float, sides: int, radius: float, *, height: float = 0.0, grounded: bool = False
) -> Model:
    """A circular loop as a polygon of equal developed length, fed at +x."""
    wires = chain(circle(circumference, sides, height), radius, counts=1)
    return Model(wires=wires, ports=(Port(wire=0, end=0),), plane="z=0" if grounded else None)


def biquad(*, longest_mm: float = 6.0, mesh_mm: float = 12.0, lip_mm: float = 25.0) -> Model:
    """Two lobes of 28.9 mm side in 1.8 mm wire, 15.35 mm before a 123 mm sheet with two lips, fed at a leg's foot."""
    reach = 28.9 / 2.0**0.5
    top = 15.35
    points = [
        (0.0, 2.0), (reach, reach), (2.0 * reach, 0.0), (reach, -reach), (0.0, -2.0),
        (-reach, -reach), (-2.0 * reach, 0.0), (-reach, reach), (0.0, 2.0),
    ]  # fmt: skip
    radius, longest = 0.9e-3, longest_mm * 1e-3
    wires = chain(np.array([(0.0, 2.0, 0.0), (0.0, 2.0, top)]) * 1e-3, radius, longest_m=longest)
    wires += chain(np.array([(x, y, top) for x, y in points]) * 1e-3, radius, longest_m=longest)
    wires += chain(np.array([(0.0, -2.0, 0.0), (0.0, -2.0, top)]) * 1e-3, radius, longest_m=longest)
    return Model(
        wires=wires,
        triangles=tray(0.123, lip_mm * 1e-3, mesh_mm * 1e-3, (2e-3,)),
        ports=(Port(wire=0, end=0),),
    )


def tray(base: float, lip: float, longest: float, feet_y: tuple[float, ...] = ()) -> Array:
    """A square sheet with lips standing up at y-, y+; grid corners at (0, +-y) for the feet."""
    half = base / 2.0
    x = grid_lines([-half, 0.0, half], longest)
    y = grid_lines([-half, *(-f for f in feet_y), 0.0, *feet_y, half], longest)
    parts = [plate(x, y)]
    if lip > 0.0:
        heights = grid_lines([0.0, lip], longest)
        wall = plate(x, heights)
        for side in (-half, half):
            parts.append(np.stack([wall[..., 0], np.full_like(wall[..., 0], side), wall[..., 1]], axis=-1))
    return np.concatenate(parts)


def elements_of(model: Model) -> Elements:
    return make_elements(model, find_unknowns(model, merge_points(model)))


def wire_currents(elements: Elements, shape: Callable[[Array], Array]) -> Array:
    """(unknowns,): shape(points (n, 3)) amperes along the wires' own direction at every joint of two wires."""
    currents = np.zeros(elements.unknowns)
    for element in np.flatnonzero(elements.kind == SEGMENT):
        # end 1 of each segment: a joint of two wires has one unknown, 1 ampere along both
        for row in range(elements.half_start[3 * element + 1], elements.half_start[3 * element + 2]):
            end = elements.shapes.corners[element, 1][None]
            currents[elements.half_unknown[row]] = elements.half_coefficient[row] * shape(end)[0]
    return currents


def with_currents(model: Model, currents: Array, frequency_hz: float = LIGHT_HZ) -> Response:
    """A response that carries the given currents (unknowns,), whatever the physics."""
    return Response(
        frequencies_hz=np.array([frequency_hz]),
        model=model,
        elements=elements_of(model),
        currents_a_per_v=currents.astype(np.complex128)[None, :, None],
        remarks=(),
    )
