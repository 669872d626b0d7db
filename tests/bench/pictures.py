"""Pictures of what a pack holds, for looking at and for the README: python tests/bench/pictures.py PACK... [--to DIR]

Renders every STL and the assembly of each pack to PNG with VTK, and every DXF with matplotlib.
"""

from __future__ import annotations

import argparse
from pathlib import Path

import ezdxf
import matplotlib
import vtk
from ezdxf.addons.drawing import Frontend, RenderContext
from ezdxf.addons.drawing.config import BackgroundPolicy, Configuration
from ezdxf.addons.drawing.matplotlib import MatplotlibBackend

matplotlib.use("agg")
import matplotlib.pyplot as plt


def render_solid(source: Path, target: Path, view: tuple[float, float, float] = (0.6, -1.0, 0.8)) -> None:
    """One STL or GLB to PNG, seen from `view`."""
    renderer = vtk.vtkRenderer()
    renderer.SetBackground(1.0, 1.0, 1.0)
    window = vtk.vtkRenderWindow()
    window.SetOffScreenRendering(1)
    window.SetMultiSamples(8)
    window.SetSize(1100, 800)
    window.AddRenderer(renderer)
    if source.suffix == ".glb":
        importer = vtk.vtkGLTFImporter()
        importer.SetFileName(str(source))
        importer.SetRenderWindow(window)
        importer.Update()
        # glTF stands y up, we z up
        view = (view[0], view[2], -view[1])
    else:
        reader = vtk.vtkSTLReader()
        reader.SetFileName(str(source))
        normals = vtk.vtkPolyDataNormals()
        normals.SetInputConnection(reader.GetOutputPort())
        normals.SetFeatureAngle(30.0)
        normals.SplittingOn()
        mapper = vtk.vtkPolyDataMapper()
        mapper.SetInputConnection(normals.GetOutputPort())
        actor = vtk.vtkActor()
        actor.SetMapper(mapper)
        actor.GetProperty().SetColor(0.45, 0.6, 0.75)
        renderer.AddActor(actor)
    kit = vtk.vtkLightKit()
    kit.SetKeyLightIntensity(1.6 if source.suffix == ".glb" else 0.9)
    renderer.AutomaticLightCreationOff()
    kit.AddLightsToRenderer(renderer)
    camera = renderer.GetActiveCamera()
    camera.SetFocalPoint(0.0, 0.0, 0.0)
    camera.SetPosition(*view)
    camera.SetViewUp(*((0.0, 1.0, 0.0) if source.suffix == ".glb" else (0.0, 0.0, 1.0)))
    if abs(view[0]) + abs(view[1]) < 1e-6 and source.suffix != ".glb":
        camera.SetViewUp(0.0, 1.0, 0.0)
    renderer.ResetCamera()
    camera.Zoom(1.35)
    renderer.ResetCameraClippingRange()
    window.Render()
    grab = vtk.vtkWindowToImageFilter()
    grab.SetInput(window)
    writer = vtk.vtkPNGWriter()
    writer.SetFileName(str(target))
    writer.SetInputConnection(grab.GetOutputPort())
    writer.Write()


def render_dxf(source: Path, target: Path) -> None:
    """One DXF to PNG, as its layers' colours say, on white."""
    document = ezdxf.readfile(source)
    figure = plt.figure(figsize=(11, 8))
    axes = figure.add_axes((0.0, 0.0, 1.0, 1.0))
    config = Configuration(background_policy=BackgroundPolicy.WHITE)
    Frontend(RenderContext(document), MatplotlibBackend(axes), config=config).draw_layout(
        document.modelspace()
    )
    figure.savefig(target, dpi=100)
    plt.close(figure)


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("packs", nargs="+", type=Path)
    parser.add_argument("--to", type=Path, default=None, help="folder for the pictures (beside the files)")
    args = parser.parse_args()
    for pack in args.packs:
        for source in sorted(pack.rglob("*")):
            if source.suffix not in (".stl", ".glb", ".dxf"):
                continue
            folder = args.to or source.parent
            folder.mkdir(parents=True, exist_ok=True)
            target = folder / f"{pack.name}-{source.relative_to(pack).as_posix().replace('/', '-')}.png"
            (render_dxf if source.suffix == ".dxf" else render_solid)(source, target)
            print(target)


if __name__ == "__main__":
    main()
