"""Findings: can the design be made, on these machines, and will it last. No CAD kernel here."""

from wavejig.shop.finding import Finding
from wavejig.shop.inspect import Inspection, inspect

__all__ = ["Finding", "Inspection", "inspect"]
