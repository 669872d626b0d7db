"""Bad models are refused, doubtful ones remarked on, each by its name; sound ones pass without a word."""

from __future__ import annotations

import warnings
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from tests.field.antennas import LIGHT_HZ, biquad, dipole, loop, over_plane
from wavejig.field import Insulation, Model, ModelError, ModelWarning, Port, Wire, solve
from wavejig.field.clearances import segment_distance
from wavejig.field.examine import examine
from wavejig.field.shapes import chain, grid_lines, plate

ROD = dipole(0.5, 1e-3, 20)
SHEET = plate([-0.1, 0.0, 0.1], [-0.1, 0.0, 0.1])


def wire(*ends: tuple[float, float, float], radius: float = 1e-3) -> Wire:
    return Wire(start=ends[0], end=ends[1], radius_m=radius)


def rod_and(*more: Wire) -> Model:
    return replace(ROD, wires=ROD.wires + more)


def with_first(**changes: object) -> Model:
    return replace(ROD, wires=(replace(ROD.wires[0], **changes), *ROD.wires[1:]))  # type: ignore[arg-type]


def rod_over(sheet: np.ndarray, *more: Wire) -> Model:
    """The rod half a metre up, a sheet at z = 0."""
    lifted = tuple(
        replace(w, start=(*w.start[:2], w.start[2] + 0.5), end=(*w.end[:2], w.end[2] + 0.5))
        for w in ROD.wires
    )
    return replace(ROD, wires=lifted + more, triangles=sheet)


def with_ports(*ports: Port) -> Model:
    return replace(ROD, ports=ports)


MIDDLE = Port(wire=10, end=0)

