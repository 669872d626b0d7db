"""What a resolving walk gathers: values with their origin, conflicts, problems."""

from __future__ import annotations

from dataclasses import dataclass, field

from wavejig.design.model import Conflict, Value
from wavejig.recipe.errors import Problem


@dataclass(slots=True)
class Ledger:
    """Filled while one recipe is resolved; read once into the Design."""

    values: list[tuple[str, Value]] = field(default_factory=list)
    conflicts: list[Conflict] = field(default_factory=list)
    problems: list[Problem] = field(default_factory=list)

    def value(self, key: str, value: float, origin: str, source: str = "", unit: str = "mm") -> None:
        """Note one number and where it came from."""
        self.values.append((key, Value(value=value, origin=origin, unit=unit, source=source)))

    def auto(self, key: str, asked: float | str, start: float, rule: str, unit: str = "mm") -> float:
        """The recipe's number, or for "auto" the starting value; noted either way."""
        if isinstance(asked, str):
            self.value(key, start, "starting value", f"{rule} (common practice, no source)", unit)
            return start
        self.value(key, asked, "recipe", "", unit)
        return asked

    def conflict(self, topic: str, key: str, message: str, remedy: str) -> None:
        """Note numbers that cannot be had together."""
        self.conflicts.append(Conflict(topic=topic, key=key, message=message, remedy=remedy))

    def problem(self, key: str, read: str, allowed: str, fix: str) -> None:
        """Note something wrong with the recipe itself."""
        self.problems.append(Problem(key=key, read=read, allowed=allowed, fix=fix))
