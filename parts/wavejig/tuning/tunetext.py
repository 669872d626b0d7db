"""A tuned answer as a table, as plain data, and as lines of a recipe."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from wavejig.recipe.edit import Put
from wavejig.recipe.models import Recipe
from wavejig.tuning.alternatives import Alternative
from wavejig.tuning.candidates import Solve
from wavejig.tuning.tune import Tuned
from wavejig.tuning.vary import PLACES, over_mm

_UNITS = {"lobe_angle": "deg", "lip_angle": "deg"}


def tuned_data(answer: Tuned, others: Sequence[Alternative] = ()) -> dict[str, Any]:
    """What `tune --json` prints; lengths in mm, angles in deg."""
    return {
        "aim": answer.aim,
        "wanted_return_loss_db": answer.wanted_db,
        "meets_target": answer.meets_target,
        "frequencies_hz": [round(float(f)) for f in answer.frequencies_hz],
        "before": _solve_data(answer.before),
        "after": _solve_data(answer.after),
        "solves": answer.solves,
        "values": {
            f.name: {
                "before": round(f.start, 3),
                "after": answer.values[f.name],
                "unit": _UNITS.get(f.name, "mm"),
                "limit": answer.limits.get(f.name),
            }
            for f in answer.free
        },
        "refused_by": list(answer.refused),
        "alternatives": [{"change": a.change, "worst_return_loss_db": round(a.worst_db, 1)} for a in others],
    }


def _solve_data(solve: Solve) -> dict[str, Any]:
    return {
        "worst_return_loss_db": round(solve.worst_db, 2),
        "gain_dbi": round(solve.gain_dbi, 2),
        "impedance_ohm": [[round(z.real, 1), round(z.imag, 1)] for z in solve.impedance_ohm.tolist()],
    }


def tuned_text(name: str, answer: Tuned, others: Sequence[Alternative] = ()) -> str:
    """The answer for a person: before and after, what binds, what would help."""
    before, after = answer.before, answer.after
    lines = [
        f"{name}: worst return loss in the band {before.worst_db:.1f} -> {after.worst_db:.1f} dB, gain "
        f"{before.gain_dbi:.1f} -> {after.gain_dbi:.1f} dBi, in {answer.solves} solves",
        "                      before     after",
    ]
    for f in answer.free:
        unit = _UNITS.get(f.name, "mm")
        limit = answer.limits.get(f.name)
        lines.append(
            f"  {f.name.replace('_', ' '):<16}{f.start:9.2f} {answer.values[f.name]:9.2f} {unit:<3}"
            + (f"  {limit}" if limit else "")
        )
    lines.append("  impedance over the band")
    for frequency, z0, z1 in zip(
        answer.frequencies_hz, before.impedance_ohm, after.impedance_ohm, strict=True
    ):
        lines.append(f"    {frequency / 1e6:9.1f} MHz   {_impedance(z0)}  ->  {_impedance(z1)}")
    if answer.refused:
        lines.append(f"  the shop stopped some steps: {', '.join(answer.refused)}")
    if answer.meets_target:
        lines.append(f"  meets the {answer.wanted_db:g} dB that the recipe wants")
    else:
        lines.append(
            f"  MISSES the {answer.wanted_db:g} dB that the recipe wants by "
            f"{answer.wanted_db - after.worst_db:.1f} dB"
        )
        lines += [f"    {a.worst_db:4.1f} dB (short try) with {a.change}" for a in others]
        if not others:
            lines.append("    and no other wire, feed or sheet that was tried can be made")
    return "\n".join(lines)


def _impedance(z: complex) -> str:
    return f"{z.real:6.1f} {'+' if z.imag >= 0 else '-'} j{abs(z.imag):5.1f} ohm"


def puts(recipe: Recipe, answer: Tuned, wire_diameter_mm: float) -> list[Put]:
    """The tuned values as keys of the recipe, sides as the recipe measures them."""
    remark = f"tuned for {answer.aim}: worst {answer.after.worst_db:.1f} dB, {answer.after.gain_dbi:.1f} dBi"
    out = []
    starts = {f.name: f.start for f in answer.free}
    for name, value in answer.values.items():
        table, key = PLACES[name]
        if key == "base" or (name == "lip_height" and value == starts[name]):
            continue  # a sheet left as it starts may stay auto
        if name in ("side", "lobe_diameter"):
            value += over_mm(recipe, wire_diameter_mm)
        out.append(Put(table=table, key=key, value=f'"{value:.6g} {_UNITS.get(name, "mm")}"', remark=remark))
    if any(answer.values[n] != starts[n] for n in ("base_x", "base_y") if n in starts):
        pair = []
        for i, name in enumerate(("base_x", "base_y")):
            asked = recipe.reflector.base[i]
            size = answer.values.get(name, asked)
            pair.append(f'"{size:.6g} mm"')
        out.append(Put(table="reflector", key="base", value=f"[{', '.join(pair)}]", remark=remark))
    return out
