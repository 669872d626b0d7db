"""Touchstone sweeps of every dialect, and why some cannot be used."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from wavejig.tuning.sweepfile import MeasuredSweep, SweepError, read_sweep, serial_number

LOW, HIGH = 2.400e9, 2.4835e9
F = np.linspace(2.2e9, 2.7e9, 101)
S = 0.6 * np.exp(-2j * np.pi * (F - 2.2e9) / 0.9e9) * (0.3 + ((F - 2.44e9) / 0.3e9) ** 2)
UNITS = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}


def numbers(s: complex, kind: str) -> str:
    if kind == "RI":
        return f"{s.real:.9f} {s.imag:.9f}"
    size = abs(s) if kind == "MA" else 20.0 * np.log10(abs(s))
    return f"{size:.9f} {np.degrees(np.angle(s)):.7f}"


def text(
    unit: str = "MHz", kind: str = "RI", ohm: str = "50", ports: int = 1, head: str = "! a sweep\n"
) -> str:
    rows = []
    for f, s in zip(F, S, strict=True):
        rest = " 0.1 0.2 0.1 0.2 0.5 0.1" if ports == 2 else ""
        rows.append(f"{f / UNITS[unit]:.9g} {numbers(s, kind)}{rest}")
    return f"{head}# {unit} S {kind} R {ohm}\n" + "\n".join(rows) + "\n"


def read(tmp_path: Path, content: str, name: str = "antenna-07.s1p") -> MeasuredSweep:
    path = tmp_path / name
    path.write_text(content, encoding="utf-8")
    return read_sweep(path, LOW, HIGH, 50.0)


@pytest.mark.parametrize("unit", sorted(UNITS))
@pytest.mark.parametrize("kind", ["RI", "MA", "DB"])
@pytest.mark.parametrize("ports", [1, 2])
def test_every_dialect_says_the_same(tmp_path: Path, unit: str, kind: str, ports: int) -> None:
    sweep = read(tmp_path, text(unit, kind, ports=ports), f"a-07.s{ports}p")
    assert np.allclose(sweep.frequencies_hz, F, rtol=1e-8)
    assert np.abs(sweep.reflection - S).max() < 1e-6
    assert sweep.serial == "07"


def test_worst_return_loss_looks_between_points(tmp_path: Path) -> None:
    sweep = read(tmp_path, text())
    low, high = 2.4012e9, 2.4821e9  # neither is a point
    db, at = sweep.worst_return_loss_db(low, high)
    inside = [f for f in (low, high, *F) if low <= f <= high]
    sizes = [np.hypot(np.interp(f, F, S.real), np.interp(f, F, S.imag)) for f in inside]
    assert db == pytest.approx(-20.0 * np.log10(max(sizes)), abs=1e-6)
    assert at == pytest.approx(inside[int(np.argmax(sizes))])


def lines(keep: slice) -> str:
    head, *rows = text().split("\n# ", 1)[1].splitlines()
    return "# " + head + "\n" + "\n".join(rows[keep]) + "\n"


def rows_of(s: np.ndarray, f: np.ndarray = F) -> str:
    return "# Hz S RI R 50\n" + "".join(
        f"{a:.1f} {b.real:.9f} {b.imag:.9f}\n" for a, b in zip(f, s, strict=True)
    )


SWAPPED = text().splitlines()
SWAPPED[40], SWAPPED[41] = SWAPPED[41], SWAPPED[40]
REFUSED = {
    "wholly outside": (rows_of(S, F * 2.0), "wholly outside the band"),
    "wrong unit": (text().replace("# MHz", "# GHz"), "wholly outside the band"),
    "band not covered": (lines(slice(45, 101)), "does not cover the band"),
    "too few points": (lines(slice(0, 101, 8)), "13 points"),
    "too few in the band": (lines(slice(0, 101, 5)), "too few points"),
    "other impedance": (text(ohm="75"), "75 ohm"),
    "unsorted": ("\n".join(SWAPPED), "does not follow"),
    "a frequency twice": (text() + text().splitlines()[-1] + "\n", "does not follow"),
    "cut short in a line": (text()[:-8].rstrip() and text()[: text().rstrip().rfind(" ")], "cut short"),
    "no option line": (text().replace("# MHz S RI R 50\n", ""), "no option line"),
    "words": (text().replace("2200 ", "start ", 1), "numbers should stand"),
    "impedance parameters": (text().replace(" S ", " Z "), "export S parameters"),
    "a short": (rows_of(-0.995 * np.exp(-1j * F / 1e9)), "a short, an open"),
    "an open": (rows_of(0.99 * np.exp(-1j * F / 1e9)), "a short, an open"),
    "a load": (rows_of(0.005 * np.exp(-1j * F / 1e9)), "matched load"),
    "uncalibrated": (rows_of(1.4 * S / np.abs(S)), "calibrate"),
    "not numbers": (text().replace(numbers(S[3], "RI"), "nan nan"), "not numbers"),
    "empty": ("", "is empty"),
    "only remarks": ("! nothing\n", "no Touchstone data"),
    "binary": ("ab\0cd", "no text"),
}


@pytest.mark.parametrize("what", sorted(REFUSED))
def test_refusals_say_what_is_wrong(tmp_path: Path, what: str) -> None:
    content, words = REFUSED[what]
    with pytest.raises(SweepError) as err:
        read(tmp_path, content)
    assert words in str(err.value)
    assert str(tmp_path) in str(err.value)


def test_another_ending_and_a_missing_file(tmp_path: Path) -> None:
    with pytest.raises(SweepError, match=r"\.s1p or \.s2p"):
        read(tmp_path, text(), "sweep.csv")
    with pytest.raises(OSError, match=r"gone\.s1p"):
        read_sweep(tmp_path / "gone.s1p", LOW, HIGH, 50.0)


@pytest.mark.parametrize(
    ("name", "comments", "serial"),
    [
        ("saltmarsh-2g4-07.s1p", "", "07"),
        ("unit12.s1p", "", "12"),
        ("spare.s1p", "", "spare"),
        ("x-1.s1p", " serial: 9", "9"),
        ("x-1.s1p", " Serial No. A-14\n other", "A-14"),
        ("x-1.s1p", " S/N 23", "23"),
        ("x-3.s1p", " measured with 2 adapters", "3"),
    ],
)
def test_serial_numbers(name: str, comments: str, serial: str) -> None:
    assert serial_number(Path(name), comments) == serial
