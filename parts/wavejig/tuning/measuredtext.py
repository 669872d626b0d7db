"""Measured articles told in words, and as data for programs."""

from __future__ import annotations

import numpy as np

from wavejig.tuning.fitting import OFFSET
from wavejig.tuning.found import MAIN, Fit
from wavejig.tuning.measured import Article, Measured
from wavejig.tuning.yields import FREQUENCY

_DIAGNOSED = 3  # of a batch: the worst so many
_TITLES = {
    OFFSET: "reference plane",
    FREQUENCY: "model's frequency",
    "tracking": "the analyser's calibration (tracking)",
    "tracking_turn": "the analyser's calibration (tracking)",
    "directivity": "the analyser's calibration (directivity)",
    "directivity_turn": "the analyser's calibration (directivity)",
}


def measured_text(m: Measured) -> str:
    """The whole answer."""
    if len(m.articles) == 1:
        return "\n".join([*_article(m, m.articles[0], whole=True), *_recipe(m)])
    lines = _batch(m)
    worst = sorted((a for a in m.articles if not a.passes), key=lambda a: a.worst_db)[:_DIAGNOSED]
    for article in worst:
        lines += ["", *_article(m, article, whole=False)]
    return "\n".join([*lines, "", *_recipe(m)])


def title(m: Measured, key: str) -> str:
    """A dimension in words."""
    names = {d.key: d.title for d in m.explored.spread.dimensions}
    return names.get(key) or _TITLES.get(key, key.replace("_", " "))


def _article(m: Measured, a: Article, *, whole: bool) -> list[str]:
    verdict = "passes" if a.passes else f"fails by {m.wanted_db - a.worst_db:.1f} dB"
    lines = [
        f"serial {a.sweep.serial} ({a.sweep.path.name}): {verdict}: return loss {a.worst_db:.1f} dB at "
        f"{a.worst_hz / 1e6:.6g} MHz, {m.wanted_db:g} dB wanted over the band",
        f"  predicted as drawn {a.predicted_db:.1f} dB; for the deviations found {a.as_found_db:.1f} dB",
    ]
    if a.as_read_db is not None:
        lines.append(f"  predicted for the calliper readings {a.as_read_db:.1f} dB")
    right, open_ = a.findings.right, a.findings.open
    if a.strange:
        lines.append(_strange(m, right))
    lines += _table(m, right, open_, whole=whole)
    lines += _slips(m, right)
    lines += _open(m, right)
    lines += _vague(m, right, "")
    if open_.has(FREQUENCY) and not right.vague:
        lines += _vague(m, open_, "allowing for the model's error, ")
    if a.bench.levers:
        lines.append("  on this article:")
        lines += [f"    {bench(lever.key, lever.move)}" for lever in a.bench.levers]
        lines.append(f"    then about {a.bench.after_db:.1f} dB in place of {a.bench.before_db:.1f} dB")
    elif not a.passes:
        lines.append(
            "  on this article: nothing at the bench brings it noticeably nearer; see the recipe below"
        )
    return lines


def _strange(m: Measured, fit: Fit) -> str:
    ends = ", ".join(title(m, k) for k in fit.at_limit)
    why = f"; {ends} ran to the end of what is plausible" if ends else ""
    return (
        f"  not explained by the dimensions (misfit {fit.misfit:.1f} times the noise{why}): look "
        "for a bad joint, a wrong connector, something near the antenna, or a poor calibration; take the figures "
        "below with care"
    )


def _slips(m: Measured, fit: Fit) -> list[str]:
    """What is out by more than the process explains, and what else it may be."""
    lines = []
    if fit.slipped:
        names = " and ".join(title(m, k) for k in fit.slipped)
        lines.append(
            f"  {names}: out by more than your tolerances explain, so something slipped. If it did on this article "
            "only, mend the article and leave the recipe as it is"
        )
    for other in fit.or_else:
        moves = " and ".join(f"{title(m, key)} {value:+z.2f} mm" for key, value in other.slipped)
        lines.append(
            f"  or else (about {10 * round(10 * other.chance):.0f} in 100): "
            + (moves or "nothing slipped, all of it a little of everything")
            + "; a calliper decides it"
        )
    return lines


def _table(m: Measured, right: Fit, open_: Fit, *, whole: bool) -> list[str]:
    rows = [("deviation", "most plausible", "95 % interval", "beforehand", "allowing for the model's error")]
    for d in right.deviations:
        if d.key not in MAIN and not (whole and d.told and abs(d.value) > d.sigma):
            continue
        if d.key.startswith(("tracking", "directivity")):
            continue
        other = open_.get(d.key) if open_.has(d.key) else d
        low, high = d.interval
        unit = f" {d.unit}" if d.unit else ""
        rows.append(
            (
                title(m, d.key),
                f"{d.value:+z.2f}{unit}" if d.told else f"cannot tell ({d.value:+z.2f}{unit})",
                f"{low:+z.2f} to {high:+z.2f}",
                f"plus or minus {d.before:.2f}",
                f"{other.value:+z.2f}, {other.interval[0]:+z.2f} to {other.interval[1]:+z.2f}",
            )
        )
    if open_.has(FREQUENCY):
        d = open_.get(FREQUENCY)
        low, high = d.interval
        rows.append(
            (
                title(m, FREQUENCY),
                "taken as right",
                "",
                f"plus or minus {196 * d.prior_sigma:.2f} %",
                f"{100 * d.value:+z.2f} %, {100 * low:+z.2f} to {100 * high:+z.2f} %",
            )
        )
    widths = [max(len(r[i]) for r in rows) for i in range(5)]
    return ["  " + "  ".join(c.ljust(w) for c, w in zip(r, widths, strict=True)).rstrip() for r in rows]