REFUSED = [
    ("empty model", "neither wire nor sheet", Model()),
    ("too large", "20001 unknowns", Model(wires=(ROD.wires[0],) * 20001)),
    ("plane", "'z=1'", replace(ROD, plane="z=1")),
    ("not a number", "wire 0", with_first(start=(0.0, 0.0, float("nan")))),
    ("not a number", "wire 0", with_first(radius_m=float("inf"))),
    ("not a number", "triangle", rod_over(np.full((1, 3, 3), np.inf))),
    ("radius", "wire 0", with_first(radius_m=0.0)),
    ("radius", "wire 0", with_first(radius_m=-1e-3)),
    ("conductivity", "wire 0", with_first(conductivity_s_per_m=-1.0)),
    ("conductivity", "sheet", replace(rod_over(SHEET), sheet_conductivity_s_per_m=0.0)),
    ("insulation", "wire 0", with_first(insulation=Insulation(outer_radius_m=5e-4, permittivity=2.0))),
    ("insulation", "wire 0", with_first(insulation=Insulation(outer_radius_m=2e-3, permittivity=0.5))),
    ("degenerate triangle", "triangle 8", rod_over(np.concatenate([SHEET, [[(0, 0, 0), (0.1, 0, 0), (0.2, 0, 0)]]]))),
    ("duplicate triangles", "triangles 3 and 8", rod_over(np.concatenate([SHEET, np.roll(SHEET[3:4], 1, axis=1)]))),
    ("zero-length wire", "wire 20", rod_and(wire((1, 0, 0), (1, 0, 0)))),
    ("zero-length wire", "wire 20", rod_and(wire((1, 0, 0), (1, 0, 1e-12)))),
    ("overlapping wires", "wires 4 and 20", rod_and(ROD.wires[4])),
    ("overlapping wires", "wires 4 and 20", rod_and(wire(ROD.wires[4].end, ROD.wires[4].start))),
    ("overlapping wires", "wires 0 and 20", rod_and(wire((0, 0, -0.25), (0, 0, -0.24)))),
    ("overlapping wires", "and 20", rod_and(wire((0, 0, 0.24), (0, 0, 0.30)))),
    ("overlapping wires", "and 20", rod_and(wire((0.0015, 0, 0.101), (0.0015, 0, 0.124)))),
    ("port on nothing", "port 0", with_ports(Port(wire=20, end=0))),
    ("port on nothing", "port 0", with_ports(Port(wire=-1, end=0))),
    ("port on nothing", "port 0", with_ports(Port(wire=3, end=2))),
    ("port on nothing", "port 1", with_ports(MIDDLE, Port(wire=0, end=0))),
    ("two ports in one place", "port 1", with_ports(MIDDLE, MIDDLE)),
    ("two ports in one place", "2 ports", with_ports(MIDDLE, Port(wire=9, end=1))),
    ("port impedance", "port 0", with_ports(Port(wire=10, end=0, impedance_ohm=0.0))),
    ("below the ground", "wire 0", replace(ROD, plane="z=0")),
    ("below the ground", "triangle 0", replace(over_plane(0.5, 1e-3, 20, 0.25), triangles=SHEET - [0, 0, 0.1])),
    ("in the ground", "wire 20", replace(
        over_plane(0.5, 1e-3, 20, 0.25),
        wires=(*over_plane(0.5, 1e-3, 20, 0.25).wires, wire((1, 0, 0), (1.02, 0, 0))),
    )),
    ("in the ground", "triangle 0", replace(over_plane(0.5, 1e-3, 20, 0.25), triangles=SHEET)),
    ("wires crossing without a joint", "and 20", rod_and(wire((-0.1, 0, 0.11), (0.1, 0, 0.11)))),
    ("wires crossing without a joint", "and 20", rod_and(wire((0, 0, 0.11), (0.1, 0, 0.11)))),
    ("wire through a sheet", "wire 20", rod_over(SHEET, wire((0.03, 0.02, -0.02), (0.03, 0.02, 0.03)))),
    ("wire end on a sheet without a corner", "wire 20", rod_over(SHEET, wire((0.03, 0.02, 0), (0.03, 0.02, 0.03)))),
    ("wire in a sheet", "wire 20", rod_over(SHEET, wire((0.03, 0.02, 0), (0.06, 0.03, 0)))),
    ("segment too long", "wire 0", dipole(0.8, 1e-3, 2)),
    ("triangle side too long", "triangle", rod_over(4.0 * SHEET)),
    ("ports", "no port", with_ports()),
]  # fmt: skip


@pytest.mark.parametrize(
    ("code", "where", "model"), REFUSED, ids=[f"{i}-{r[0]}".replace(" ", "-") for i, r in enumerate(REFUSED)]
)
def test_refused_by_name(code: str, where: str, model: Model) -> None:
    with pytest.raises(ModelError) as caught:
        solve(model, [LIGHT_HZ])
    assert caught.value.code == code
    assert where in str(caught.value)


@pytest.mark.parametrize("frequencies", [[], [0.0], [-1e9], [float("nan")], [[1e9, 2e9]]])
def test_frequencies_that_are_none(frequencies: list[float]) -> None:
    with pytest.raises(ModelError, match="frequency"):
        solve(ROD, frequencies)


DOUBTFUL = [
    ("long segment", "wire", dipole(0.5, 1e-3, 4)),
    ("long triangle side", "triangle", rod_over(SHEET * 1.4)),
    ("segment shorter than its radius", "mm long", dipole(0.5, 0.026, 20)),
    ("wire not thin", "wire 0", dipole(0.5, 0.034, 10)),
]


@pytest.mark.parametrize(("code", "where", "model"), DOUBTFUL, ids=[d[0].replace(" ", "-") for d in DOUBTFUL])
def test_remarked_on_by_name(code: str, where: str, model: Model) -> None:
    """As a warning while solving, and in the response for whoever asks later."""
    with warnings.catch_warnings(record=True) as told:
        warnings.simplefilter("always")
        response = solve(model, [LIGHT_HZ])
    codes = [r.code for r in response.remarks]
    assert code in codes
    mine = response.remarks[codes.index(code)]
    assert where in mine.message
    assert mine.severity == "warning"
    assert [w for w in told if issubclass(w.category, ModelWarning) and code in str(w.message)]


