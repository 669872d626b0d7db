"""Recipe -> Design: every number resolved, frozen, with where it came from."""

from wavejig.design.model import Design
from wavejig.design.resolve import resolve

__all__ = ["Design", "resolve"]
