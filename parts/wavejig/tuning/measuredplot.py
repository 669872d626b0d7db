"""Measured sweeps over their prediction, as a picture. Needs matplotlib, the optional extra `wavejig[plot]`."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from wavejig.field.plot import new_figure, save
from wavejig.tuning.measured import Measured

_INK, _DRAWN, _FOUND, _BAND, _WANTED = "#1a1a1a", "#777777", "#2c6e9b", "#d9e8d0", "#b03a2e"


def plot_measured(m: Measured, path: Path) -> None:
    """Return loss over frequency: each sweep, predicted as drawn and as found. Raises PlotError, OSError."""
    figure = new_figure(9.0, 5.5)
    ax = figure.subplots()
    target, surface = m.explored.article.design.target, m.explored.surface
    low, high = surface.axes.nodes_hz[0], surface.axes.nodes_hz[-1]
    ax.axvspan(target.band_low_hz / 1e9, target.band_high_hz / 1e9, color=_BAND, linewidth=0)
    ax.hlines(m.wanted_db, target.band_low_hz / 1e9, target.band_high_hz / 1e9, color=_WANTED, linewidth=1.5)
    f = np.linspace(low, high, 201)
    factor = np.array([m.explored.spread.frequency])
    centre = surface.axes.centre[None, :]
    ax.plot(
        f / 1e9,
        _loss(surface.reflection(centre, f, factor)[0]),
        "--",
        color=_DRAWN,
        label="predicted as drawn",
    )
    for i, a in enumerate(m.articles):
        g, s = a.sweep.near(low, high)
        serial = a.sweep.serial.replace("$", r"\$")  # between two of them the plotter reads a formula
        label = f"serial {serial} measured" if len(m.articles) == 1 else ("measured" if i == 0 else None)
        ax.plot(g / 1e9, _loss(s), color=_INK if a.passes else _WANTED, linewidth=1.2, alpha=0.8, label=label)
    if len(m.articles) == 1:
        right = m.articles[0].findings.right
        found = centre + np.array([[right.get(n).value for n in surface.axes.names]])
        ax.plot(
            f / 1e9, _loss(surface.reflection(found, f, factor)[0]), color=_FOUND, label="predicted as found"
        )
    ax.set_xlim(low / 1e9, high / 1e9)
    ax.set_ylim(bottom=0.0)
    ax.set_xlabel("frequency, GHz")
    ax.set_ylabel("return loss, dB")
    ax.legend(fontsize=8, loc="best")
    name = m.explored.article.design.name
    figure.suptitle(
        f"{name}: {m.passing} of {len(m.articles)} pass {m.wanted_db:g} dB", fontsize=11, color=_INK
    )
    save(figure, path)


def _loss(s: np.ndarray) -> np.ndarray:
    return np.asarray(-20.0 * np.log10(np.maximum(np.abs(s), 1e-6)))
