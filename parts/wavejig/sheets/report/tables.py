"""Tables, and the small sentences that several sections use."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from wavejig.sheets.report.markup import Element, el


def table(
    caption: str,
    head: Sequence[str],
    rows: Iterable[Sequence[str | Element]],
    *,
    numbers: Sequence[int] = (),
    write_in: Sequence[int] = (),
) -> Element:
    """A table whose rows become blocks on a phone. numbers: columns set to the right; write_in: left empty."""

    def kind(column: int) -> str | None:
        return "write" if column in write_in else "n" if column in numbers else None

    body = []
    for row in rows:
        first, *others = row
        cells = [
            el("td", cell, class_=kind(i), data_head=head[i] or None)
            for i, cell in enumerate(others, start=1)
        ]
        body.append(el("tr", el("th", first, scope="row"), cells))
    titles = [el("th", text, scope="col", class_=kind(i)) for i, text in enumerate(head)]
    return el(
        "div",
        el(
            "table", el("caption", caption, class_="soft"), el("thead", el("tr", titles)), el("tbody", body),
            class_="stack",
        ),
        class_="wide", role="region", aria_label=caption, tabindex="0",
    )  # fmt: skip


def figure(caption: str, *parts: Element | None) -> Element:
    """A picture under its name."""
    return el("figure", el("figcaption", caption), parts_of(parts))


def parts_of(parts: Iterable[Element | None]) -> list[Element]:
    """Those that are there."""
    return [p for p in parts if p is not None]


def size_text(count: int) -> str:
    """ "812 B", "12.3 kB", "1.24 MB"."""
    if count < 1000:
        return f"{count} B"
    if count < 999_950:
        return f"{count / 1e3:.1f} kB"
    return f"{count / 1e6:.2f} MB"


def count_of(number_of: int, word: str) -> str:
    """ "1 hole", "2 holes"."""
    return f"{number_of} {word}{'' if number_of == 1 else 's'}"
