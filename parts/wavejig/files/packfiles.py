"""Every file of a pack: made from the inspected design, written, read back. Loads the CAD kernel.

The steps run in order and each notes its files for the manifest. A file that does not come back as it was
written stops the build.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from wavejig.batch.findings import batch_findings
from wavejig.batch.model import Batch, PrintPiece
from wavejig.batch.plan import plan as plan_batch
from wavejig.batch.plates import spacer_sets
from wavejig.files.batch_json import batch_data
from wavejig.files.batchfiles import write_batch
from wavejig.files.bending_json import bending_data
from wavejig.files.beside import Beside
from wavejig.files.design_json import check_design_json, design_data, write_design_json
from wavejig.files.drilldxf import drill_layers
from wavejig.files.dxf import BendLine, Drawing, Layer, write_dxf
from wavejig.files.dxfcheck import check_dxf
from wavejig.files.glb import ColouredMesh, check_glb, write_glb
from wavejig.files.kept import Kept, inputs
from wavejig.files.making_json import Made
from wavejig.files.manifest import Entry, check_manifest, write_manifest
from wavejig.files.mesh import Measure, Mesh, measure, tessellate
from wavejig.files.origin import RECIPE
from wavejig.files.printable import BED_MARGIN_MM, LONGEST_BRIDGE_MM, Printability, require_printable
from wavejig.files.steady import SteadySolid, steady
from wavejig.files.step import write_step
from wavejig.files.stepcheck import check_step, expectation
from wavejig.files.steps import check_steps, write_steps
from wavejig.files.stl import check_stl, write_stl
from wavejig.files.tables import check_bend_table, write_bend_table
from wavejig.files.threemf import check_3mf, write_3mf
from wavejig.fixture.bending.model import BendOrder
from wavejig.fixture.bending.order import fitted, plan_order
from wavejig.fixture.bending.strip import steps_svg
from wavejig.fixture.bending.tolerance import tolerance
from wavejig.fixture.liftout import lift_outs
from wavejig.fixture.nestcut import nest_cut
from wavejig.fixture.solid import printables as fixture_printables
from wavejig.radiator.drawing import views
from wavejig.radiator.solid import piece_solid
from wavejig.reflector.flat import FlatPattern, flat_pattern, with_kerf
from wavejig.reflector.solid import tray_solid
from wavejig.shop import Inspection
from wavejig.shop.bending import order_findings
from wavejig.shop.finding import Finding
from wavejig.shop.printing import span_findings
from wavejig.shop.ways import way_findings
from wavejig.spacer.effect import post_effect
from wavejig.spacer.solid import hold_downs as spacer_hold_downs
from wavejig.spacer.solid import printables as spacer_printables
from wavejig.spacer.withdraw import hold_downs_off_mm, withdrawals

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction

Colour = tuple[float, float, float]

# How parts look on a screen; taste, no source.
_METAL_COLOURS: dict[str, Colour] = {
    "copper": (0.80, 0.45, 0.28),
    "tinned-copper": (0.78, 0.76, 0.72),
    "brass": (0.80, 0.68, 0.32),
    "bronze": (0.66, 0.50, 0.26),
    "laminate-fr4": (0.72, 0.52, 0.30),
}
_OTHER_METAL: Colour = (0.72, 0.73, 0.75)
_PLASTIC: Colour = (0.30, 0.45, 0.60)


@dataclass(frozen=True, slots=True, kw_only=True)
class Step:
    """One stage of a build, for progress and for timing."""

    title: str
    run: Callable[[], None]


class PackFiles:
    """Writes one pack into `root`, a fresh folder."""

    def __init__(
        self,
        inspection: Inspection,
        root: Path,
        *,
        predict: bool = True,
        announce: Callable[[str], None] = lambda _: None,
        kept: Kept | None = None,
        beside: Beside | None = None,
    ) -> None:
        assert inspection.radiator and inspection.tray and inspection.spacer and inspection.fixture
        self.inspection = inspection
        self.design = inspection.design
        self.radiator = inspection.radiator
        self.tray = inspection.tray
        self.spacer = inspection.spacer
        self.fixture = inspection.fixture
        self.root = root
        self.predict = predict
        self.announce = announce
        self.kept = kept
        self.beside = beside or Beside(processes=1)
        self.prediction: Prediction | None = None
        self.bend_order = BendOrder(pieces=())
        self.entries: list[Entry] = []
        self.assembly: list[SteadySolid] = []
        self.pictured: list[tuple[ColouredMesh, str]] = []  # and "antenna", or the part it is a tool for
        self.prints: list[tuple[str, int, Printability]] = []
        self.printed: list[tuple[PrintPiece, Mesh, Measure]] = []  # counts for one set of spacers
        self.batch: Batch | None = None
        self.pattern: FlatPattern = flat_pattern(self.tray, self.design.name)

    def steps(self) -> Iterator[Step]:
        """The stages, in order."""
        yield Step(title="radiator", run=self.write_radiator)
        yield Step(title="reflector", run=self.write_reflector)
        yield Step(title="spacer", run=self.write_spacer)
        yield Step(title="fixture", run=self.write_fixture)
        yield Step(title="batch", run=self.write_batch)
        yield Step(title="assembly", run=self.write_assembly)
        if self.predict:
            yield Step(title="field", run=self.write_field)
        yield Step(title="design.json", run=self.write_design)

    def do(self, step: Step) -> None:
        """Run a step, or take over what it made in the last build where its inputs are the same."""
        if self.kept is None:
            step.run()
            return
        plans = {
            "radiator": self.radiator, "tray": self.tray, "spacer": self.spacer, "fixture": self.fixture,
            "pattern": self.pattern,
        }  # fmt: skip
        given = inputs(step.title, self.design, plans)
        lists: dict[str, list[Any]] = {
            "entries": self.entries, "assembly": self.assembly, "pictured": self.pictured, "prints": self.prints,
            "printed": self.printed,
        }  # fmt: skip
        before = {name: len(of) for name, of in lists.items()}
        left = self.kept.recall(step.title, given, self.root)
        if left is None:
            found = self.inspection.findings
            step.run()
            left = {name: of[before[name] :] for name, of in lists.items()}
            left["findings"] = tuple(f for f in self.inspection.findings if f not in found)
            left["bend_order"] = self.bend_order
            self.kept.remember(step.title, given, self.root, left["entries"], left)
            return
        for name, of in lists.items():
            of.extend(left[name])
        self._found(left["findings"])
        self.bend_order = left["bend_order"]
        self.fixture = fitted(self.fixture, self.bend_order)

    def write_recipe(self, recipe: bytes) -> None:
        """The recipe's own text; before the report, which lists it."""
        (self.root / RECIPE).write_bytes(recipe)
        self._note(RECIPE, "toml", "design", "")

    def finish(self, versions: dict[str, str], made: dict[str, Any]) -> None:
        """The manifest, and the last look at the whole folder."""
        self.beside.settle()
        write_manifest(self.root, self.entries, versions, made)
        check_manifest(self.root)

    def totals(self) -> tuple[int, int]:
        """Number of files and bytes on disk, manifest included."""
        sizes = [p.stat().st_size for p in self.root.rglob("*") if p.is_file()]
        return len(sizes), sum(sizes)

    # -- parts --------------------------------------------------------------------------------------

    def write_radiator(self) -> None:
        """radiator.step, radiator.dxf, bend-table.csv."""
        metal = _METAL_COLOURS.get(self.design.radiator.metal.name, _OTHER_METAL)
        solids = [
            steady(
                f"radiator {p.role}" if p.role != "tube" else "tube",
                piece_solid(p),
                metal if p.role not in ("tube", "inner") else _METAL_COLOURS["copper"],
            )
            for p in self.radiator.pieces
        ]
        self._step(solids, "radiator/radiator.step", "radiator")
        self.assembly += solids
        layers: list[Layer] = []
        for view in views(self.radiator):
            layers.append(
                Layer(name=f"{view.role}-outline", entities=(*view.outlines, *view.ends_on), colour=7)
            )
            layers.append(
                Layer(name=f"{view.role}-centreline", entities=view.centrelines, colour=1, linetype="CENTER")
            )
        self._dxf(tuple(ly for ly in layers if ly.entities), "radiator/radiator.dxf", "radiator", cut=False)
        path = self._path("radiator/bend-table.csv")
        write_bend_table(self.radiator, path)
        check_bend_table(path, self.radiator)
        self._note("radiator/bend-table.csv", "csv", "radiator", "mm")

    def write_reflector(self) -> None:
        """tray.step, the blank with bends and marks, and the cut-only blanks in both versions.

        A dish of the user's own is only drilled: own.step, and its floor with what is drilled where.
        """
        metal = _METAL_COLOURS.get(self.design.reflector.metal.name, _OTHER_METAL)
        solid = steady("reflector", tray_solid(self.tray), metal)
        own = self.tray.own is not None
        self._step([solid], "reflector/own.step" if own else "reflector/tray.step", "reflector")
        self.assembly.append(solid)
        if own:
            self._dxf(
                drill_layers(self.tray, self.pattern), "reflector/drill-template.dxf", "reflector", cut=False
            )
            return
        pattern = self.pattern
        if self.design.cutter.offset_in_file:
            pattern = with_kerf(pattern, self.design.cutter.kerf_mm)
        drawing = Drawing(
            cut=(pattern.outline, *pattern.holes),
            bends=tuple(
                BendLine(start=b.line[0], end=b.line[1], direction="up", angle_deg=b.angle_deg)
                for b in pattern.bends
            ),
            marks=pattern.marks,
        )
        area = pattern.area_mm2
        self._dxf(drawing.layers(), "reflector/blank.dxf", "reflector", area=area)
        bare = Drawing(cut=drawing.cut).layers()
        self._dxf(bare, "reflector/blank-cut.dxf", "reflector", area=area)
        self._dxf(bare, "reflector/blank-cut-r12-mm.dxf", "reflector", area=area, version="R12")

    def write_spacer(self) -> None:
        """The printed standoff."""
        for part in spacer_printables(self.design, self.radiator, self.spacer):
            self._printable(part.name, part.solid, "spacer")
            self.assembly.append(steady(part.name, part.placed(), _PLASTIC))
        # drawn as they are made, not sprung open, so they are not part of the assembly
        shapes = {part.name: part for part in spacer_hold_downs(self.design, self.spacer)}
        counts = Counter(h.name for h in self.spacer.hold_downs)
        for name, part in shapes.items():
            self._printable(name, part.solid, "spacer", counts[name], shown=True)

    def write_fixture(self) -> None:
        """The bending fixture and the check nest, a file a printed piece."""
        self.bend_order = plan_order(self.design, self.radiator, self.fixture)
        self.fixture = fitted(self.fixture, self.bend_order)
        for part in fixture_printables(self.fixture):
            self._printable(part.name, part.solid, "fixture", part.count)
        cut = nest_cut(self.design, self.fixture.nest)
        layers = Drawing(cut=cut.cut, marks=cut.marks).layers()
        self._dxf(layers, "fixture/check-nest-cut.dxf", "fixture", blanks=cut.parts)
        self._found(order_findings(self.bend_order))
        path = self._path("fixture/steps.svg")
        write_steps(steps_svg(self.design, self.radiator, self.fixture, self.bend_order), path)
        check_steps(path, self.bend_order)
        self._note("fixture/steps.svg", "svg", "fixture", "mm")

    def write_batch(self) -> None:
        """Nests, plates, cut plan and bill of materials for the whole quantity."""
        sets = spacer_sets(self.design)
        pieces = [replace(p, count=p.count * sets) if p.part == "spacer" else p for p, _, _ in self.printed]
        self.batch = plan_batch(
            self.design, self.radiator, self.tray, self.pattern, self.spacer, self.fixture, pieces
        )
        self._found(batch_findings(self.batch))
        meshes = {piece.name: (mesh, figures) for piece, mesh, figures in self.printed}
        self.entries += write_batch(self.batch, self.design, self.tray, self.pattern, meshes, self.root)

    def write_assembly(self) -> None:
        """The antenna put together, for the eye: STEP and GLB."""
        pieces: list[tuple[ColouredMesh, Measure]] = []
        for solid in (s.named() for s in self.assembly):
            mesh = tessellate(solid.shape, name=solid.name)
            pieces.append((ColouredMesh(mesh=mesh, colour=solid.colour), measure(solid.shape)))
        self._step(self.assembly, "assembly.step", "assembly", [m for _, m in pieces], proven=True)
        self.pictured += [(piece, "antenna") for piece, _ in pieces]
        path = self._path("assembly.glb")
        write_glb([piece for piece, _ in pieces], path)
        self.beside.check(check_glb, path, [(piece.mesh.name, m, piece.colour) for piece, m in pieces])
        self._note("assembly.glb", "glb", "assembly", "m")

    def write_field(self) -> None:
        """The electromagnetic model, the predicted match and pattern; findings on what they miss."""
        from wavejig.field.from_design import model_from_design
        from wavejig.field.prediction import predict
        from wavejig.files.fieldfiles import write_field
        from wavejig.shop.predicted import prediction_findings

        model = model_from_design(self.design)

        def solve() -> Prediction:
            return predict(self.design, model=model, announce=self.announce)

        self.prediction = solve() if self.kept is None else self.kept.solve(self.design, model, solve)
        for name, kind, units in write_field(self.root / "field", model, self.prediction):
            self._note(f"field/{name}", kind, "field", units)
        self._found(prediction_findings(self.prediction))

    def write_design(self) -> None:
        """design.json."""
        made = Made(
            lift_outs=lift_outs(self.design, self.radiator, self.fixture),
            withdrawals=withdrawals(self.design, self.radiator, self.spacer),
            hold_downs_off=hold_downs_off_mm(self.design, self.radiator, self.spacer),
            posts=post_effect(self.design, self.radiator, self.spacer.posts),
            prints=tuple(self.prints),
        )
        self._found(way_findings(made.lift_outs, made.withdrawals))
        data = design_data(
            self.design,
            self.radiator,
            self.pattern,
            self.fixture,
            self.spacer,
            self.inspection.findings,
            made,
        )
        data["fixture"] |= bending_data(
            self.design,
            self.radiator,
            self.fixture,
            self.bend_order,
            tolerance(self.design, self.radiator, self.fixture),
        )
        if self.batch is not None:
            data["batch"] = batch_data(self.batch)
        path = self._path("design.json")
        write_design_json(data, path)
        check_design_json(path, data)
        self._note("design.json", "json", "design", "mm")

    def _found(self, more: Iterable[Finding]) -> None:
        """Findings that only a build can make."""
        found = (*self.inspection.findings, *more)
        self.inspection = replace(self.inspection, findings=tuple(sorted(found, key=lambda f: f.sort_key)))

    # -- files --------------------------------------------------------------------------------------

    def _printable(self, name: str, shape: Any, part: str, count: int = 1, *, shown: bool = False) -> None:
        """STEP, STL and 3MF of one printed piece, which must print without support on the given bed."""
        solid = steady(name, shape, _PLASTIC)
        shape = solid.named().shape
        mesh, figures = tessellate(shape, name=name), measure(shape)
        self._step([solid], f"{part}/{name}.step", part, [figures])
        printer = self.design.printer
        bed = (printer.bed_x_mm, printer.bed_y_mm, printer.bed_z_mm)
        judged = require_printable(mesh, bed, BED_MARGIN_MM)
        self._found(span_findings(name, judged.bridge_mm, LONGEST_BRIDGE_MM))
        self.prints.append((part, count, judged))
        if shown or part != "spacer":  # whose pieces are shown in their places in the assembly
            self.pictured.append((ColouredMesh(mesh=mesh, colour=_PLASTIC), part))
        self._for_batch(name, part, count, mesh, figures)
        title = f"{self.design.name} {name}"
        stl, threemf = self._path(f"{part}/{name}.stl"), self._path(f"{part}/{name}.3mf")
        write_stl(mesh, stl, title)
        self.beside.check(check_stl, stl, figures)
        self._note(f"{part}/{name}.stl", "stl", part, "mm")
        write_3mf([mesh], threemf, title)
        self.beside.check(check_3mf, threemf, {name: figures})
        self._note(f"{part}/{name}.3mf", "3mf", part, "mm")

    def _for_batch(self, name: str, part: str, count: int, mesh: Mesh, figures: Measure) -> None:
        """Note a printed piece for the plates."""
        x0, y0, z0, x1, y1, z1 = figures.bounds_mm
        plastic = self.design.spacer.plastic if part == "spacer" else self.design.printer.plastic
        piece = PrintPiece(
            part=part,
            name=name,
            plastic=plastic,
            size_mm=(x1 - x0, y1 - y0),
            height_mm=z1 - z0,
            volume_mm3=figures.volume_mm3,
            count=count,
        )
        self.printed.append((piece, mesh, figures))

    def _step(
        self,
        made: list[SteadySolid],
        name: str,
        part: str,
        figures: list[Measure] | None = None,
        *,
        proven: bool = False,
    ) -> None:
        path, solids = self._path(name), [solid.named() for solid in made]
        write_step(solids, path, f"{self.design.name} {part}", proven=proven)
        known = figures or [measure(solid.shape) for solid in solids]
        wanted = [expectation(solid, m) for solid, m in zip(solids, known, strict=True)]
        self.beside.check(check_step, path, wanted)
        self._note(name, "step", part, "mm")

    def _dxf(
        self,
        layers: tuple[Layer, ...],
        name: str,
        part: str,
        *,
        area: float | None = None,
        version: Any = "R2010",
        cut: bool = True,
        blanks: int = 1,
    ) -> None:
        path = self._path(name)
        write_dxf(layers, path, version=version, title=f"{self.design.name} {part}")
        if cut:
            self.beside.check(check_dxf, path, layers, version=version, cut_area_mm2=area, blanks=blanks)
        else:
            self.beside.check(check_dxf, path, layers, version=version)
        self._note(name, "dxf", part, "mm")

    def _path(self, name: str) -> Path:
        path = self.root / name
        path.parent.mkdir(exist_ok=True)
        return path

    def _note(self, path: str, kind: str, part: str, units: str) -> None:
        self.entries.append(Entry(path=path, kind=kind, part=part, units=units))
