"""The predicted match and pattern as a picture. Needs matplotlib, the optional extra `wavejig[plot]`."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from wavejig.field.figures import megahertz
from wavejig.field.pattern import Cut
from wavejig.field.prediction import Prediction

FLOOR_DB = 30.0  # of the pattern below its peak
_INK, _BAND, _WANTED = "#1a1a1a", "#d9e8d0", "#b03a2e"
KINDS = (".png", ".svg", ".pdf")
INSTALL = "pip install 'wavejig[plot]'"


class PlotError(Exception):
    """A picture that cannot be drawn here, and what to do."""


def plot_prediction(p: Prediction, path: Path) -> None:
    """Write the picture; the ending names its kind (png, svg, pdf). Raises PlotError, OSError."""
    figure = new_figure(10.0, 5.0)
    left, right = figure.subplots(1, 2, width_ratios=(1.15, 1.0))
    _draw_match(left, p)
    _draw_cuts(right, p)
    figure.suptitle(
        f"{p.design_name}: predicted, seen {p.reference_plane}", fontsize=10, color=_INK, wrap=True
    )
    save(figure, path)


def new_figure(width_in: float, height_in: float) -> Any:
    """An empty figure of that size in inches. Raises PlotError when matplotlib is absent."""
    return _figure_class()(figsize=(width_in, height_in), layout="constrained")


def check_path(path: Path) -> None:
    """Raise PlotError when no picture could be drawn there: an unknown ending, or no matplotlib."""
    if path.suffix.lower() not in KINDS:
        raise PlotError(f"{path}: a picture's name must end in {', '.join(KINDS[:-1])} or {KINDS[-1]}")
    _figure_class()


def save(figure: Any, path: Path) -> None:
    """Write a figure without the day's date in it. Raises PlotError for an ending that is no picture's."""
    check_path(path)
    kind = path.suffix.lower().removeprefix(".")
    metadata = {"svg": {"Date": None}, "pdf": {"CreationDate": None}}.get(kind)
    figure.savefig(path, dpi=150, format=kind, metadata=metadata)


def _figure_class() -> Any:
    try:
        from matplotlib import rcParams
        from matplotlib.figure import Figure
    except ImportError as err:
        raise PlotError(f"pictures need matplotlib, which is not installed; run: {INSTALL}") from err
    rcParams["svg.hashsalt"] = "wavejig"  # names inside an SVG are otherwise new each time
    return Figure


def _draw_match(axes: Any, p: Prediction) -> None:
    mhz = p.frequencies_hz / 1e6
    loss = np.minimum(-20.0 * np.log10(np.maximum(np.abs(p.s11), 1e-3)), 40.0)
    axes.axvspan(p.low_hz / 1e6, p.high_hz / 1e6, color=_BAND, lw=0, label="band")
    axes.plot(
        [p.low_hz / 1e6, p.high_hz / 1e6], [p.wanted_db] * 2, color=_WANTED, lw=2.0, ls="--",
        label=f"wanted, {p.wanted_db:g} dB",
    )  # fmt: skip
    axes.plot(mhz, loss, color=_INK, lw=1.8, label="predicted")
    axes.plot(
        [p.worst.frequency_hz / 1e6], [p.worst.return_loss_db], "o", color=_INK, ms=6,
        label=f"worst in band, {p.worst.return_loss_db:.1f} dB at {megahertz(p.worst.frequency_hz)}",
    )  # fmt: skip
    axes.set_xlim(mhz[0], mhz[-1])
    axes.set_ylim(max(20.0, 1.15 * float(loss.max())), 0.0)  # a good match dips, as on the bench
    axes.set_xlabel("frequency, MHz")
    axes.set_ylabel(f"return loss in {p.reference_ohm:g} ohm, dB")
    axes.grid(alpha=0.3)
    _legend(axes)


def _draw_cuts(axes: Any, p: Prediction) -> None:
    peak = max(p.pattern.e_plane.peak_dbi, p.pattern.h_plane.peak_dbi)
    lost = p.gain_dbi - p.pattern.axial_dbi
    for cut, name, style in (
        (p.pattern.e_plane, "along the field", "-"),
        (p.pattern.h_plane, "across the field", "--"),
    ):
        axes.plot(cut.angles_deg, cut.total_dbi + lost, style, lw=1.8, label=_cut_label(cut, name))
    axes.set_xlim(-180, 180)
    axes.set_xticks(range(-180, 181, 45))
    axes.set_ylim(peak - FLOOR_DB, 3.0 * np.ceil((peak + 0.5) / 3.0))
    axes.set_xlabel("from straight ahead, deg")
    axes.set_ylabel(f"gain at {megahertz(p.middle_hz)}, dBi")
    axes.grid(alpha=0.3)
    _legend(axes)


def _legend(axes: Any) -> None:
    axes.legend(fontsize=8, loc="upper center", bbox_to_anchor=(0.5, -0.14), ncols=2, frameon=False)


def _cut_label(cut: Cut, name: str) -> str:
    width = cut.beamwidth_deg
    return name if width is None else f"{name}, half power over {width:.0f} deg"
