"""The order of work at the bench, as sentences with this design's numbers in them. Plain text, no markup.

The practice (plug screwed on, heat clips, big joint first, flux off, a loop reads as a short) is common
practice, no source.
"""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.bending.model import BendOrder
from wavejig.fixture.model import Fixture
from wavejig.fixture.nest import LIES
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm
from wavejig.sheets.feedsteps import (
    NAMES,
    leg_steps,
    tube_steps,
)
from wavejig.sheets.lists import trimmed_before
from wavejig.sheets.model import number
from wavejig.sheets.ownwords import own_drilling, own_measuring
from wavejig.spacer.model import Spacer


def assembly_steps(
    design: Design, radiator: Radiator, spacer: Spacer, fixture: Fixture, order: BendOrder | None = None
) -> tuple[str, ...]:
    """Every step from the cut wire to the sealed antenna, in order; order: of the bends, None where unplanned."""
    return tuple(
        (
            *(() if design.reflector.own is None else own_measuring(design)),
            *_wire(design, radiator, fixture, order),
            *_reflector(design, fixture),
            *(
                leg_steps(design, radiator, spacer, fixture)
                if design.feed.style == "legs"
                else tube_steps(design, radiator, spacer)
            ),
            *_finish(design),
        )
    )


def _wire(design: Design, radiator: Radiator, fixture: Fixture, order: BendOrder | None) -> Iterator[str]:
    r = design.radiator
    cuts = "; ".join(
        f"{NAMES[p.role]} {number(bought_length_mm(radiator, p), 1)} mm"
        for p in radiator.pieces
        if p.role != "inner"
    )
    yield (
        f"Cut: {cuts}. Straighten the wire (clamp one end, pull it a little), cut its ends "
        "square, take off the burr."
    )
    bare = number(r.lap_mm + 2.0, 1)
    if r.insulation_thickness_mm > 0.0:
        yield (
            f"Scrape the insulation off to bright metal, all round, {bare} mm long wherever a joint "
            "comes (enamel: "
            "knife or abrasive paper; hot solder does not go through every enamel). Leave it on "
            "elsewhere: it is in "
            "the design."
        )
    else:
        yield f"Clean the wire bright {bare} mm long wherever a joint comes."
    for gauge in fixture.gauges:
        yield (
            f"Trial bend: bend an offcut of this wire to {number(gauge.loaded_angle_deg, 1)}\u00b0 on the "
            f"{gauge.plate.name}, let go and read the angle it keeps. If it is far from the expected one, do "
            "not bend the batch."
        )
    yield (
        "Bend as the pictures say, in their order; the bend table has the figures. Wire ends spring: eye "
        "protection, and nobody in front of the end."
    )
    yield (
        f"Lay the radiator in the check nest, {LIES[design.feed.style]}. It must drop in by itself; if not, correct "
        "it by hand or cut another, do not press."
    )
    spare = radiator.main.trim_mm
    if spare and trimmed_before(order, "main") is None:
        yield (
            f"Cut the extra {number(spare)} mm off the main wire's END: at the nest's mark, or "
            f"{number(radiator.main.developed_length_mm, 1)} mm from START along the wire."
        )


def _reflector(design: Design, fixture: Fixture) -> Iterator[str]:
    if design.reflector.own is not None:
        yield from own_drilling(design, fixture)
    elif design.reflector.lips:
        yield (
            "Fold the blank: the face marked THIS FACE TO RADIATOR is the inside, every lip folds "
            "towards it. Measure "
            "the first one (first-article table) before folding the rest. Gloves: sheet edges cut."
        )
    else:
        yield "Deburr the reflector; find the face marked THIS FACE TO RADIATOR. Gloves: sheet edges cut."


def _finish(design: Design) -> Iterator[str]:
    yield (
        "Wash the flux off every joint (alcohol, or water if the flux says so) and let it dry: what "
        "stays corrodes and "
        "spoils the match."
    )
    yield (
        "Continuity, centre of the connector to its shell: it reads as a SHORT, below 1 \u03a9. That is "
        "right: the "
        "radiator is a closed loop. An open circuit is a broken joint. A meter cannot show a wrong "
        "short at the feed: "
        "look for whiskers there."
        if design.feed.style == "legs"
        else "Continuity, inner conductor to wall at the tube's far end: it reads as a SHORT, below 1 "
        "\u03a9. That is "
        "right: the radiator is a closed loop. An open circuit is a broken joint. A meter cannot show a "
        "wrong short at "
        "the feed: look for whiskers there."
    )
    yield (
        "Measure the match on the bench (table below), radiator pointing at free space, nothing "
        "within 1 m in front."
    )
    drained = any(h.purpose == "drain" for h in design.reflector.holes)
    yield (
        "Seal: clear lacquer thinly on the joints, sealant round the feed on the back"
        + (", drain holes left open." if drained else ".")
    )
