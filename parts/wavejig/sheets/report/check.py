"""The page read back by a parser that had no part in writing it (lxml)."""

from __future__ import annotations

import base64
import hashlib
import json
import re
from pathlib import Path
from typing import Any
from urllib.parse import unquote

from wavejig.files.errors import FileCheckError

MOST_BYTES = 3_000_000
_WRITTEN_LAST = "manifest.json"  # it holds the page's own checksum, so it is not there yet
# Attributes that a browser would fetch something for.
_FETCHED = ("src", "srcset", "data", "poster", "background", "action", "formaction", "xlink:href")
_POINTING = ("aria-labelledby", "aria-describedby", "aria-controls", "for")


def check_report(path: Path, name: str) -> None:
    """Raise FileCheckError unless the page is whole, stands alone, and each of its links leads somewhere."""
    from lxml import html

    raw = path.read_bytes()
    if len(raw) > MOST_BYTES:
        raise FileCheckError(path, f"{len(raw)} bytes", f"at most {MOST_BYTES}")
    tree = html.document_fromstring(raw.decode("utf-8"), parser=html.HTMLParser(encoding="utf-8"))
    if tree.findtext(".//h1") != name:
        raise FileCheckError(path, f"the heading {tree.findtext('.//h1')!r}", f"{name!r}")
    ids = [e.get("id") for e in tree.iter() if isinstance(e.tag, str) and e.get("id") is not None]
    for one in sorted({i for i in ids if ids.count(i) > 1}):
        raise FileCheckError(path, f"the id {one!r} twice", "ids used once")
    for element in tree.iter():
        if isinstance(element.tag, str):
            _element(path, element, set(ids))
    _scripts(path, tree)
    _pictures(path, tree)


def _element(path: Path, element: Any, ids: set[str]) -> None:
    for key, value in element.attrib.items():
        if key.startswith("on") or key == "style":
            raise FileCheckError(path, f"{element.tag} with {key}", "no script or style in attributes")
        if key in _FETCHED:
            raise FileCheckError(path, f"{element.tag} with {key}", "nothing to fetch")
        if key in _POINTING and not set(value.split()) <= ids:
            raise FileCheckError(path, f"{key}={value!r}", "ids that are there")
        if key == "href":
            _link(path, element, value, ids)
        if key in ("fill", "stroke", "filter", "clip-path") and value.startswith("url("):
            target = value.removeprefix("url(#").removesuffix(")")
            if target not in ids:
                raise FileCheckError(path, f"{key}={value!r}", "an id that is there")


def _link(path: Path, element: Any, value: str, ids: set[str]) -> None:
    if element.tag == "link" and value == "data:,":
        return
    if element.tag != "a":
        raise FileCheckError(path, f"{element.tag} with href", "links only")
    if value.startswith("#"):
        if value[1:] not in ids:
            raise FileCheckError(path, f"a link to {value!r}", "an id that is there")
        return
    target = unquote(value)
    inside = (
        re.fullmatch(r"[^:?#\\]+", target) and not target.startswith("/") and ".." not in target.split("/")
    )
    if not inside or not ((path.parent / target).is_file() or target == _WRITTEN_LAST):
        raise FileCheckError(path, f"a link to {value!r}", "a file of this pack")


def _scripts(path: Path, tree: Any) -> None:
    """Each script is either plain data that reads as JSON, or the one the page's policy names."""
    policy = tree.xpath("//meta[@http-equiv='Content-Security-Policy']/@content")
    running = [s for s in tree.iter("script") if s.get("type") is None]
    if len(policy) != 1 or "default-src 'none'" not in policy[0] or len(running) != 1:
        raise FileCheckError(path, f"{len(policy)} policies, {len(running)} scripts", "one of each")
    for kind, element in (("script-src", running[0]), ("style-src", tree.find(".//style"))):
        digest = base64.b64encode(hashlib.sha256((element.text or "").encode()).digest()).decode("ascii")
        if f"{kind} 'sha256-{digest}'" not in policy[0]:
            raise FileCheckError(path, f"a {kind} that the policy does not name", f"sha256-{digest}")
    for script in tree.iter("script"):
        if script.get("type") is not None:
            try:
                json.loads(script.text or "")
            except ValueError as err:
                raise FileCheckError(path, f"data that is no JSON ({err})", "JSON") from err


def _pictures(path: Path, tree: Any) -> None:
    """Every picture is told in words, or is one that words stand beside."""
    for svg in tree.iter("svg"):
        if svg.get("aria-hidden") == "true":
            continue
        title, told = svg.findtext("title"), svg.findtext("desc")
        if not (title and told) or svg.get("role") != "img":
            raise FileCheckError(
                path, f"the picture {svg.get('id')!r} without words", "title and description"
            )
        if (
            "nan"
            in " ".join(str(v) for e in svg.iter() for k, v in e.attrib.items() if k in _NUMBERS).lower()
        ):
            raise FileCheckError(
                path, f"the picture {svg.get('id')!r} with a place that is no number", "numbers"
            )


_NUMBERS = ("d", "x", "y", "x1", "y1", "x2", "y2", "cx", "cy", "r", "width", "height", "viewbox", "transform")
