"""Design -> Model: the antenna as it will be made, from the same centreline and the same tray as the parts.

What the model keeps: corner arcs, legs with their jogs and where they land, the tube's outside, the inner
conductor, real standoff, lips. What it simplifies, because it is far smaller than a wavelength: soldered
laps are one conductor of the pair's equal radius; the sheet's thickness, its fold radii and its holes
vanish; the connector ends at the sheet's face, where the port of a leg feed sits.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from wavejig.design.model import Design
from wavejig.field.mesh_own import own_triangles
from wavejig.field.mesh_plan import MeshPlan
from wavejig.field.mesh_sheet import sheet_triangles
from wavejig.field.mesh_wire import chords
from wavejig.field.model import Insulation, Model, Port, Wire
from wavejig.geometry.path import Arc, Line, Path
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.reflector.tray import corner_practice
from wavejig.reflector.tray import plan as plan_tray

Array = NDArray[np.float64]

# Mesh of the default accuracy, in wavelengths at the band's middle; tests/bench/bench_convergence.py shows
# what halving everything changes.
WIRE_STEP = 1.0 / 28.0
SHEET_STEP = 1.0 / 9.0
# Cell side at a landing wire, in its radii, however fine the rest: cells inside the wire would carry current
# where there is none, and give it an inductance it has not.
LANDING_RADII = 2.2
COPPER_MS_PER_M = 58.0  # IEC 60028 (100 % IACS), from memory
_MM = 1e-3
_SAME_MM = 0.01


def model_from_design(design: Design, refine: float = 1.0, plan: MeshPlan | None = None) -> Model:
    """The model of a design. refine: 2 halves every edge (but for the cells round a landing wire).

    plan: a fresh one is filled; one that has been filled meshes this neighbour of its design alike.
    """
    plan = MeshPlan() if plan is None else plan
    radiator = plan_radiator(design)
    wires = _Wires(design, radiator, refine, plan)
    wires.build()
    wavelength = design.target.wavelength_mm
    tray = plan_tray(design.reflector, corner_practice(design.cutter))
    mesh = sheet_triangles if tray.own is None else own_triangles
    triangles = mesh(
        tray,
        [(float(p[0]), float(p[1])) for p in wires.landings],
        SHEET_STEP * wavelength / refine,
        LANDING_RADII * wires.landing_radius_mm,
        plan,
    )
    plan.close()
    return Model(
        wires=tuple(wires.wires),
        triangles=triangles * _MM,
        ports=(Port(wire=wires.port[0], end=wires.port[1], impedance_ohm=design.target.reference_ohm),),
        sheet_conductivity_s_per_m=design.reflector.metal.conductivity_ms_per_m * 1e6,
    )


def reference_plane(design: Design) -> str:
    """Where the predicted match is seen, in words."""
    if design.feed.style == "tube":
        return "across the terminals, at the tube's open end"
    return "at the foot of the pin leg, in the plane of the sheet's radiator-side face"


class _Wires:
    """Gathers wire segments (metres), landing points (mm) and the port."""

    def __init__(self, design: Design, radiator: Radiator, refine: float, plan: MeshPlan) -> None:
        self.plan = plan
        self.chains = 0
        self.design = design
        self.r = design.radiator
        self.feed = design.feed
        self.pieces = {p.role: p for p in radiator.pieces}
        self.step = WIRE_STEP * design.target.wavelength_mm / refine
        self.wires: list[Wire] = []
        self.landings: list[Array] = []
        self.port = (0, 0)
        self.landing_radius_mm = self.r.wire_diameter_mm / 2.0
        self.closed = self.r.ground_corner is not None

    def build(self) -> None:
        if self.feed.style == "tube":
            self._tube_fed()
        else:
            self._leg_fed()

    # -- legs ---------------------------------------------------------------------------------------

    def _leg_fed(self) -> None:
        leg = self.feed.leg_diameter_mm / 2.0
        self.landing_radius_mm = leg
        main = self.pieces["main"].path
        pin_foot = np.array([*self.feed.pin_leg, 0.0])
        ground_foot = np.array([*self.feed.foot, 0.0])
        self.landings += [pin_foot, ground_foot]
        if not self.closed:
            if self.feed.leg_is_wire:
                self._chain(
                    self._chords(_from_sheet(main, both=True), self.step),
                    self.r.wire_diameter_mm / 2.0,
                    wire=True,
                )
                self.port = (0, 0)
                return
            self._separate_legs_open(main)
            return
        tap = self._ground_tap(main)
        if self.feed.leg_is_wire:
            # one end is the pin leg; the other end's tail is soldered to it and becomes part of it
            body, tail = _without_tail(main)
            start = _from_sheet(body, both=False)
            top = np.array([*self.feed.pin_leg, self.r.standoff_mm - self.r.bend_radius_mm])
            nodes = self._chords(start, self.step, marks=[tap[1], *self._lap_marks(top)])
            self._chain(nodes, self.r.wire_diameter_mm / 2.0, wire=True, lap_top=top)
            self.port = (0, 0)
            self._chain(np.array([tail, top]), self.r.wire_diameter_mm / 2.0)
        else:
            first, body_tail = _without_tail(main.reversed())
            body, head_tail = _without_tail(first.reversed())
            leg_path = _from_sheet(self.pieces["pin-leg"].path, both=False)
            top = np.array(leg_path.end)
            self._chain(
                self._chords(leg_path, self.step, marks=self._lap_marks(top)), leg, wire=True, lap_top=top
            )
            self.port = (0, 0)
            self._chain(np.array([top, body_tail]), self.r.wire_diameter_mm / 2.0)
            self._chain(
                self._chords(body, self.step, marks=[tap[1]]), self.r.wire_diameter_mm / 2.0, wire=True
            )
            self._chain(np.array([head_tail, top]), self.r.wire_diameter_mm / 2.0)
        self._ground_leg(tap)

    def _lap_marks(self, top: Array) -> list[Array]:
        return [top - np.array([0.0, 0.0, self.r.lap_mm])]

    def _ground_tap(self, main: Path) -> tuple[Array, Array]:
        """Where the ground leg's arm begins to touch the side above it: on the arm, and on the main wire."""
        arm = self.pieces["ground-leg"].path
        first = arm.segments[0]
        begin = np.array(first.end)  # the arm's straight ends where its bend begins
        lines = [(np.array(line.start), np.array(line.end)) for line in main.lines]

        def foot(number: int) -> Array:
            a, b = lines[number]
            t = float(np.clip((begin - a) @ (b - a) / float((b - a) @ (b - a)), 0.0, 1.0))
            return np.asarray(a + (b - a) * t)

        def place() -> tuple[int, int]:
            """Which line, and which end of it (-1: between its ends)."""
            near = min(range(len(lines)), key=lambda n: float(np.linalg.norm(foot(n) - begin)))
            tap, found = foot(near), (near, -1)
            for n, ends in enumerate(
                lines
            ):  # a tap next to a straight's end is at its end: no slivers of wire
                for k, end in enumerate(ends):
                    if np.linalg.norm(end - tap) < self.r.wire_diameter_mm:
                        tap, found = end, (n, k)
            return found

        line, end = self.plan.choose("tap", place)
        tap = foot(line) if end < 0 else lines[line][end]
        return begin, tap

    def _ground_leg(self, tap: tuple[Array, Array]) -> None:
        path = self.pieces["ground-leg"].path
        # the lapped arm is one with the side above it: the leg begins at its bend
        down = _from_sheet(Path(segments=path.segments[1:]).reversed(), both=False)
        nodes = self._chords(down, self.step)
        self._chain(np.vstack([nodes, tap[1][None]]), self.feed.leg_diameter_mm / 2.0, wire=True)

    def _separate_legs_open(self, main: Path) -> None:
        leg = self.feed.leg_diameter_mm / 2.0
        first, last_tail = _without_tail(main.reversed())
        body, first_tail = _without_tail(first.reversed())
        pin = _from_sheet(self.pieces["pin-leg"].path, both=False)
        ground = _from_sheet(self.pieces["ground-leg"].path.reversed(), both=False)
        self._chain(self._chords(pin, self.step), leg, wire=True)
        self.port = (0, 0)
        self._chain(np.array([pin.end, body.start]), leg)
        self._chain(self._chords(body, self.step), self.r.wire_diameter_mm / 2.0, wire=True)
        self._chain(np.array([body.end, ground.end]), leg)
        self._chain(self._chords(ground, self.step), leg, wire=True)
        del last_tail, first_tail

    # -- tube ---------------------------------------------------------------------------------------

    def _tube_fed(self) -> None:
        tube = self.feed.tube
        assert tube is not None
        main = self.pieces["main"].path
        foot = np.array([*self.feed.tube_at, 0.0])
        top = np.array([*self.feed.tube_at, self.feed.tube_top_mm])
        self.landings.append(foot)
        self.landing_radius_mm = tube.outer_diameter_mm / 2.0
        pin = np.array(self.r.corners[0].at)
        hook = self._hook(main, pin)
        body = self._terminal_to_terminal(main, pin)
        apex = self._ground_contact(main)
        nodes = self._chords(body, self.step, marks=[hook])
        if self.closed:
            nodes[-1] = nodes[0]
        self._chain(nodes, self.r.wire_diameter_mm / 2.0, wire=True)
        contact = nodes[int(np.argmin(np.linalg.norm(nodes - apex, axis=1)))]
        self._chain(
            self._chords(Path(segments=(Line(start=_point(foot), end=_point(top)),)), self.step),
            tube.outer_diameter_mm / 2.0,
            conductivity=COPPER_MS_PER_M,
        )
        inner_radius = tube.inner_diameter_mm / 2.0
        # the wall up to the wire it carries, as a wire of the wire's own radius
        self._chain(np.array([top, contact]), min(self.r.wire_diameter_mm, tube.outer_diameter_mm) / 2.0)
        level = self.pieces["inner"].path.end[2]
        over = np.array([hook[0], hook[1], level])
        rise = np.array([top[0], top[1], level])
        start = len(self.wires)
        self._chain(
            _split(np.array([top, rise, over, hook]), self.step, self.plan),
            inner_radius,
            conductivity=COPPER_MS_PER_M,
        )
        self.port = (start, 0)

    def _hook(self, main: Path, pin: Array) -> Array:
        """The point of the first side that the inner conductor is hooked over."""
        inner = self.pieces["inner"].path
        end = np.array(inner.end)
        line = main.lines[0]
        a, b = np.array(line.start), np.array(line.end)
        t = float(np.clip((end - a) @ (b - a) / float((b - a) @ (b - a)), 0.02, 0.98))
        del pin
        return np.asarray(a + (b - a) * t)

    def _terminal_to_terminal(self, main: Path, pin: Array) -> Path:
        """The main wire from the pin terminal on, its cut ends brought to the terminal's corner point."""
        segments = list(main.segments)
        first, last = segments[0], segments[-1]
        assert isinstance(first, Line) and isinstance(last, Line)
        segments[0] = Line(start=_point(pin), end=first.end)
        if self.closed:
            segments[-1] = Line(start=last.start, end=_point(pin))
        return Path(segments=tuple(segments))

    def _ground_contact(self, main: Path) -> Array:
        if not self.closed:
            return np.array(main.end)
        corner = np.array(self.r.corners[self.r.ground_corner or 0].at)
        arcs = [a for a in main.segments if isinstance(a, Arc)]
        nearest = min(arcs, key=lambda a: float(np.linalg.norm(np.array(a.middle) - corner)))
        return np.array(nearest.middle)

    # -- segments -----------------------------------------------------------------------------------

    def _chords(self, path: Path, step: float, marks: Sequence[Array] = ()) -> Array:
        self.chains += 1
        return chords(path, step, marks=marks, plan=self.plan, name=f"chain {self.chains}")

    def _chain(
        self,
        nodes: Array,
        radius_mm: float,
        *,
        wire: bool = False,
        conductivity: float | None = None,
        lap_top: Array | None = None,
    ) -> None:
        """Append a chain of wires. wire: of the radiator's own wire (its metal, its insulation)."""
        sigma = (self.r.metal.conductivity_ms_per_m if conductivity is None else conductivity) * 1e6
        insulation = None
        if wire and self.r.insulation_thickness_mm > 0.0:
            outer = radius_mm + self.r.insulation_thickness_mm
            insulation = Insulation(outer_radius_m=outer * _MM, permittivity=self.r.insulation_permittivity)
        for a, b in itertools.pairwise(_distinct(nodes)):
            segment = Wire(
                start=_metres(a),
                end=_metres(b),
                radius_m=radius_mm * _MM,
                conductivity_s_per_m=sigma,
                insulation=insulation,
            )
            if lap_top is not None and _in_lap(a, b, lap_top, self.r.lap_mm):
                # two round wires side by side, as one of their geometric mean distance (from memory)
                pair = math.sqrt(radius_mm * (2.0 * radius_mm + 0.1))
                segment = replace(segment, radius_m=pair * _MM, insulation=None)
            self.wires.append(segment)


