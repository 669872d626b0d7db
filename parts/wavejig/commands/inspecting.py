"""How an inspected design is told: as plain data, and as text with its findings and values."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from wavejig.shop import Finding, Inspection


def inspection_data(inspection: Inspection) -> dict[str, Any]:
    """For programs."""
    return {
        "name": inspection.design.name,
        "can_be_made": inspection.can_be_made,
        "values": {
            k: {"value": v.value, "from": v.origin, "unit": v.unit} for k, v in inspection.design.values
        },
        "findings": [
            {
                "code": f.code,
                "severity": f.severity,
                "message": f.message,
                "where": f.where,
                "remedy": f.remedy,
                "source": f.source,
            }
            for f in inspection.findings
        ],
    }


def inspection_text(path: Path, inspection: Inspection) -> str:
    """For a person: verdict, findings, values and where they came from."""
    counts = {s: sum(f.severity == s for f in inspection.findings) for s in ("error", "warning", "note")}
    verdict = "can be made" if inspection.can_be_made else "cannot be made"
    head = f"{path}: {inspection.design.name} {verdict}: " + ", ".join(
        f"{n} {word}{'' if n == 1 else 's'}" for word, n in counts.items()
    )
    lines = [head, *(finding_text(f) for f in inspection.findings)]
    width = max((len(k) for k, _ in inspection.design.values), default=0)
    lines.append("  values:")
    lines += [
        f"    {key.replace('_', ' '):<{width}}  {value.value:9.3f} {value.unit:<3}  {value.origin}"
        + (f": {value.source}" if value.source else "")
        for key, value in inspection.design.values
    ]
    return "\n".join(lines)


def finding_text(f: Finding) -> str:
    """One finding in two lines."""
    return f"  {f.severity:<7} {f.code} ({f.where}): {f.message}\n          {f.remedy}"


def count_of(inspection: Inspection, severity: str) -> str:
    """ "1 warning", "3 notes"."""
    n = sum(f.severity == severity for f in inspection.findings)
    return f"{n} {severity}{'' if n == 1 else 's'}"
