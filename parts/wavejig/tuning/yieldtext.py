"""A yield told in words and tables."""

from __future__ import annotations

from wavejig.tuning.yields import FREQUENCY, WANTED, Fraction, Remedy, Yield

_BAR = 40


def yield_text(found: Yield) -> str:
    """The whole answer as text."""
    return "\n".join(
        [
            *_head(found),
            "",
            *_spreads(found),
            "",
            *_histogram(found),
            "",
            *_remedies(found),
            "",
            _surface(found),
        ]
    )


def _head(found: Yield) -> list[str]:
    design = found.explored.article.design
    band = f"{design.target.band_low_hz / 1e9:.6g} to {design.target.band_high_hz / 1e9:.6g} GHz"
    spread = found.explored.spread
    lines = [
        f"{design.name}: {found.quantity} to be made, return loss {found.wanted_db:g} dB over {band}",
        f"  as drawn          {found.nominal_db:.1f} dB in-band worst"
        + ("" if found.nominal_passes else ": misses the figure before any spread; tune it first"),
        f"  will pass         {_share(found.passing)}",
        f"  of the batch      {found.expected:.1f} of {found.quantity} expected, {found.batch_low} to "
        f"{found.batch_high} in nine batches of ten",
        f"  in-band worst     {found.percentiles_db[1]:.1f} dB in the middle, {found.percentiles_db[0]:.1f} "
        f"to {found.percentiles_db[2]:.1f} dB for nine articles of ten",
        f"  shop alone        {_share(found.shop)} would pass if the predicted frequency were right",
        f"  model             {100 * spread.frequency_sigma:.2g} % standard error in frequency "
        f"({spread.frequency_source}), the same for the whole batch",
    ]
    if abs(spread.frequency - 1.0) > 1e-9:
        lines.append(f"  corrected         true frequency = {spread.frequency:.5f} x predicted")
    return lines


def _spreads(found: Yield) -> list[str]:
    rows = [("dimension", "nominal", "plus/minus", "share", "total", "shop only", "from")]
    for d in found.explored.spread.dimensions:
        share, alone = found.shares[d.key], found.shop_shares[d.key]
        rows.append(
            (
                d.title,
                f"{d.nominal:.2f} {d.unit}".strip(),
                f"{d.plus_minus:.3f} {d.distribution}",
                _percent(share.first),
                _percent(share.total),
                _percent(alone.total),
                d.source,
            )
        )
    model = found.shares[FREQUENCY]
    sigma = found.explored.spread.frequency_sigma
    rows.append(
        (
            "model's frequency",
            "",
            f"{100 * sigma:.2g} % sigma normal",
            _percent(model.first),
            _percent(model.total),
            "",
            found.explored.spread.frequency_source,
        )
    )
    widths = [max(len(r[i]) for r in rows) for i in range(6)]
    lines = [
        "  " + "  ".join(c.ljust(w) for c, w in zip(r, [*widths, 0], strict=True)).rstrip() for r in rows
    ]
    note = "  share: of the spread of in-band worst return loss, alone (first order) and with all it acts on (total)"
    return [*lines, note]


def _histogram(found: Yield) -> list[str]:
    most = max(1, int(found.counts.max()))
    total = int(found.counts.sum())
    lines = ["  in-band worst return loss of the virtual articles"]
    for low, high, count in zip(found.edges[:-1], found.edges[1:], found.counts, strict=True):
        mark = "<" if low < found.wanted_db <= high and high != found.wanted_db else " "
        fails = "fails" if high <= found.wanted_db else ("     " if low >= found.wanted_db else "part ")
        bar = "#" * round(_BAR * int(count) / most)
        lines.append(
            f"  {low:6.1f} to {high:5.1f} dB {fails} {100 * int(count) / total:5.1f} % {bar}{mark}".rstrip()
        )
    return lines


def _remedies(found: Yield) -> list[str]:
    title = f"  tolerances that would bring {100 * WANTED:.0f} %"
    lines = [title + (", the model's error included" if found.explored.spread.frequency_sigma else "")]
    lines += _remedy_lines(found, found.remedies)
    lines.append("  if the predicted frequency were right (after a measured first article)")
    lines += _remedy_lines(found, found.shop_remedies)
    return lines


def _remedy_lines(found: Yield, rows: tuple[Remedy, ...]) -> list[str]:
    titles = {d.key: (d.title, d.unit) for d in found.explored.spread.dimensions}
    out = []
    for r in rows:
        title, unit = titles.get(r.key, ("all together", ""))
        if r.key == "all":
            now, need = "as they are", None if r.needed is None else f"{r.needed:.2f} of what they are"
        else:
            now = f"plus or minus {r.now:.3g} {unit}"
            need = None if r.needed is None else f"plus or minus {r.needed:.2g} {unit}"
        if need is None:
            text = (
                "not by this alone, however tight"
                if r.key != "all"
                else "not by the shop's tolerances at all"
            )
        elif r.needed == r.now:
            text = f"{now} will do"
        else:
            text = need if r.key == "all" else f"{need} in place of {r.now:.3g}"
        out.append(f"    {title:<18} {text}")
    return out


def _surface(found: Yield) -> str:
    e = found.explored
    return (
        f"  from {len(found.worst_db):,} virtual articles on a surface of {e.solves} solves; on articles it has "
        f"not seen it misses the in-band worst by {e.error_db:.3f} dB rms, counted into the interval above"
    )


def _share(f: Fraction) -> str:
    return f"{100 * f.value:.1f} % ({100 * f.low:.1f} to {100 * f.high:.1f} %)"


def _percent(value: float) -> str:
    return f"{100 * value:.0f} %"