def _distinct(nodes: Array) -> list[Array]:
    """Nodes without those that only a layout's rounding sets apart; both ends stay."""
    out = [nodes[0]]
    for node in nodes[1:]:
        if np.linalg.norm(node - out[-1]) > _SAME_MM:
            out.append(node)
        elif len(out) > 1:
            out[-1] = node
    if len(out) > 1:
        out[-1] = nodes[-1]
    return out


def _without_tail(path: Path) -> tuple[Path, Array]:
    """The path without its last straight (a soldered tail), and the point where that straight began."""
    *rest, last = path.segments
    return Path(segments=tuple(rest)), np.array(last.start)


def _from_sheet(path: Path, *, both: bool) -> Path:
    """The path with its first end (and last, if both) cut or drawn to the sheet's face, z = 0."""
    segments = list(path.segments)
    first = segments[0]
    assert isinstance(first, Line)
    segments[0] = Line(start=(first.start[0], first.start[1], 0.0), end=first.end)
    if both:
        last = segments[-1]
        assert isinstance(last, Line)
        segments[-1] = Line(start=last.start, end=(last.end[0], last.end[1], 0.0))
    return Path(segments=tuple(segments))


def _split(points: Array, step: float, plan: MeshPlan) -> Array:
    out = [points[0]]
    for part, (a, b) in enumerate(itertools.pairwise(points)):
        wanted = max(1, math.ceil(float(np.linalg.norm(b - a)) / step - 1e-9))
        n = plan.choose(("inner conductor", part), lambda n=wanted: n)  # type: ignore[misc]
        out += [a + (b - a) * i / n for i in range(1, n + 1)]
    return np.array(out)


def _in_lap(a: Array, b: Array, top: Array, lap: float) -> bool:
    middle = (a + b) / 2.0
    beside = float(np.hypot(*(middle - top)[:2])) < 1e-6
    return beside and top[2] - lap - 1e-6 < middle[2] < top[2] + 1e-6


def _metres(p: Array) -> tuple[float, float, float]:
    return (float(p[0]) * _MM, float(p[1]) * _MM, float(p[2]) * _MM)


def _point(p: Array) -> tuple[float, float, float]:
    return (float(p[0]), float(p[1]), float(p[2]))
