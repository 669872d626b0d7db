"""HTML and SVG as a tree of elements. Text is escaped when the tree is written, so none of it can be markup.

Chosen over a template library: nothing to depend on, and there is no way to forget the escaping, because a
string put into the tree is always text. Only `Own` goes out as it is, and it takes our own files alone.
"""

from __future__ import annotations

import base64
import hashlib
import json
import re
from collections.abc import Iterable
from dataclasses import dataclass
from html import escape
from typing import Any

# Elements without an end tag. Source: HTML Living Standard, "Void elements", from memory.
_VOID = {"meta", "link", "br", "hr", "img", "input"}
# What HTML does not take even as a reference: control characters, and halves of UTF-16 pairs.
_UNFIT = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\ud800-\udfff\ufdd0-\ufdef\ufffe\uffff]")


@dataclass(frozen=True, slots=True)
class Own:
    """The inside of a script or style element, from a file of ours: written as it is."""

    text: str

    def __post_init__(self) -> None:
        if "</" in self.text or "<!--" in self.text:
            raise ValueError("a script or style of our own must hold neither </ nor <!--")


@dataclass(frozen=True, slots=True)
class Element:
    """One element. Attribute values are text and get escaped too."""

    tag: str
    attributes: tuple[tuple[str, str], ...]
    children: tuple[Any, ...]


Child = Element | Own | str


def el(tag: str, *children: Child | Iterable[Child] | None, **attributes: Any) -> Element:
    """An element. class_ means class; stroke_width means stroke-width; None leaves out, True is bare."""
    inside: list[Child] = []
    for child in children:
        if child is None:
            continue
        if isinstance(child, (Element, Own, str)):
            inside.append(child)
        else:
            inside += list(child)
    given = tuple(
        (key.rstrip("_").replace("_", "-"), "" if value is True else _text(value))
        for key, value in attributes.items()
        if value is not None and value is not False
    )
    return Element(tag=tag, attributes=given, children=tuple(inside))


def write(node: Child) -> str:
    """The tree as text."""
    out: list[str] = []
    _write(node, out)
    return "".join(out)


def data(value: Any) -> Own:
    """JSON for a script element: signs that could end it are written as escapes."""
    text = json.dumps(value, separators=(",", ":"), sort_keys=True, ensure_ascii=True, allow_nan=False)
    for sign in "<>&":
        text = text.replace(sign, f"\\u{ord(sign):04x}")
    return Own(text)


def policy_hash(own: Own) -> str:
    """That script or style as a Content Security Policy names it (W3C CSP Level 3, section 2.3.1, from memory)."""
    return f"'sha256-{base64.b64encode(hashlib.sha256(own.text.encode()).digest()).decode('ascii')}'"


def _text(value: Any) -> str:
    if isinstance(value, float):
        return short(value)
    return str(value)


def short(value: float, places: int = 2) -> str:
    """A coordinate in as few letters as it takes."""
    text = f"{value:.{places}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def fit(text: str) -> str:
    """Text without the characters that HTML cannot hold; each shows as a replacement sign."""
    return _UNFIT.sub("\ufffd", text)


def _write(node: Child, out: list[str]) -> None:
    if isinstance(node, str):
        out.append(escape(fit(node), quote=False))
        return
    if isinstance(node, Own):
        out.append(node.text)
        return
    out.append(f"<{node.tag}")
    out += [f' {key}="{escape(fit(value))}"' if value else f" {key}" for key, value in node.attributes]
    out.append(">")
    for child in node.children:
        _write(child, out)
    if node.tag not in _VOID:
        out.append(f"</{node.tag}>")
