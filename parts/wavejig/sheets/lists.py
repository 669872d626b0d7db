"""Tables of the build sheet as plain text: materials, cut list, bends, first article, bench. No layout here."""

from __future__ import annotations

from collections import Counter

from wavejig.batch.bill import fixture_pins
from wavejig.batch.model import Batch
from wavejig.batch.plates import spacer_sets
from wavejig.design.model import Design
from wavejig.fixture.bending.model import BARE, BendOrder
from wavejig.fixture.model import Fixture
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.checks import (
    Rows,
)
from wavejig.sheets.common import sheet_text, wire_text
from wavejig.sheets.feedsteps import NAMES, screw_for
from wavejig.sheets.model import number
from wavejig.sheets.ownwords import size_text
from wavejig.spacer.model import Spacer


def materials(design: Design, radiator: Radiator, pattern: FlatPattern, spacer: Spacer) -> Rows:
    """(part, material, size, for one, for all) of what goes into the antennas."""
    n = design.quantity
    rows: list[tuple[str, ...]] = []
    tube = design.feed.tube
    for p in radiator.pieces:
        if p.role == "inner":
            continue
        metal = (
            f"{tube.name}, semi-rigid" if p.role == "tube" and tube else wire_text(design).rsplit(",", 1)[0]
        )
        length = bought_length_mm(radiator, p)
        size = f"\u00d8{number(p.diameter_mm, 3)} \u00d7 {number(length, 1)} mm"
        rows.append((NAMES[p.role], metal, size, "1", f"{n} = {number(n * length / 1000.0, 2)} m"))
    w, h = pattern.size_mm
    if design.reflector.own is not None:
        rows.append(("your own dish", sheet_text(design), size_text(design), "1", f"{n}"))
    else:
        rows.append(
            ("reflector blank", sheet_text(design), f"{number(w)} \u00d7 {number(h)} mm flat", "1", f"{n}")
        )
    feed = design.feed
    if feed.connector is not None:
        rows.append(("panel connector", feed.connector.name, feed.connector.series, "1", f"{n}"))
        rows.append(("mating plug, to solder with", feed.connector.series, "", "-", "1"))
        if feed.flange_holes:
            screw = screw_for(feed.connector.hole_diameter_mm) or "screw"
            rows.append(
                (
                    "flange screw, nut, washer",
                    "stainless or brass",
                    screw,
                    f"{len(feed.flange_holes)}",
                    f"{n * len(feed.flange_holes)}",
                )
            )
        if feed.ground == "lug":
            rows.append(("tinned solder lug", "", "", "1", f"{n}"))
    for post in Counter(p.screw for p in spacer.posts).items():
        rows.append(("post screw", "stainless", post[0], f"{post[1]}", f"{n * post[1]}"))
    mount = Counter(h.diameter_mm for h in design.reflector.holes if h.purpose == "mounting")
    if mount and design.pole_mm:
        hole, count = next(iter(mount.items()))
        what = f"pole clamp (U-bolt), pole \u00d8{number(design.pole_mm)}"
        size = f"for \u00d8{number(hole)} holes"
        rows.append((what, "stainless", size, f"{count // 2}", f"{n * (count // 2)}"))
    return tuple(rows)


def tools(design: Design, fixture: Fixture, spacer: Spacer) -> Rows:
    """(part, material, pieces) of what is printed or needed once for the batch."""
    rows: list[tuple[str, ...]] = []
    printed = f"printed, {design.printer.plastic}"
    plates = [fixture.nest]
    if fixture.style == "stop-block" and fixture.stop_block is not None:
        plates.insert(0, fixture.stop_block.plate)
    else:
        plates.insert(0, fixture.board)
    if fixture.template is not None:
        plates.append(fixture.template.plate)
    for plate in plates:
        tiles = len(plate.tiles)
        many = f", in {tiles} keyed tiles" if tiles > 1 else ""
        rows.append((f"{plate.name}{many}", printed, f"{max(tiles, 1)}"))
    for gauge in fixture.gauges:
        rows.append((f"{gauge.plate.name}, for {number(gauge.loaded_angle_deg, 1)}\u00b0", printed, "1"))
    for disc in fixture.discs:
        rows.append((f"{disc.name}, \u00d8{number(disc.diameter_mm)}", printed, "1"))
    for b in fixture.blocks:
        rows.append((f"{b.name}, for {number(b.loaded_angle_deg, 1)}\u00b0", printed, "1"))
    if fixture.style == "board" and fixture.clamp is not None:
        rows.append((f"clamp, with 2 screws {fixture.clamp.screw}", printed, "1"))
    plastic = f"printed, {spacer.plastic}"
    if spacer.style == "block":
        names = ", ".join(p.name for p in spacer.pieces)
        sets = spacer_sets(design)
        many = f", {sets} sets" if sets > 1 else ""
        rows.append((f"spacer: {names}{many}", plastic, f"{sets * len(spacer.pieces)}"))
        for name, count in Counter(h.name for h in spacer.hold_downs).items():
            rows.append((f"{name}, presses the spacer on while soldering", plastic, f"{sets * count}"))
    else:
        rows.append(("spacer posts (they stay)", plastic, f"{design.quantity * len(spacer.posts)}"))
    for (diameter, turned), count in sorted(fixture_pins(design, fixture).items()):
        what = "pin, turned to" if turned else "dowel pin"
        length = f"\u00d8{number(diameter, 3)} \u00d7 {number(fixture.pins.dowel_length_mm)} mm"
        rows.append((f"{what} {length}", "steel", f"{count}"))
    return tuple(rows)


