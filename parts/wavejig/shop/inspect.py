"""Plans every part of a design and gathers the findings; parts that cannot be planned become errors."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.fixture.plan import plan as plan_fixture
from wavejig.radiator.feedlegs import PlanError
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.reflector.model import Tray, TrayError
from wavejig.reflector.tray import corner_practice
from wavejig.reflector.tray import plan as plan_tray
from wavejig.shop.bench import bench_findings
from wavejig.shop.bending import springback_findings
from wavejig.shop.electrical import electrical_findings
from wavejig.shop.feed import conflict_findings, feed_findings, value_findings
from wavejig.shop.finding import ERROR, Finding
from wavejig.shop.outdoors import outdoor_findings
from wavejig.shop.own import own_findings
from wavejig.shop.printing import nozzle_findings
from wavejig.shop.prints import fixture_findings, spacer_findings
from wavejig.shop.sheet import fold_material_findings, hole_findings, sheet_findings
from wavejig.shop.wire import wire_findings
from wavejig.spacer.model import Spacer
from wavejig.spacer.plan import plan as plan_spacer


@dataclass(frozen=True, slots=True, kw_only=True)
class Inspection:
    """A design, the plans of its parts (None where one cannot be planned) and the findings, worst first."""

    design: Design
    radiator: Radiator | None
    tray: Tray | None
    spacer: Spacer | None
    fixture: Fixture | None
    findings: tuple[Finding, ...]

    @property
    def can_be_made(self) -> bool:
        """No finding is an error."""
        return all(f.severity != ERROR for f in self.findings)


def inspect(design: Design) -> Inspection:
    """Plan and judge a design. Never raises for a design that merely cannot be made."""
    radiator, tray, spacer, fixture = None, None, None, None
    found: list[Finding] = [
        *conflict_findings(design),
        *fold_material_findings(design),
        *hole_findings(design),
    ]
    try:
        radiator = plan_radiator(design)
    except PlanError as err:
        found.append(
            _cannot("radiator-cannot-be-bent", str(err), "radiator", "Change the number the message names.")
        )
    try:
        tray = plan_tray(design.reflector, corner_practice(design.cutter))
    except TrayError as err:
        # holes that meet or leave the base have been told already, with their remedy
        if not any(f.severity == ERROR and f.where.startswith("reflector.") for f in found):
            found.append(
                _cannot("tray-cannot-be-folded", str(err), "reflector", "Change the tray's numbers.")
            )
    found += feed_findings(design)
    found += value_findings(design)
    found += outdoor_findings(design)
    found += bench_findings(design)
    found += electrical_findings(design, radiator)
    if tray is not None:
        found += sheet_findings(design, tray)
        found += own_findings(design, tray, radiator)
    if radiator is not None:
        found += wire_findings(design, radiator)
        spacer = plan_spacer(design, radiator)
        found += spacer_findings(design, spacer)
        fixture = plan_fixture(design, radiator, None if tray is None else tray.outline)
        found += fixture_findings(design, fixture)
        found += nozzle_findings(design, spacer, fixture)
        found += springback_findings(design, radiator, fixture)
    return Inspection(
        design=design,
        radiator=radiator,
        tray=tray,
        spacer=spacer,
        fixture=fixture,
        findings=tuple(sorted(_unique(found), key=lambda f: f.sort_key)),
    )


def _cannot(code: str, message: str, where: str, remedy: str) -> Finding:
    return Finding(code=code, severity=ERROR, message=message, remedy=remedy, where=where)


def _unique(findings: list[Finding]) -> Iterator[Finding]:
    seen: set[tuple[str, str]] = set()
    for f in findings:
        if (f.code, f.message) not in seen:
            seen.add((f.code, f.message))
            yield f
