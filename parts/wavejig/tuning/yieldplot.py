"""A yield as a picture. Needs matplotlib, the optional extra `wavejig[plot]`."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from wavejig.field.plot import new_figure, save
from wavejig.tuning.points import cut_normal, random_articles
from wavejig.tuning.yields import FREQUENCY, Yield

_INK, _PASS, _FAIL, _SHOP = "#1a1a1a", "#5b8c5a", "#b03a2e", "#d0a030"
_LEAST_SHARE = 0.01
_ARTICLES = 400


def plot_yield(found: Yield, path: Path) -> None:
    """Histogram, the articles' return loss over the band, shares. Raises PlotError, OSError."""
    figure = new_figure(11.0, 7.0)
    axes = figure.subplots(2, 2)
    _draw_histogram(axes[0][0], found)
    _draw_band(axes[0][1], found)
    _draw_shares(axes[1][0], found)
    _draw_words(axes[1][1], found)
    name = found.explored.article.design.name
    figure.suptitle(
        f"{name}: {found.quantity} to be made, {found.wanted_db:g} dB wanted", fontsize=11, color=_INK
    )
    save(figure, path)


def _draw_histogram(ax: Any, found: Yield) -> None:
    for low, high, count in zip(found.edges[:-1], found.edges[1:], found.counts, strict=True):
        colour = _PASS if low >= found.wanted_db - 1e-9 else _FAIL
        ax.bar((low + high) / 2, 100 * count / found.counts.sum(), width=0.92 * (high - low), color=colour)
    ax.axvline(found.wanted_db, color=_INK, linewidth=1.0)
    ax.set_xlabel("in-band worst return loss, dB")
    ax.set_ylabel("share of articles, %")


def _draw_band(ax: Any, found: Yield) -> None:
    e = found.explored
    uniform = np.random.default_rng(1).random((_ARTICLES, len(e.spread.dimensions) + 1))
    values = random_articles(e.spread.dimensions, uniform[:, :-1])
    factor = e.spread.frequency * (1.0 + cut_normal(uniform[:, -1], e.spread.frequency_sigma))
    loss = -20.0 * np.log10(np.abs(e.surface.reflection(values, e.band_hz, factor)))
    centre = e.surface.axes.centre[None, :]
    drawn = -20.0 * np.log10(
        np.abs(e.surface.reflection(centre, e.band_hz, np.array([e.spread.frequency])))[0]
    )
    ghz = e.band_hz / 1e9
    low, high = np.percentile(loss, [5, 95], axis=0)
    ax.fill_between(ghz, low, high, color=_PASS, alpha=0.25, linewidth=0, label="nine articles of ten")
    ax.plot(ghz, np.percentile(loss, 50, axis=0), color=_PASS, label="middle")
    ax.plot(ghz, drawn, color=_INK, linestyle="--", label="as drawn")
    ax.axhline(found.wanted_db, color=_FAIL, linewidth=1.0)
    ax.set_xlim(ghz[0], ghz[-1])
    ax.set_ylim(bottom=0.0)
    ax.set_xlabel("frequency, GHz")
    ax.set_ylabel("return loss, dB")
    ax.legend(fontsize=8, loc="best")


def _draw_shares(ax: Any, found: Yield) -> None:
    titles = {d.key: d.title for d in found.explored.spread.dimensions} | {FREQUENCY: "model's frequency"}
    rows = [(titles[k], s) for k, s in found.shares.items() if s.total >= _LEAST_SHARE]
    rows.sort(key=lambda row: row[1].total)
    places = np.arange(len(rows))
    ax.barh(places, [100 * s.total for _, s in rows], color=_SHOP, alpha=0.5, label="total")
    ax.barh(places, [100 * s.first for _, s in rows], color=_SHOP, height=0.4, label="alone")
    ax.set_yticks(places, [title for title, _ in rows])
    ax.set_xlabel("share of the spread, %")
    if rows:
        ax.legend(fontsize=8, loc="lower right")


def _draw_words(ax: Any, found: Yield) -> None:
    ax.axis("off")
    p, s = found.passing, found.shop
    lines = [
        f"will pass: {100 * p.value:.1f} % ({100 * p.low:.1f} to {100 * p.high:.1f} %)",
        f"of the batch: {found.expected:.1f} of {found.quantity} expected",
        f"  {found.batch_low} to {found.batch_high} in nine batches of ten",
        f"if the predicted frequency were right: {100 * s.value:.1f} %",
        f"as drawn: {found.nominal_db:.1f} dB",
        f"surface: {found.explored.solves} solves, {found.explored.error_db:.3f} dB rms on unseen articles",
    ]
    ax.text(0.02, 0.95, "\n".join(lines), va="top", fontsize=10, color=_INK, linespacing=1.6)
