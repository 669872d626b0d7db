"""Texts in tables that a spreadsheet opens: no cell is run as a formula."""

from __future__ import annotations

# with their full-width forms, which some spreadsheets take for the plain ones
FORMULA = ("=", "+", "-", "@", "\t", "\r", "\n", "\uff1d", "\uff0b", "\uff0d", "\uff20")


def safe_cell(text: str) -> str:
    """The text as no spreadsheet will run it; only texts that begin like a formula change.

    They get an apostrophe in front (common advice against formula injection, from memory).
    """
    return f"'{text}" if text.lstrip(" ").startswith(FORMULA) or text.startswith(FORMULA) else text