@pytest.mark.parametrize(
    "model",
    [
        dipole(0.5, 1e-3, 20),
        dipole(0.5, 0.01, 50),  # segments as long as the wire is thick
        loop(1.0, 80, 0.01),
        rod_over(SHEET, wire((0.0, 0.0, 0.0), (0.0, 0.0, 0.05))),
        rod_and(wire((0.003, 0.0, -0.2), (0.003, 0.0, -0.15))),  # beside each other, a diameter between
        over_plane(0.5, 1e-3, 20, 0.1),
    ],
    ids=["rod", "thick rod", "loop", "leg on a sheet", "neighbours", "over ground"],
)
def test_sound_models_pass_without_a_word(model: Model) -> None:
    assert examine(model, LIGHT_HZ) == ()


def test_a_leg_on_the_sheet_passes() -> None:
    assert examine(biquad(), 2.44e9) == ()


near_middle = st.floats(0.05, 0.95)


@given(near_middle, near_middle, st.floats(0.2, 2.9), st.integers(0, 10**6), st.floats(0.0, 3.0))
def test_crossings_are_found_wherever_they_are(
    s: float, t: float, angle: float, seed: int, apart: float
) -> None:
    """Two wires a stated number of radii apart at one point of each, turned anyhow: refused below two radii."""
    radius, length = 1e-3, 0.08
    turn = Rotation.random(random_state=seed)
    u, v = np.array([1.0, 0.0, 0.0]), np.array([np.cos(angle), np.sin(angle), 0.0])
    lift = np.array([0.0, 0.0, apart * radius])
    ends = np.array([-s * u, (1 - s) * u, -t * v, (1 - t) * v]) * length
    ends[2:] += lift
    ends = turn.apply(ends)
    wires = tuple(wire(tuple(ends[i].tolist()), tuple(ends[i + 1].tolist())) for i in (0, 2))
    model = Model(wires=wires)
    assert segment_distance(ends[None, :2], ends[None, 2:])[0] == pytest.approx(apart * radius, abs=1e-12)
    if apart < 2.0 - 1e-6:
        with pytest.raises(ModelError) as caught:
            examine(model, LIGHT_HZ)
        assert caught.value.code in ("wires crossing without a joint", "overlapping wires")
    elif apart > 2.0 + 1e-6:
        assert examine(model, LIGHT_HZ) == ()


@given(st.floats(-0.09, 0.09), st.floats(-0.09, 0.09), st.floats(0.1, 0.9), st.integers(0, 10**6))
def test_wires_through_a_sheet_are_found_wherever_they_are(
    x: float, y: float, part: float, seed: int
) -> None:
    turn = Rotation.random(random_state=seed)
    lines = grid_lines([-0.1, 0.0, 0.1], 0.05)
    sheet = turn.apply(plate(lines, lines).reshape(-1, 3)).reshape(-1, 3, 3)
    slant = np.array([0.01, 0.02, 0.05])
    ends = turn.apply(np.array([(x, y, 0.0) - part * slant, (x, y, 0.0) + (1 - part) * slant]))
    model = Model(wires=(wire(tuple(ends[0].tolist()), tuple(ends[1].tolist())),), triangles=sheet)
    with pytest.raises(ModelError, match="wire through a sheet"):
        examine(model, LIGHT_HZ)


def test_chain_of_short_links_is_no_overlap() -> None:
    """A bent thick wire: links next but one are within each other's thickness, and rightly so."""
    points = [(0.1 * np.cos(a), 0.1 * np.sin(a), 0.0) for a in np.linspace(0.0, np.pi, 40)]
    assert examine(Model(wires=chain(points, 0.006, counts=1)), LIGHT_HZ) == ()
