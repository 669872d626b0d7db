"""Solids the file tests share: small, with known figures, one of each kind of face that matters."""

from __future__ import annotations

from typing import Any

import cadquery
import pytest


@pytest.fixture(scope="session")
def cube() -> Any:
    """10 mm cube with its lower corner at the origin."""
    return cadquery.Solid.makeBox(10, 10, 10)


@pytest.fixture(scope="session")
def ring() -> Any:
    """Torus of radii 20 and 3 mm, tilted and away from the origin."""
    place = cadquery.Location((5, 6, 7), (1, 2, 3), 40)
    return cadquery.Solid.makeTorus(20, 3).moved(place)


@pytest.fixture(scope="session")
def bent_wire() -> Any:
    """1.8 mm wire: 30 mm straight, a quarter turn on 4 mm, 21 mm straight."""
    path = cadquery.Workplane("XY").lineTo(30, 0).tangentArcPoint((4, 4)).line(0, 21)
    return cadquery.Workplane("YZ").circle(0.9).sweep(path).val()


@pytest.fixture(scope="session")
def board() -> Any:
    """Plate 60 x 40 x 5 with rounded corners, six through holes, a blind one and a dome."""
    plate = cadquery.Workplane().box(60, 40, 5).edges("|Z").fillet(4)
    plate = (
        plate.faces(">Z").workplane().pushPoints([(x, y) for x in (-20, 0, 20) for y in (-10, 10)]).hole(3.2)
    )
    plate = plate.faces(">Z").workplane().pushPoints([(10, 0)]).hole(2.0, 3.0)
    return plate.union(cadquery.Workplane().sphere(4)).val()


@pytest.fixture(scope="session")
def awkward_name() -> str:
    """A name with markup, quotes, a control character, a formula sign, other scripts and a line break."""
    return "=a<b>&\"c'd\x01\n é Ω \U0001f527"
