"""The floor of a build: `python tests/bench/floor.py RECIPE PACK FOLDER` makes a pack's solids and drawings anew.

What nobody who builds on these libraries gets round: import the kernel, make the same solids by the same kernel
calls, write every STEP, STL, 3MF, GLB and DXF of the pack, and read each back once with the usual reader. No
planning, no judging, no rounding, no bending order, no figures, no sheets: plans are made before the clock
starts, and DXF documents are taken ready-made from the pack, which is less than drawing them.
Prints seconds of processor by stage as JSON.
"""

from __future__ import annotations

import json
import sys
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))


def main(recipe: Path, pack: Path, out: Path) -> dict[str, float]:
    """Stage times."""
    from wavejig.fixture.bending.order import fitted, plan_order
    from wavejig.pack import inspect_recipe

    i = inspect_recipe(recipe)[1]
    assert i.radiator and i.tray and i.spacer and i.fixture
    fixture = fitted(i.fixture, plan_order(i.design, i.radiator, i.fixture))

    spent: dict[str, float] = {}
    clock = _clock(spent)
    next(clock)
    import cadquery as cq

    clock.send("import the kernel")
    import ezdxf
    import trimesh

    from wavejig.files.mesh import tessellate
    from wavejig.fixture.solid import printables as fixture_pieces
    from wavejig.radiator.solid import piece_solid
    from wavejig.reflector.solid import tray_solid
    from wavejig.spacer.solid import hold_downs
    from wavejig.spacer.solid import printables as spacer_pieces

    clock.send("import the rest")
    wires = {p.role: piece_solid(p) for p in i.radiator.pieces}
    tray = tray_solid(i.tray)
    spacers = spacer_pieces(i.design, i.radiator, i.spacer)
    prints = {f"spacer/{p.name}": p.solid for p in (*spacers, *hold_downs(i.design, i.spacer))}
    prints |= {f"fixture/{p.name}": p.solid for p in fixture_pieces(fixture)}
    antenna = {**wires, "tray": tray, **{p.name: p.placed() for p in spacers}}
    clock.send("make solids")
    steps: dict[Path, dict[str, Any]] = {out / "radiator.step": wires, out / "tray.step": {"tray": tray}}
    steps |= {out / f"{name.replace('/', '-')}.step": {name: solid} for name, solid in prints.items()}
    steps[out / "assembly.step"] = antenna
    for path, solids in steps.items():
        whole = cq.Workplane(cq.Compound.makeCompound(list(solids.values())))
        cq.exporters.export(whole, str(path), opt={"write_pcurves": False})
    clock.send("write STEP")
    meshes = {}
    for name, solid in {**prints, **{f"antenna/{name}": s for name, s in antenna.items()}}.items():
        mesh = tessellate(solid, name=name)  # quicker than the library's own loop over corners
        meshes[name] = trimesh.Trimesh(mesh.vertices, mesh.faces, process=False)
    clock.send("mesh")
    files: list[Path] = []
    for name in prints:
        for kind in ("stl", "3mf"):
            files.append(out / f"{name.replace('/', '-')}.{kind}")
            meshes[name].export(files[-1])
    for number, _ in enumerate(sorted(pack.glob("print/plate-*.3mf")), start=1):
        files.append(out / f"plate-{number}.3mf")
        trimesh.Scene({name: meshes[name] for name in prints}).export(files[-1])
    files.append(out / "assembly.glb")
    trimesh.Scene({name: mesh for name, mesh in meshes.items() if name.startswith("antenna/")}).export(
        files[-1]
    )
    clock.send("write STL, 3MF, GLB")
    for path, solids in steps.items():
        back = cq.importers.importStep(str(path)).val()
        box, wanted = back.BoundingBox(), sum(s.Volume() for s in solids.values())
        assert back.isValid() and abs(back.Volume() - wanted) < 1e-6 * wanted and box.DiagonalLength > 0.0
    clock.send("read STEP back")
    for path in files:
        for back in trimesh.load_scene(path).geometry.values():
            assert back.is_watertight and back.volume > 0.0
    clock.send("read STL, 3MF, GLB back")
    drawn = [ezdxf.readfile(path) for path in sorted(pack.rglob("*.dxf"))]
    clock.send("")
    for number, document in enumerate(drawn):
        document.saveas(out / f"{number}.dxf")
    clock.send("write DXF")
    for number in range(len(drawn)):
        assert not ezdxf.readfile(out / f"{number}.dxf").audit().errors
    clock.send("read DXF back")
    spent.pop("")
    return spent


def _clock(spent: dict[str, float]) -> Iterator[None]:
    """Notes processor time since the last call under the name that is sent."""
    last = time.process_time()
    while True:
        name = yield
        now = time.process_time()
        spent[name] = now - last
        last = time.process_time()


if __name__ == "__main__":
    target = Path(sys.argv[3])
    target.mkdir(parents=True, exist_ok=True)
    print(json.dumps(main(Path(sys.argv[1]), Path(sys.argv[2]), target)))
