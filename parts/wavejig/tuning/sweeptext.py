"""A Touchstone file looked over line by line, before the library that reads it.

Refused here, with its line, is what a reader would mend, pass over in silence or stumble on. What is handed on
is plain: no remarks (the library would take port names and impedances from them), and an option line that says
everything.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass, field
from pathlib import Path

from wavejig.recipe.errors import cut, show, visible
from wavejig.recipe.plainfile import read_plain

MOST_BYTES = 2_000_000  # fifteen thousand points of a two-port, every digit written out; read in a second
LEAST_POINTS = 15  # in the band and just beside it, where the fit looks
# How many numbers a point has: frequency and two for each parameter.
_NUMBERS = {".s1p": 3, ".s2p": 9}
_UNITS = ("HZ", "KHZ", "MHZ", "GHZ")
_FORMATS = ("DB", "MA", "RI")
_KEYWORDS = (
    "VERSION", "NUMBER OF PORTS", "TWO-PORT DATA ORDER", "NUMBER OF FREQUENCIES", "NUMBER OF NOISE FREQUENCIES",
    "REFERENCE", "MATRIX FORMAT", "MIXED-MODE ORDER", "BEGIN INFORMATION", "END INFORMATION", "NETWORK DATA",
    "NOISE DATA", "END",
)  # fmt: skip
_LONGEST = 300  # of a message
_HEAD_REMARKS = 100  # lines of remarks before the numbers that are looked at for a serial number


class SweepError(ValueError):
    """A sweep that cannot be used: the file, what is wrong, what to do."""

    def __init__(self, path: Path, message: str) -> None:
        self.path = path
        self.message = cut(visible(message), _LONGEST)
        super().__init__(f"{visible(str(path))}: {self.message}")


def sweep_text(path: Path) -> str:
    """What the file holds, as text. Raises SweepError, OSError."""
    raw = read_plain(path, MOST_BYTES)
    if len(raw) > MOST_BYTES:
        raise SweepError(
            path,
            f"is larger than {MOST_BYTES // 1_000_000} MB; is this the sweep? Some hundred points are enough",
        )
    if path.suffix.lower() not in _NUMBERS:
        raise SweepError(path, "is not named .s1p or .s2p; export a one-port (or two-port) Touchstone file")
    raw = raw.removeprefix(b"\xef\xbb\xbf")  # some editors begin UTF-8 files with this mark
    if not raw.strip():
        raise SweepError(path, "is empty; export the sweep again")
    if b"\0" in raw:
        raise SweepError(path, "is no text; export a Touchstone file, not the instrument's own format")
    return raw.decode("utf-8", errors="replace")


@dataclass(slots=True, kw_only=True)
class Looked:
    """A file looked over line by line: what the reading library is given, and what it would not tell us.

    lines: without remarks, which the library would take port names and impedances from. reference_ohm: of the
    first port, where a file of version 2 gives it apart from its option line.
    """

    lines: list[str] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    options: str = ""
    points: int = 0
    last: float = -math.inf
    reference_ohm: float | None = None
    references_missing: int = 0
    points_told: int | None = None
    informing: bool = False


def look_over(path: Path, text: str) -> Looked:
    """Refuse, with its line, what a reader would mend, pass over in silence or stumble on."""
    wanted = _NUMBERS[path.suffix.lower()]
    out = Looked()
    for number, line in enumerate(re.split(r"\r\n|\r|\n", text), start=1):
        content, _, remark = line.partition("!")
        if remark and not out.points and len(out.remarks) < _HEAD_REMARKS:
            out.remarks.append(remark[:_LONGEST])
        content = content.strip()
        if not content:
            continue
        if content.startswith("["):
            if not _keyword(path, number, content, out):
                break
            continue
        if out.informing:  # words for people
            continue
        out.lines.append(content)
        if content.startswith("#"):
            if out.options:
                raise SweepError(path, f"line {number}: a second option line; is this two files in one?")
            out.options = _options(path, number, content[1:])
            out.lines[-1] = f"# {out.options}"
        elif not out.options:
            raise SweepError(
                path,
                "has no option line (# MHz S MA R 50) before its numbers, so their unit is unknown; add it",
            )
        elif out.references_missing > 0:
            _reference(path, number, content, out)
        elif not _point(path, number, content, wanted, out):
            out.lines.pop()
            break  # a two-port's noise data, after its sweep
    if not out.options and not out.points:
        raise SweepError(path, "holds no Touchstone data; export the sweep again")
    if out.points_told not in (None, out.points):
        raise SweepError(path, f"says it has {out.points_told} points and has {out.points}; export it again")
    if out.points < LEAST_POINTS:
        raise SweepError(
            path, f"has {out.points} points, at least {LEAST_POINTS} are needed; sweep with more (201, say)"
        )
    return out


def _point(path: Path, number: int, content: str, wanted: int, out: Looked) -> bool:
    """Take one point; False where the sweep has ended."""
    words = content.split()
    values = [_plain_number(path, number, content, w) for w in words]
    if len(values) == 5 and wanted == 9 and out.points and values[0] <= out.last:
        return False
    if len(values) != wanted:
        raise SweepError(
            path,
            f"line {number} holds {len(values)} number{'' if len(values) == 1 else 's'}, a point of this "
            f"file has {wanted}: it is cut short or damaged; export it again",
        )
    if not all(math.isfinite(v) for v in values):
        raise SweepError(path, f"line {number} holds values that are not numbers; export the sweep again")
    if values[0] < 0.0:
        raise SweepError(path, f"line {number}: frequency {words[0]} is below zero; export the sweep again")
    if values[0] <= out.last:
        raise SweepError(
            path,
            f"line {number}: frequency {words[0]} does not follow {out.last:.10g}; the points must rise. "
            "Sort them, or export again",
        )
    out.last, out.points = values[0], out.points + 1
    return True


def _plain_number(path: Path, number: int, content: str, word: str) -> float:
    try:
        if not word.isascii() or "_" in word:  # which float() would read
            raise ValueError
        return float(word)
    except ValueError as err:
        raise SweepError(
            path,
            f"line {number}: reads {show(content[:40])}, where numbers should stand; export the sweep again",
        ) from err


def _options(path: Path, number: int, content: str) -> str:
    """An option line as one that says everything: unit, kind, format and impedance (GHz S MA R 50 when left out)."""
    unit, kind, form, ohm = "GHZ", "S", "MA", "50"
    words = content.upper().split()
    while words:
        word = words.pop(0)
        if word in _UNITS:
            unit = word
        elif word in ("S", "Y", "Z", "G", "H"):
            kind = word
        elif word in _FORMATS:
            form = word
        elif word == "R" and words:
            ohm = words.pop(0)
        elif word != "R":
            raise SweepError(
                path,
                f"line {number}: {show(word)} is no option; allowed: {', '.join(_UNITS)}, S, {', '.join(_FORMATS)} "
                "and R with the impedance, like # MHz S MA R 50",
            )
    if kind != "S":
        raise SweepError(path, f"line {number}: holds {kind} parameters; export S parameters")
    if not 0.0 < _plain_number(path, number, content.strip(), ohm) < math.inf:
        raise SweepError(path, f"line {number}: an impedance of {show(ohm)}; allowed: like R 50")
    return f"{unit} {kind} {form} R {ohm}"


def _keyword(path: Path, number: int, content: str, out: Looked) -> bool:
    """A keyword of version 2; False where what we want has ended. Those that change the numbers' meaning count."""
    name, _, rest = content[1:].partition("]")
    name, rest = " ".join(name.upper().split()), rest.strip()
    ports = 1 if path.suffix.lower() == ".s1p" else 2
    if name not in _KEYWORDS:
        raise SweepError(
            path, f"line {number}: {show(content)} is no keyword of Touchstone 2; export version 1"
        )
    if name == "NUMBER OF PORTS" and rest != str(ports):
        raise SweepError(
            path, f"line {number}: {show(rest)} ports, its name says {ports}; export the sweep again"
        )
    if name == "MIXED-MODE ORDER" or (name == "MATRIX FORMAT" and rest.upper() != "FULL"):
        raise SweepError(path, f"line {number}: {show(content)}: export the plain, full S parameters")
    if name == "NUMBER OF FREQUENCIES":
        if not (rest.isascii() and rest.isdigit() and len(rest) < 10):
            raise SweepError(path, f"line {number}: {show(rest)} points; export the sweep again")
        out.points_told = int(rest)
    if name == "REFERENCE":
        out.references_missing = ports
        _reference(path, number, rest, out)
    out.informing = name == "BEGIN INFORMATION"
    if "INFORMATION" not in name:  # which the library does not know
        out.lines.append(content)
    return name not in ("NOISE DATA", "END")


def _reference(path: Path, number: int, content: str, out: Looked) -> None:
    """Impedances of the ports, which may run over several lines."""
    for word in content.split():
        value = _plain_number(path, number, content, word)
        if not 0.0 < value < math.inf or out.references_missing == 0:
            raise SweepError(
                path, f"line {number}: an impedance of {show(word)}; allowed: one above 0 for each port"
            )
        out.reference_ohm = value if out.reference_ohm is None else out.reference_ohm
        out.references_missing -= 1
