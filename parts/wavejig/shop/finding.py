"""One shop-floor remark on a design, with a stable code of ours, the numbers and the remedy."""

from __future__ import annotations

from dataclasses import dataclass

ERROR, WARNING, NOTE = "error", "warning", "note"
SEVERITIES = (ERROR, WARNING, NOTE)


@dataclass(frozen=True, slots=True, kw_only=True)
class Finding:
    """severity: error (cannot be made), warning or note. where: part or recipe key. source: of the rule."""

    code: str
    severity: str
    message: str
    remedy: str
    where: str
    source: str = "common practice, no source"

    @property
    def sort_key(self) -> tuple[int, str, str, str]:
        """Errors first, then by code and place."""
        return (SEVERITIES.index(self.severity), self.code, self.where, self.message)
