"""Files made to break a reader, by kind: each is (what, bytes). They are told about, not believed.

Sizes stand at and beyond what the readers take, since a limit that is never reached proves nothing.
"""

from __future__ import annotations

from tests.recipe.bad_recipes import GOOD, below, changed

KIB, MIB = 1024, 1024 * 1024


def _key(line: str) -> bytes:
    return (line + "\n" + GOOD).encode()


def _wire(value: str) -> bytes:
    return changed('"1.8 mm"', value).encode()


def _name(value: str) -> bytes:
    return changed('"spare"', value).encode()


_FULL = 250 * KIB  # just below the limit of a recipe

RECIPES: list[tuple[str, bytes]] = [
    # numbers
    *[
        (f"wire of {v[:24]}", _wire(v))
        for v in (
            "1e400", "-1e400", "nan", "-inf", "9" * 4000, "9" * 200_000, "0x" + "f" * 100_000, "1e-99999",
            '"1e9999 mm"', '"-1e9999 mm"', '"1e-9999 mm"', '"nan mm"', '"inf mm"', '"2**2**2**99"', '"m**9999999"',
            '"1 m**9999999"', '"1e308 m"', f'"{"9" * 200_000} mm"', f'"1/{"9" * 400} in"', '"1/0 in"', '"0/0 AWG"',
            f'"{"1 " * 100_000}mm"', f'"{"1/" * 100_000}1 mm"', f'"{"." * 200_000}"', f'"{"-" * 200_000}1 mm"',
            f'"1{" " * 200_000}mm"', f'"AWG {"1" * 5000}"', '"1e300 AWG"', '"1e999 AWG"', '"١٢ mm"', '"1 ｍｍ"',
            '"1 _registry"', '"1 mm; import os"', "1979-05-27T07:32:00Z", "07:32:00", "[[[]]]", "{}",
        )
    ],
    ("quantity of a googol", changed("quantity = 2", f"quantity = 1{'0' * 100}").encode()),
    ("negative zero", below("measured", "frequency = -0.0").encode()),
    ("a million corners", changed('wire = "1.8 mm"', f'wire = "1.8 mm"\ncorners = [{"0," * 120_000}]').encode()),
    ("lists for holes", _key(f"[reflector]\nholes = [{'[],' * 80_000}]")),
    ("a long array", _key(f"x = [{'1,' * 120_000}]")),
    # nesting and keys
    *[(f"{n} lists deep", _key("x = " + "[" * n + "]" * n)) for n in (20, 90, 200, 320, 450, 900, 20_000, 120_000)],
    *[(f"{n} tables deep", _key("x = " + "{a=" * n + "1" + "}" * n)) for n in (20, 90, 200, 320, 900, 50_000)],
    *[(f"a band {n} lists deep", changed('["2.400 GHz", "2.4835 GHz"]', "[" * n + "]" * n).encode()) for n in (50, 150, 300, 480)],
    ("a key of a hundred thousand parts", _key("a." * 120_000 + "a = 1")),
    ("a quoted key of many parts", _key('"a".' * 60_000 + "a = 1")),
    ("a header of many parts", b"[" + b"a." * 120_000 + b"a]\n" + GOOD.encode()),
    ("a key of many parts in a table", _key("x = {" + "a." * 120_000 + "a = 1}")),
    ("a key of many parts after a comma", _key("x = {b = 1, " + "a." * 120_000 + "a = 1}")),
    ("nineteen parts", _key("a." * 18 + "a = 1")),
    ("forty thousand unknown keys", "".join(f"k{i:05} = 1\n" for i in range(_FULL // 11)).encode()),
    ("unknown keys in a known table", (GOOD + "".join(f"k{i:05} = 1\n" for i in range(20_000))).encode()),
    ("ten thousand tables", "".join(f"[t{i:05}]\n" for i in range(_FULL // 9)).encode()),
    ("ten thousand holes", (GOOD + "[[reflector.holes]]\n" * 12_000).encode()),
    ("two hundred bad holes", (GOOD + '[[reflector.holes]]\nx = 1\n' * 200).encode()),
    ("tables below tables of an array", (GOOD + "[[a]]\n[[a.b]]\n[[a.b.c]]\n" * 8_000).encode()),
    ("a key of a quarter MiB", _key("k" * _FULL + " = 1")),
    ("an empty key", _key('"" = 1')),
    ("a key of blanks", _key('"  " = 1')),
    ("a key of escapes", _key('"\\u0000\\u001b[31m\\u202e" = 1')),
    ("the key of another world", _key("__class__ = 1")),
    ("a constructor's key", below("radiator", "__init__ = 1", "model_config = 1").encode()),
    # text
    ("a mark and Windows lines", b"\xef\xbb\xbf" + GOOD.replace("\n", "\r\n").encode()),
    ("two marks", b"\xef\xbb\xbf\xef\xbb\xbf" + GOOD.encode()),
    ("only a mark", b"\xef\xbb\xbf"),
    ("a mark and blanks", b"\xef\xbb\xbf \n \n"),
    ("UTF-16 without a mark", GOOD.encode("utf-16-le")),
    ("UTF-32", GOOD.encode("utf-32")),
    ("lone returns", GOOD.replace("\n", "\r").encode()),
    ("a surrogate in UTF-8", b'name = "\xed\xa0\x80"\n'),
    ("an escaped surrogate", _name(r'"\ud800"')),
    ("overlong UTF-8", b'name = "\xc0\xaf"\n'),
    ("nul in a name", _name('"a\x00b"')),
    ("escaped nul", _name(r'"a\u0000b"')),
    ("colours raw in a value", b'wire = \x1b[31mred\n'),
    ("colours raw in a string", _wire('"1.8 \x1b[31mmm"')),
    ("colours escaped in a unit", _wire(r'"1.8 \u001b[2Jmm"')),
    ("colours escaped in a family", below("radiator", r'metal = "\u001b]0;title\u0007"').encode()),
    ("writing turned round", _name('"\u202egnp.exe"')),
    ("writing turned round in a currency", (GOOD + '[prices]\ncurrency = "\u202eRUE"\n').encode()),
    ("writing turned round in a comment", ("# \u202e\u2066 wire\n" + GOOD).encode()),
    ("line separators", _name('"a\u2028b\u2029c\u0085d"')),
    ("quarter of a MiB of backslashes", _name('"' + "\\\\" * (_FULL // 2) + '"')),
    ("quotes behind backslashes", _name('"' + '\\"' * (_FULL // 2) + '"')),
    ("a multi-line string without end", _name('"""' + '"" ' * 80_000)),
    ("three hundred thousand blank lines", b"\n" * 200_000 + GOOD.encode()),
    ("one long comment", b"#" + b"x" * _FULL + b"\n" + GOOD.encode()),
    ("spaces before a fault", _name(" " * _FULL + "=")),
    ("a sweep named like a folder", below("measured", 'sweep = "../../etc/passwd"').encode()),
    ("50 MiB", b"#" * (50 * MIB)),
]  # fmt: skip

_HEAD = "# MHz S RI R 50\n"
_ROWS = "".join(f"{2200 + 5 * i} 0.3 0.1\n" for i in range(101))

SWEEPS: list[tuple[str, bytes]] = [
    *[
        (f"a frequency of {v[:12]}", (_HEAD + _ROWS.replace("2300 ", f"{v} ", 1)).encode())
        for v in ("nan", "inf", "-inf", "1e400", "-5", "1_000", "٢٣٠٠", "9" * 100_000, "0x10", "2300\x1b[31m")
    ],
    ("all frequencies nan", (_HEAD + "nan 0.3 0.1\n" * 50).encode()),
    ("the first frequency nan", (_HEAD + "nan 0.3 0.1\n" + _ROWS).encode()),
    ("the last frequency inf", (_HEAD + _ROWS + "inf 0.3 0.1\n").encode()),
    ("negative frequencies", (_HEAD + "-5 0.3 0.1\n" + _ROWS).encode()),
    ("values of 1e308", (_HEAD + _ROWS.replace("0.3 0.1", "1e308 1e308")).encode()),
    ("decibels of 1e5", (_HEAD.replace("RI", "DB") + _ROWS.replace("0.3", "1e5")).encode()),
    ("an angle of inf", (_HEAD.replace("RI", "MA") + _ROWS.replace("0.1\n", "inf\n", 1)).encode()),
    *[
        (f"option line {o!r}"[:50], (f"# {o}\n" + _ROWS).encode())
        for o in (
            "", "MHz", "MHz S RI R", "MHz S RI R x", "MHz S RI R nan", "MHz S RI R 0", "MHz S RI R -50", "THz S RI R 50",
            "MHz S RI R 1e400", "MHz S RI R 50 R 75", "MHz S XX R 50", "S", "#", "MHz T RI R 50", "MHz S RI R 50 75",
            "MHz S RI R (50,0)", "x" * 100_000, "MHz\x1b[2J S RI R 50", "R 50 RI S MHz",
        )
    ],
    *[
        (f"keyword {k}"[:40], ("[Version] 2.0\n" + _HEAD + k + "\n[Network Data]\n" + _ROWS + "[End]\n").encode())
        for k in (
            "[Number of Ports] 1", "[Number of Ports] 99999999", "[Number of Ports] -1", "[Number of Ports] x",
            "[Reference] 50 75", "[Reference]", "[Number of Frequencies] 9999999999", "[Matrix Format] Lower",
            "[Matrix Format] Nowhere", "[Mixed-Mode Order] D9,9", "[Two-Port Data Order] 21_12", "[" * 5000, "[]",
            "[Begin Information]", "[Noise Data]",
        )
    ],
    ("impedances in remarks", (_HEAD + _ROWS.replace("\n", "\n! Port Impedance 1e400 x\n")).encode()),
    ("gamma in remarks", (_HEAD + _ROWS.replace("\n", "\n! Gamma\n")).encode()),
    ("a port of a large number", (_HEAD + "! Port[999999999] = a\n" + _ROWS).encode()),
    ("a port of a negative number", (_HEAD + "! Port[-1] = a\n" + _ROWS).encode()),
    ("form feeds between lines", (_HEAD + _ROWS.replace("\n", "\x0c", 40)).encode()),
    ("Unicode line ends", (_HEAD + _ROWS.replace("\n", "\u2028")).encode()),
    ("old line ends", (_HEAD + _ROWS).replace("\n", "\r").encode()),
    ("UTF-16", (_HEAD + _ROWS).encode("utf-16")),
    ("a mark", b"\xef\xbb\xbf" + (_HEAD + _ROWS).encode()),
    ("Latin-1 remark", b"! 50 \xb5m\n" + (_HEAD + _ROWS).encode()),
    ("an odd serial number", ("! serial: \u202e7\x1b[31m\n" + _HEAD + _ROWS).encode()),
    ("a serial number without end", ("! serial: " + "7" * 100_000 + "\n" + _HEAD + _ROWS).encode()),
    ("many hyphens", ("! serial " * 20_000 + "\n" + _HEAD + _ROWS).encode()),
    ("long line", (_HEAD + "1 " * 500_000 + "\n").encode()),
    ("long word", (_HEAD + "x" * 900_000 + "\n").encode()),
    ("one point on many lines", (_HEAD + "2200\n0.3\n0.1\n" * 40).encode()),
    ("as many points as are taken", (_HEAD + "".join(f"{2200 + i * 5e-3:.3f} 0.3 0.1\n" for i in range(115_000))).encode()),
    ("only remarks", b"! x\n" * 200_000),
    ("remarks without an end", b"!" * (1 * MIB)),
    ("zeros", b"\0" * MIB),
    ("50 MiB", b"1" * (50 * MIB)),
]  # fmt: skip

_W = '{"start": [0, 0, 0], "end": [0, 0, 1], "radius": 0.1}'


def _model(**keys: str) -> bytes:
    given = {"wires": f"[{_W}]", "triangles": "[]", "ports": "[]", "plane": "null"} | keys
    return ("{" + ", ".join(f'"{k}": {v}' for k, v in given.items()) + "}").encode()


_MOST = 8 * MIB - 4096

MODELS: list[tuple[str, bytes]] = [
    *[
        (f"a radius of {v[:16]}", _model(wires=f"[{_W.replace('0.1', v)}]"))
        for v in ("NaN", "Infinity", "-Infinity", "1e400", "9" * 4000, "9" * 100_000, "1" + "0" * 400, "true", "null", '"1"',
                  "[]", "{}", "-0", "1e-400")
    ],
    *[
        (f"a port on {v[:16]}", _model(ports=f'[{{"wire": {v}, "end": 0}}]'))
        for v in ("-1", "1e9", "9" * 400, "9" * 6000, "true", "null", "[[]]", '"\\u001b[31m"')
    ],
    *[(f"{n} lists deep", _model(triangles="[" * n + "]" * n)) for n in (5, 100, 450, 900, 990, 100_000, 4_000_000)],
    *[(f"{n} objects deep", _model(plane='{"a":' * n + "1" + "}" * n)) for n in (5, 100, 450, 990, 100_000)],
    ("only opening brackets", b"[" * _MOST),
    ("a plane of lists", _model(plane="[[[0]]]")),
    ("a plane with colours", _model(plane='"\\u001b[31mz=0"')),
    ("a long plane", _model(plane='"' + "z" * 1_000_000 + '"')),
    ("an unknown key with colours", _model(**{"\\u001b[2J\\u202e": "1"})),
    ("a long unknown key", _model(**{"k" * 1_000_000: "1"})),
    ("half a character", _model(**{"\\ud800": "1"})),
    ("a key twice", b'{"wires": [], "wires": 5}'),
    ("the largest list of empty lists", _model(triangles="[" + "[]," * (_MOST // 3) + "[]]")),
    ("the largest list of small objects", _model(wires="[" + '{"":0},' * (_MOST // 7) + "0]")),
    ("the largest list of numbers", _model(triangles="[" + "1," * (_MOST // 2) + "1]")),
    ("the largest list of different numbers", _model(triangles="[" + ",".join(f"{i}" for i in range(1_000_000)) + "]")),
    ("many good triangles", _model(triangles="[" + ",".join(["[[0,0,0],[1,0,0],[0,1,0]]"] * 300_000) + "]")),
    ("a list for the file", b"[]"),
    ("a number for the file", b"1e400"),
    ("a long number for the file", b"9" * 100_000),
    ("UTF-16", _model().decode().encode("utf-16")),
    ("a mark", b"\xef\xbb\xbf" + _model()),
    ("nul", _model() + b"\0"),
    ("lines", _model().replace(b", ", b",\n").replace(b"0.1", b"-")),
    ("50 MiB", b" " * (50 * MIB)),
]  # fmt: skip

BOMBS = {"recipe": RECIPES, "sweep": SWEEPS, "model": MODELS}
