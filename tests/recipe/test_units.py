"""Quantities come out in the unit they are kept in. References: the units' definitions, worked by hand."""

from __future__ import annotations

import math

import pytest

from wavejig.recipe.units import (
    ANGLE,
    FREQUENCY,
    LENGTH,
    LEVEL,
    POWER,
    RESISTANCE,
    SPEED,
    Kind,
    UnitError,
    parse,
    parse_sheet,
    parse_wire,
)

KINDS = (LENGTH, FREQUENCY, ANGLE, RESISTANCE, LEVEL, POWER, SPEED)
# International yard and pound agreement, 1959: yard 0.9144 m, so inch 25.4 mm and mile 1609.344 m; the nautical
# mile is 1852 m (SI brochure, units outside the SI).
READ = [
    ("31 mm", LENGTH, 31.0),
    ("3.1cm", LENGTH, 31.0),
    ("0.031 m", LENGTH, 31.0),
    ("800 um", LENGTH, 0.8),
    ("800 µm", LENGTH, 0.8),
    ("36 in", LENGTH, 914.4),
    ('1 1/2 "', LENGTH, 38.1),
    ("1/16 in", LENGTH, 1.5875),
    ("-2 mm", LENGTH, -2.0),
    ("2.44 GHz", FREQUENCY, 2.44e9),
    ("868 MHz", FREQUENCY, 868e6),
    ("915000 kHz", FREQUENCY, 915e6),
    ("1e9 Hz", FREQUENCY, 1e9),
    ("90 deg", ANGLE, 90.0),
    ("90°", ANGLE, 90.0),
    ("1.5707963267948966 rad", ANGLE, 90.0),
    ("50 ohm", RESISTANCE, 50.0),
    ("75 Ω", RESISTANCE, 75.0),
    ("12 dB", LEVEL, 12.0),
    ("100 mW", POWER, 0.1),
    ("2 W", POWER, 2.0),
    ("40 m/s", SPEED, 40.0),
    ("36 km/h", SPEED, 10.0),
    ("3600 mph", SPEED, 1609.344),
    ("3600 kn", SPEED, 1852.0),
]


@pytest.mark.parametrize(("text", "kind", "value"), READ, ids=[row[0] for row in READ])
def test_reads(text: str, kind: Kind, value: float) -> None:
    assert parse(text, kind) == pytest.approx(value, rel=4e-16)


def test_every_spelling_is_tried_and_the_first_is_the_unit_kept() -> None:
    for kind in KINDS:
        assert kind.spellings[0][1] == 1.0
        tried = {t.lstrip("-0123456789./e ") for t, k, _ in READ if k is kind}
        assert tried == {s for s, _ in kind.spellings}


@pytest.mark.parametrize(
    ("text", "needle"),
    [
        (31, 'Write "31 mm"'),
        ("31", "no unit"),
        ("31 Mm", "Write"),
        ("31 GHz", "Write it like"),
        ("3,1 mm", "3.1 mm"),
        ("1/0 mm", "divides by zero"),
        ("1e400 mm", "finite"),
        ("1e308 m", "finite"),
        (True, "in quotes"),
        (math.inf, "number with its unit"),
    ],
)
def test_refuses(text: object, needle: str) -> None:
    with pytest.raises(UnitError, match=needle):
        parse(text, LENGTH)


def test_sizes_of_wire_and_sheet_keep_their_gauge() -> None:
    assert str(parse_wire("13 AWG")) == str(parse_wire("awg 13")) == "13 AWG"
    assert (parse_wire("1/16 in").standard, parse_wire("1/16 in").number) == ("diameter", 1.5875)
    assert str(parse_wire("2.5 mm2")) == "2.5 mm²"
    assert str(parse_sheet("20 ga")) == "20 gauge"
    assert parse_sheet("1/32 in").number == 0.79375