BATCH_HEAD = ("to make them all", "how much", "how", "file")


def batch(made: Batch) -> Rows:
    """Rows of `BATCH_HEAD`: sheets, lengths of wire, prints, and what it costs where prices are given."""
    rows: list[tuple[str, ...]] = []
    nest = made.nest
    if nest is not None:
        n = len(nest.sheets)
        grain = {"any": ""}.get(nest.blank_grain, f"; grain along {nest.blank_grain} of every blank")
        w, h = (number(v) for v in nest.stock_mm)
        how = f"{nest.per_sheet} on a full one, {100.0 * nest.utilisation:.0f} % of the metal used{grain}"
        files = "reflector/nest-1.dxf" + (f" to {n}" if n > 1 else "")
        rows.append((f"stock sheet {w} \u00d7 {h} mm", f"{n}", how, files))
    for plan in made.wires:
        what = {"wire": "wire", "leg-wire": "wire of the legs", "tube": "tube"}[plan.kind]
        much = f"one length of {plan.needed_mm / 1000.0:.2f} m or more"
        if plan.stock_mm is not None:
            much = f"{plan.lengths} of {number(plan.stock_mm / 1000.0, 3)} m"
        ways = []
        for pattern in plan.patterns[:3]:
            cut = " + ".join(f"{count} {NAMES[role]}" for role, count in pattern.pieces)
            ways.append(f"{pattern.times} cut to {cut}" if plan.stock_mm is not None else f"cut to {cut}")
        if len(plan.patterns) > 3:
            ways.append("more in the file")
        how = "; ".join(ways)
        if plan.stock_mm is not None:
            how += f"; {100.0 * plan.waste:.0f} % left over"
        rows.append((f"{what} \u00d8{number(plan.diameter_mm, 3)} mm", much, how, "radiator/cut-plan.csv"))
    prints = made.prints
    for number_, plate in enumerate(prints.plates if prints else (), start=1):
        inside = Counter(spot.name for spot in plate.spots)
        how = ", ".join(name if n == 1 else f"{n} {name}" for name, n in inside.items())
        rows.append((f"print in {plate.plastic}", f"{plate.times}", how, f"print/plate-{number_}.3mf"))
    bill = made.bill
    if bill.total is not None:
        rest = f"; {bill.unpriced} lines of the bill have no price" if bill.unpriced else ""
        much, how = f"{bill.total:.2f} {bill.currency}".strip(), f"at the recipe's prices{rest}"
        rows.append(("cost", much, how, "bill-of-materials.csv"))
    return tuple(rows)


BEND_HEAD = ("no.", "from start", "feed", "rotation", "angle", "bend to", "R inside", "R loaded", "on")


def bends(
    radiator: Radiator, fixture: Fixture, order: BendOrder | None = None
) -> tuple[tuple[str, Rows], ...]:
    """The bend table of each piece that has bends: its heading and rows (see `BEND_HEAD`)."""
    stations = {s.number: s for s in fixture.stations}
    steps = [s for p in (order.pieces if order is not None else ()) if p.found for s in p.steps]
    bent_bare = {(s.piece, s.number) for s in steps if s.tool == BARE}
    out = []
    for p in radiator.pieces:
        if not p.bends:
            continue
        rows = []
        for b in p.bends:
            on = "by hand"
            if p is radiator.main and b.number in stations:
                s = stations[b.number]
                where = "board" if fixture.style == "board" else "stop block"
                on = f"{where}, {s.tool} \u00d8{number(s.tool_diameter_mm)}, {s.turn}"
            elif p.role != "inner":
                block = next(
                    (k.name for k in fixture.blocks if abs(k.loaded_angle_deg - b.loaded_angle_deg) < 0.05),
                    "",
                )
                bare = (p.role, b.number) in bent_bare
                on = f"dowel of {block}, by hand" if bare and block else block or on
            angles = (f"{number(a, 1)}\u00b0" for a in (b.rotation_deg, b.angle_deg, b.loaded_angle_deg))
            radii = (number(b.inside_radius_mm), number(b.loaded_inside_radius_mm))
            rows.append((str(b.number), number(b.from_start_mm), number(b.feed_mm), *angles, *radii, on))
        trim = ""
        if p.trim_mm:
            first = trimmed_before(order, p.role)
            when = "after bending" if first is None else f"before bend {first}"
            trim = f", of which {number(p.trim_mm)} mm at the far end are cut off {when}"
        title = (
            f"{NAMES[p.role]}: \u00d8{number(p.diameter_mm, 3)} mm, cut {number(p.cut_length_mm, 1)} "
            f"mm{trim}; "
            f"finished length {number(p.developed_length_mm)} mm"
        )
        out.append((title[0].upper() + title[1:], tuple(rows)))
    return tuple(out)


def trimmed_before(order: BendOrder | None, role: str) -> int | None:
    """The bend before which a piece's extra length is cut off; None when it stays on until all are made."""
    steps = [
        s for p in (order.pieces if order is not None else ()) if p.piece == role and p.found for s in p.steps
    ]
    return next((s.number for s in steps if s.trim_first), None)
