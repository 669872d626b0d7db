"""Is a model sound? Refusals by name (ModelError), and remarks where the answer deserves less trust.

The limits on thinness and segment length are common practice for piecewise-linear currents on thin wires,
no source; what they cost is measured in the tests.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from wavejig.field.clearances import check_crossings, check_through_sheet
from wavejig.field.errors import ModelError, Remark
from wavejig.field.model import Model
from wavejig.field.units import wavenumber
from wavejig.field.unknowns import MERGE, Nodes, merge_points, wire_ends

Array = NDArray[np.float64]
Index = NDArray[np.int64]

LONG = 0.1  # of a wavelength: longer segments are remarked on
LONG_SIDE = 0.17  # of a wavelength: the diagonal of 0.12 by 0.12, for the longest side of a triangle
FAR_TOO_LONG = 0.25  # of a wavelength: refused
THICK = 1.0 / 30.0  # of a wavelength: a radius above it is not thin
MOST_UNKNOWNS = 20_000  # 6 GiB of matrix
SLIVER = 1e-6  # area over the longest side squared: no triangle


def examine(model: Model, highest_hz: float, *, nodes: Nodes | None = None) -> tuple[Remark, ...]:
    """Refuse what cannot be solved at the highest frequency; return what to know about the rest.

    nodes: merge_points(model) if it is known. Raises ModelError, its code the name of the fault.
    """
    check_numbers(model)
    nodes = merge_points(model) if nodes is None else nodes
    ends = wire_ends(model)
    _sheet(model, nodes)
    _wires(model, nodes, ends)
    _ports(model, nodes)
    if model.plane is not None:
        _ground(model, nodes, ends)
    check_crossings(model, nodes, ends)
    if len(model.wires) and len(model.triangles):
        check_through_sheet(model, nodes, ends)
    return (*_lengths(model, ends, highest_hz), *_thin(model, ends, highest_hz))


def check_numbers(model: Model) -> None:
    """Refuse values that mean nothing by themselves, before anything is computed from them."""
    if not model.wires and not len(model.triangles):
        raise ModelError("empty model", "there is neither wire nor sheet")
    size = len(model.wires) + 1.5 * len(model.triangles)
    if size > MOST_UNKNOWNS:
        raise ModelError(
            "too large", f"about {size:.0f} unknowns, at most {MOST_UNKNOWNS} are solved; use a coarser mesh"
        )
    if model.plane not in (None, "z=0"):
        raise ModelError("plane", f'got {model.plane!r}, allowed are null and "z=0"')
    if not np.isfinite(model.triangles).all():
        raise ModelError("not a number", "a triangle has a coordinate that is not finite")
    sheet = model.sheet_conductivity_s_per_m
    if sheet is not None and not (np.isfinite(sheet) and sheet > 0.0):
        raise ModelError(
            "conductivity", f"the sheet's is {sheet}, it must be positive; leave it out for none lost"
        )
    for i, w in enumerate(model.wires):
        if len(w.start) != 3 or len(w.end) != 3 or not np.isfinite((*w.start, *w.end, w.radius_m)).all():
            raise ModelError("not a number", f"wire {i} has a coordinate or radius that is not finite")
        if not w.radius_m > 0.0:
            raise ModelError("radius", f"wire {i} has radius {w.radius_m} m, it must be positive")
        metal = w.conductivity_s_per_m
        if metal is not None and not (np.isfinite(metal) and metal > 0.0):
            raise ModelError(
                "conductivity", f"wire {i} has {metal} S/m, it must be positive; leave it out for none"
            )
        sleeve = w.insulation
        if sleeve is not None and not (
            np.isfinite((sleeve.outer_radius_m, sleeve.permittivity)).all()
            and sleeve.outer_radius_m >= w.radius_m
            and sleeve.permittivity >= 1.0
        ):
            raise ModelError(
                "insulation",
                f"wire {i}: outer radius {sleeve.outer_radius_m} m (not below the wire's {w.radius_m} m) and "
                f"relative permittivity {sleeve.permittivity} (not below 1) are needed",
            )


def _sheet(model: Model, nodes: Nodes) -> None:
    if not len(model.triangles):
        return
    sides = np.roll(model.triangles, -1, axis=1) - model.triangles
    area = 0.5 * np.linalg.norm(np.cross(sides[:, 0], sides[:, 1]), axis=1)
    longest2 = np.max(np.sum(sides**2, axis=2), axis=1)
    flat = np.flatnonzero(area <= SLIVER * longest2)
    c = np.sort(nodes.corners, axis=1)
    merged = np.flatnonzero((c[:, 0] == c[:, 1]) | (c[:, 1] == c[:, 2]))
    for i in (*flat.tolist(), *merged.tolist()):
        raise ModelError("degenerate triangle", f"triangle {i} has no area; leave it out")
    order = np.lexsort(c.T)
    same = np.flatnonzero(np.all(c[order][1:] == c[order][:-1], axis=1))
    for i in same.tolist():
        first, second = sorted((int(order[i]), int(order[i + 1])))
        raise ModelError("duplicate triangles", f"triangles {first} and {second} are the same; leave one out")


def _wires(model: Model, nodes: Nodes, ends: Array) -> None:
    pair = nodes.wire_ends
    for i in np.flatnonzero(np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1) == 0.0).tolist():
        raise ModelError("zero-length wire", f"wire {i} starts and ends at one point; leave it out")
    # ends nearer than a millionth of the model are one point; its own shortness must not keep them apart
    same = (pair[:, 0] == pair[:, 1]) | (
        np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1) < MERGE * nodes.span_m
    )
    for i in np.flatnonzero(same).tolist():
        raise ModelError("zero-length wire", f"wire {i} is too short to tell its ends apart; leave it out")
    ordered = np.sort(pair, axis=1)
    order = np.lexsort(ordered.T)
    for i in np.flatnonzero(np.all(ordered[order][1:] == ordered[order][:-1], axis=1)).tolist():
        first, second = sorted((int(order[i]), int(order[i + 1])))
        raise ModelError("overlapping wires", f"wires {first} and {second} lie on each other; leave one out")


def _ports(model: Model, nodes: Nodes) -> None:
    seen: set[tuple[int, int]] = set()
    for row, port in enumerate(model.ports):
        if not 0 <= port.wire < len(model.wires) or port.end not in (0, 1):
            raise ModelError(
                "port on nothing",
                f"port {row} names wire {port.wire}, end {port.end}; there are {len(model.wires)} wires, ends 0 and 1",
            )
        if (port.wire, port.end) in seen:
            raise ModelError("two ports in one place", f"port {row} repeats wire {port.wire}, end {port.end}")
        seen.add((port.wire, port.end))
        if not (np.isfinite(port.impedance_ohm) and port.impedance_ohm > 0.0):
            raise ModelError(
                "port impedance", f"port {row} has {port.impedance_ohm} ohm, it must be positive"
            )
        node = nodes.wire_ends[port.wire, port.end]
        joined = np.count_nonzero(nodes.wire_ends == node) > 1 or bool(np.any(nodes.corners == node))
        grounded = model.plane is not None and abs(nodes.points[node, 2]) <= nodes.tolerance_m
        if not joined and not grounded:
            raise ModelError(
                "port on nothing",
                f"port {row} sits at end {port.end} of wire {port.wire}, which joins nothing there; join another "
                "wire or the sheet to that end",
            )
    # ports at one joint may not drive the same current
    for node in {int(nodes.wire_ends[p.wire, p.end]) for p in model.ports}:
        ports = sum(int(nodes.wire_ends[p.wire, p.end]) == node for p in model.ports)
        branches = int(np.count_nonzero(nodes.wire_ends == node)) + int(np.any(nodes.corners == node))
        if model.plane is not None and abs(nodes.points[node, 2]) <= nodes.tolerance_m:
            branches += 1
        if ports >= branches:
            raise ModelError(
                "two ports in one place",
                f"{ports} ports at a joint of {branches} are not independent; take one out",
            )


def _ground(model: Model, nodes: Nodes, ends: Array) -> None:
    low = -nodes.tolerance_m
    for i in np.flatnonzero(ends[:, :, 2].min(axis=1) < low).tolist():
        raise ModelError("below the ground", f"wire {i} reaches below z = 0, where the infinite ground is")
    for i in np.flatnonzero(model.triangles[:, :, 2].min(axis=1, initial=np.inf) < low).tolist():
        raise ModelError(
            "below the ground", f"triangle {i} reaches below z = 0, where the infinite ground is"
        )
    for i in np.flatnonzero(ends[:, :, 2].max(axis=1) <= -low).tolist():
        raise ModelError(
            "in the ground", f"wire {i} lies in the infinite ground and carries nothing; leave it out"
        )
    for i in np.flatnonzero(model.triangles[:, :, 2].max(axis=1, initial=-np.inf) <= -low).tolist():
        raise ModelError("in the ground", f"triangle {i} lies in the infinite ground; leave it out")


def _lengths(model: Model, ends: Array, highest_hz: float) -> list[Remark]:
    wavelength = 2.0 * np.pi / wavenumber(highest_hz)
    lengths = np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1) / wavelength
    sides = np.linalg.norm(np.roll(model.triangles, -1, axis=1) - model.triangles, axis=2).max(
        axis=1, initial=0.0
    )
    remarks = []
    for what, values, limit in (("segment", lengths, LONG), ("triangle side", sides / wavelength, LONG_SIDE)):
        if not len(values):
            continue
        worst = int(np.argmax(values))
        name = f"wire {worst}" if what == "segment" else f"triangle {worst}"
        if values[worst] > FAR_TOO_LONG:
            raise ModelError(
                f"{what} too long",
                f"{name} spans {values[worst]:.3f} wavelengths at {highest_hz / 1e9:.4g} GHz, at most "
                f"{FAR_TOO_LONG} can be solved; split it to a tenth or less",
            )
        if values[worst] > limit:
            remarks.append(
                Remark(
                    severity="warning",
                    code=f"long {what}",
                    message=f"{name} spans {values[worst]:.3f} wavelengths at {highest_hz / 1e9:.4g} GHz; refine "
                    "the mesh to a tenth of a wavelength or less",
                )
            )
    return remarks


def _thin(model: Model, ends: Array, highest_hz: float) -> list[Remark]:
    if not len(ends):
        return []
    wavelength = 2.0 * np.pi / wavenumber(highest_hz)
    radius = np.array([w.radius_m for w in model.wires])
    lengths = np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1)
    remarks = []
    short = np.flatnonzero(lengths < radius * (1.0 - 1e-9))
    if short.size:
        i = int(short[np.argmin(lengths[short] / radius[short])])
        remarks.append(
            Remark(
                severity="warning",
                code="segment shorter than its radius",
                message=f"wire {i} is {lengths[i] * 1e3:.3f} mm long with a radius of {radius[i] * 1e3:.3f} mm "
                f"({short.size} such); the current across a wire is not modelled, so this adds nothing",
            )
        )
    i = int(np.argmax(radius))
    if radius[i] > THICK * wavelength:
        remarks.append(
            Remark(
                severity="warning",
                code="wire not thin",
                message=f"wire {i} has a radius of {radius[i] / wavelength:.3f} wavelengths; currents are taken as "
                f"even round the wire, good below {THICK:.3f}",
            )
        )
    return remarks