def _open(m: Measured, fit: Fit) -> list[str]:
    """What "cannot tell" means, and what helps."""
    keys = [k for k in MAIN if fit.has(k) and fit.cannot_tell(k) and k != OFFSET]
    if not keys:
        return []
    readings = " ".join(f"--reading {k}=...mm" for k in keys)
    return [
        "  cannot tell: the sweep leaves it hardly narrower than a first article may be off anyway, or wider than "
        f"its tolerance. A calliper can: {readings}"
    ]


def _vague(m: Measured, fit: Fit, before: str) -> list[str]:
    lines = []
    for one, other, r in fit.vague:
        mend = _mend(one, other)
        lines.append(
            f"  {before}the sweep cannot tell {title(m, one)} from {title(m, other)} (correlation {r:+z.2f}); {mend}"
        )
    return lines


def _mend(one: str, other: str) -> str:
    readable = [k for k in (one, other) if k in ("side", "lobe_diameter", "standoff", "feed_gap")]
    if readable:
        return f"measure the {readable[0].replace('_', ' ')} and give it with --reading {readable[0]}=...mm"
    return "take them together"


def bench(key: str, move: float) -> str:
    if key == "standoff":
        if move > 0:
            return (
                f"shim the radiator up by {move:.2f} mm (washers or card under the spacer) before soldering"
            )
        return f"lower the radiator by {-move:.2f} mm: file the spacer down, or press the legs further in"
    if key == "feed_gap":
        return f"re-bend the terminals {'apart' if move > 0 else 'together'} by {abs(move):.2f} mm"
    return (
        f"re-bend the side corners so that the lobes {'open' if move > 0 else 'close'} by {abs(move):.1f} deg"
    )


def _recipe(m: Measured) -> list[str]:
    factor = m.frequency
    lines = [
        f"model: true frequency = {factor:.5f} x predicted, standard error {100 * m.frequency_error:.2f} % "
        f"(beforehand {100 * m.explored.spread.frequency_sigma:.2g} %)",
        f"surface: {m.explored.solves} solves; a solve at what was found differs by {m.check_db:+z.3f} dB",
    ]
    if not m.changes:
        lines.append(
            "recipe: nothing to change"
            if m.passing == len(m.articles)
            else "recipe: no change of side, standoff or feed gap brings the next ones noticeably "
            "nearer; `wavejig tune` looks further"
        )
        return lines
    moves = ", ".join(f"{title(m, c.key)} {c.now:.2f} to {c.new:.2f} mm" for c in m.changes)
    meets = "meets" if m.after_db >= m.wanted_db else "still misses"
    lines.append(
        f"recipe: {moves} (over the centreline); articles that come out as measured would then reach "
        f"{m.after_db:.1f} dB in place of {m.proposal.before_db:.1f} dB, which {meets} the {m.wanted_db:g} dB"
    )
    return lines


def _batch(m: Measured) -> list[str]:
    design = m.explored.article.design
    lines = [f"{design.name}: {m.passing} of {len(m.articles)} pass {m.wanted_db:g} dB over the band"]
    lines += [
        f"  {a.sweep.serial:<8} {'passes' if a.passes else 'FAILS '} {a.worst_db:6.1f} dB at "
        f"{a.worst_hz / 1e6:.6g} MHz   {a.sweep.path.name}"
        + ("   not explained by its dimensions" if a.strange else "")
        for a in sorted(m.articles, key=lambda a: _natural(a.sweep.serial))
    ]
    worst = np.array([a.worst_db for a in m.articles])
    lines.append(
        f"  in-band worst: middle {np.median(worst):.1f} dB, spread {worst.std(ddof=1):.1f} dB (one sigma)"
    )
    if m.predicted is not None:
        p = m.predicted
        lines.append(
            f"  predicted: {p.expected:.1f} of {len(m.articles)} pass, {p.batch_low} to {p.batch_high} in nine "
            f"batches of ten; middle {p.percentiles_db[1]:.1f} dB, spread {p.worst_db.std():.1f} dB"
        )
        if not p.batch_low <= m.passing <= p.batch_high:
            side = "fewer" if m.passing < p.batch_low else "more"
            lines.append(f"  {side} pass than the stated tolerances let expect: look at the spreads below")
    for key in MAIN[:-1]:
        found = [a.findings.right.get(key) for a in m.articles if a.findings.right.has(key)]
        if found:
            values = np.array([d.value for d in found])
            lines.append(
                f"  {title(m, key)}: mean {values.mean():+z.2f} mm, spread {values.std(ddof=1):.2f} mm (one sigma; "
                f"{found[0].prior_sigma:.2f} mm beforehand), taking the model as right"
            )
    return lines


def _natural(serial: str) -> tuple[int, str]:
    return (int(serial) if serial.isdigit() else 10**9, serial)
