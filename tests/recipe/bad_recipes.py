"""Bad recipes as tired people write them: text, exit code, line and key told, words the message must hold.

Each row is (what, text or bytes, exit code, line, key, needles). `GOOD` is a recipe that builds; `with_line`
puts lines below one of its tables.
"""

from __future__ import annotations

GOOD = """\
name = "spare"
quantity = 2
[target]
band = ["2.400 GHz", "2.4835 GHz"]
[radiator]
family = "biquad"
wire = "1.8 mm"
[reflector]
thickness = "0.8 mm"
"""


def changed(old: str, new: str) -> str:
    """GOOD with one piece of text replaced; fails loudly when it is not there."""
    assert GOOD.count(old) == 1, old
    return GOOD.replace(old, new)


def below(table: str, *lines: str) -> str:
    """GOOD with lines added right under the header of a table (the table is added at the end if new)."""
    header = f"[{table}]\n"
    if header in GOOD:
        return GOOD.replace(header, header + "".join(f"{line}\n" for line in lines))
    return GOOD + header + "".join(f"{line}\n" for line in lines)


Row = tuple[str, str | bytes, int, int, str, tuple[str, ...]]

PATH_CORNERS = (
    '[["0 mm", "2 mm"], ["20 mm", "22 mm"], ["40 mm", "0 mm"], ["20 mm", "-22 mm"], ["0 mm", "-2 mm"]]'
)

OWN = '[reflector.own]\ndiameter = "160 mm"\ndepth = "15 mm"\n'

BAD: list[Row] = [
    # -- units and numbers
    ("bare number for a wire", changed('"1.8 mm"', "1.8"), 2, 7, "radiator.wire", ("1.8 mm", "no unit")),
    ("number without unit in quotes", changed('"1.8 mm"', '"1.8"'), 2, 7, "radiator.wire", ('"1.8 mm"',)),
    ("decimal comma", changed('"1.8 mm"', '"1,8 mm"'), 2, 7, "radiator.wire", ("1.8 mm", "decimal point")),
    ("unknown unit", below("radiator", 'side = "1 furlong"'), 2, 6, "radiator.side", ("mm", "furlong")),
    ("unit in the wrong case", changed("2.4835 GHz", "2.4835 ghz"), 2, 4, "target.band[1]", ("GHz",)),
    ("MHz without the quotes", changed('"2.400 GHz"', "2400"), 2, 4, "target.band[0]", ("bare number",)),
    ("wavelength for a band", changed('"2.400 GHz"', '"125 mm"'), 2, 4, "target.band[0]", ("frequency",)),
    ("frequency for a length", below("radiator", 'standoff = "15 GHz"'), 2, 6, "radiator.standoff", ("length",)),
    ("metres for millimetres", below("radiator", 'side = "31 m"'), 2, 6, "radiator.side", ("0.01 to 3000 mm", "31000")),
    ("negative length", below("radiator", 'side = "-31 mm"'), 2, 6, "radiator.side", ("0.01 to 3000 mm",)),
    ("zero gap", below("radiator", 'feed_gap = "0 mm"'), 2, 6, "radiator.feed_gap", ("0.01",)),
    ("fraction by nothing", below("radiator", 'side = "1/0 in"'), 2, 6, "radiator.side", ("divides by zero",)),
    ("infinity", below("radiator", "side = inf"), 2, 6, "radiator.side", ("number with its unit",)),
    ("not a number", below("radiator", "neutral_axis_factor = nan"), 2, 6, "radiator.neutral_axis_factor", ("0.3 to 0.7",)),
    ("huge exponent", below("radiator", 'side = "1e400 mm"'), 2, 6, "radiator.side", ("finite",)),
    ("angle out of range", below("radiator", 'lobe_angle = "200 deg"'), 2, 6, "radiator.lobe_angle", ("30 to 150 deg",)),
    ("angle without unit", below("radiator", "lobe_angle = 90"), 2, 6, "radiator.lobe_angle", ('"90 deg"',)),
    ("trial bend without unit", below("radiator", 'trial = [{former = "6 mm", bent_to = 100, relaxed_to = "97 deg"}]'), 2, 6, "radiator.trial[0].bent_to", ('"100 deg"',)),
    ("trial length of no bends", below("radiator", 'trial_length = {cut = "200 mm", outside = "214 mm", bends = 0, former = "6 mm"}'), 2, 6, "radiator.trial_length.bends", ("1 to 50",)),
    ("tolerance without unit", below("tolerances", "feed_gap = 0.2"), 2, 11, "tolerances.feed_gap", ("mm",)),
    ("unknown distribution", below("tolerances", 'distribution = "gaussian"'), 2, 11, "tolerances.distribution", ("normal", "uniform")),
    ("model error in percent", below("tolerances", "model = 1"), 2, 11, "tolerances.model", ("0 to 0.1",)),
    ("reading without unit", below("measured", "side = 30.7"), 2, 11, "measured.side", ("30.7 mm",)),
    ("correction far off", below("measured", "frequency = 2.4"), 2, 11, "measured.frequency", ("0.9 to 1.1",)),
    ("decibels as a number", below("target", "return_loss = 12"), 2, 4, "target.return_loss", ("dB",)),
    ("return loss negative", below("target", 'return_loss = "-12 dB"'), 2, 4, "target.return_loss", ("3 to 40 dB",)),
    ("impedance in dB", below("target", 'reference_impedance = "50 dB"'), 2, 4, "target.reference_impedance", ("ohm",)),
    ("permittivity with a unit", below("radiator", 'insulation_permittivity = "3 mm"'), 2, 6, "radiator.insulation_permittivity", ("plain number",)),
    # -- gauges
    ("gauge unknown to the table", changed('"1.8 mm"', '"45 AWG"'), 2, 7, "radiator.wire", ("0 to 28 AWG",)),
    ("half a gauge", changed('"1.8 mm"', '"13.5 AWG"'), 2, 7, "radiator.wire", ("whole gauge",)),
    ("gauge misspelt", changed('"1.8 mm"', '"13 AGW"'), 2, 7, "radiator.wire", ("AWG",)),
    ("sheet gauge off the table", changed('"0.8 mm"', '"35 gauge"'), 2, 9, "reflector.thickness", ("gauge",)),
    ("sheet in AWG", changed('"0.8 mm"', '"20 AWG"'), 2, 9, "reflector.thickness", ("20 gauge",)),
    ("gauge of a laminate", changed('thickness = "0.8 mm"', 'thickness = "20 gauge"\nmaterial = "laminate"'), 2, 9, "reflector.thickness", ("laminate",)),
    ("a wire like a pole", changed('"1.8 mm"', '"18 mm"'), 2, 7, "radiator.wire", ("0.3 to 8 mm",)),
    ("a sheet like a plank", changed('"0.8 mm"', '"8 mm"'), 2, 9, "reflector.thickness", ("0.1 to 6 mm",)),
    # -- names and words
    ("folder outside", changed('"spare"', '"../spare"'), 2, 1, "name", ("letters, digits", '"spare" would do')),
    ("absolute folder", changed('"spare"', '"/spare"'), 2, 1, "name", ("letters, digits",)),
    ("backslashes", changed('"spare"', r"'..\spare'"), 2, 1, "name", ("letters, digits",)),
    ("hidden folder", changed('"spare"', '".spare"'), 2, 1, "name", ("letter or digit",)),
    ("device name", changed('"spare"', '"con"'), 2, 1, "name", ("device",)),
    ("empty name", changed('"spare"', '""'), 2, 1, "name", ("1 to 48",)),
    ("name of spaces", changed('"spare"', '"   "'), 2, 1, "name", ("1 to 48",)),
    ("very long name", changed('"spare"', f'"{"x" * 400}"'), 2, 1, "name", ("1 to 48",)),
    ("control character in the name", changed('"spare"', r'"spa\u0007re"'), 2, 1, "name", (r"\x07", "letters")),
    ("name that is a number", changed('"spare"', "24"), 2, 1, "name", ("in quotes",)),
    ("family misspelt", changed('"biquad"', '"bi-quad"'), 2, 6, "radiator.family", ('Did you mean "biquad"?',)),
    ("family in capitals", changed('"biquad"', '"BIQUAD"'), 2, 6, "radiator.family", ('"biquad"',)),
    ("metal misspelt", below("radiator", 'metal = "coper"'), 2, 6, "radiator.metal", ("copper",)),
    ("metal not drawn to wire", below("radiator", 'metal = "laminate"'), 2, 6, "radiator.metal", ("copper",)),
    ("unknown temper", below("radiator", 'temper = "soft-ish"'), 2, 6, "radiator.temper", ("annealed",)),
    ("unknown connector", below("feed", 'connector = "sma"'), 2, 11, "feed.connector", ("sma-4hole",)),
    ("unknown plastic", below("spacer", 'material = "wood"'), 2, 11, "spacer.material", ("PETG",)),
    ("unknown process", below("cutter", 'process = "scissors"'), 2, 11, "cutter.process", ("fibre-laser",)),
    ("unknown tube", below("feed", 'style = "tube"', 'tube = "rg402"'), 2, 12, "feed.tube", ("tube-3.6",)),
    # -- keys, tables, types
    ("unknown key", below("radiator", 'stand_off = "15 mm"'), 2, 6, "radiator.stand_off", ('"standoff"',)),
    ("key in the wrong table", below("target", 'wire = "2 mm"'), 2, 4, "target.wire", ("[radiator]",)),
    ("unknown table", GOOD + "[antena]\nx = 1\n", 2, 10, "antena", ("unknown key",)),
    ("missing band", changed('band = ["2.400 GHz", "2.4835 GHz"]\n', ""), 2, 3, "target.band", ("band = [",)),
    ("missing name", changed('name = "spare"\n', ""), 2, 1, "name", ("must be given",)),
    ("missing radiator", GOOD.replace('[radiator]\nfamily = "biquad"\nwire = "1.8 mm"\n', ""), 2, 1, "radiator", ("[radiator]",)),
    ("band of one", changed('["2.400 GHz", "2.4835 GHz"]', '"2.44 GHz"'), 2, 4, "target.band", ("two frequencies",)),
    ("band upside down", changed('["2.400 GHz", "2.4835 GHz"]', '["2.4835 GHz", "2.400 GHz"]'), 2, 4, "target.band", ("Swap",)),
    ("band of two octaves", changed('"2.400 GHz"', '"0.5 GHz"'), 2, 4, "target.band", ("octave",)),
    ("band out of reach", changed('"2.400 GHz"', '"2.4 MHz"'), 2, 4, "target.band[0]", ("1e+08",)),
    ("quantity of none", changed("quantity = 2", "quantity = 0"), 2, 2, "quantity", ("1 to 10000",)),
    ("quantity of a million", changed("quantity = 2", "quantity = 1000000"), 2, 2, "quantity", ("1 to 10000",)),
    ("quantity in words", changed("quantity = 2", 'quantity = "twelve"'), 2, 2, "quantity", ("whole number",)),
    ("quantity that is true", changed("quantity = 2", "quantity = true"), 2, 2, "quantity", ("whole number",)),
    ("a table for a value", below("radiator.wire", "d = 1").replace('wire = "1.8 mm"\n', ""), 2, 9, "radiator.wire", ("diameter",)),
    ("a value for a table", GOOD.replace('[reflector]\nthickness = "0.8 mm"\n', "").replace("quantity = 2", 'reflector = "brass"'), 2, 2, "reflector", ("table",)),
    ("bed of two sizes", below("printer", 'bed = ["220 mm", "220 mm"]'), 2, 11, "printer.bed", ("three sizes",)),
    ("a fixture style that is none", below("fixture", 'style = "stopblock"'), 2, 11, "fixture.style", ("stop-block",)),
    ("hole without a place", GOOD + '[[reflector.holes]]\nx = "1 mm"\ndiameter = "3 mm"\n', 2, 10, "reflector.holes[0].y", ("must be given",)),
    ("corner of one number", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm"], ["1 mm", "2 mm"], ["3 mm", "3 mm"]]\n[reflector]'), 2, 8, "radiator.corners[0]", ("[x, y]",)),
    # -- keys that contradict
    ("side for round lobes", below("radiator", 'side = "31 mm"').replace('"biquad"', '"twin-loop"'), 2, 6, "radiator.side", ("biquad",)),
    ("diameter for square lobes", below("radiator", 'lobe_diameter = "31 mm"'), 2, 6, "radiator.lobe_diameter", ("twin-loop",)),
    ("path without corners", GOOD.replace('"biquad"', '"path"'), 2, 5, "radiator.corners", ("corners =",)),
    ("corners for a biquad", below("radiator", f"corners = {PATH_CORNERS}"), 2, 6, "radiator.corners", ("path",)),
    ("closed path without ground corner", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm", "2 mm"], ["20 mm", "22 mm"], ["0 mm", "-2 mm"], ["0 mm", "2 mm"]]\n[reflector]'), 2, 5, "radiator.ground_corner", ("2 to 3",)),
    ("both terminals in one place", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm", "2 mm"], ["20 mm", "22 mm"], ["0 mm", "2 mm", "5 mm"]]\n[reflector]'), 2, 8, "radiator.corners", ("both terminals",)),
    ("both terminals of a closed path in one place", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm", "2 mm"], ["20 mm", "22 mm"], ["0 mm", "2 mm"], ["-9 mm", "9 mm"], ["0 mm", "2 mm"]]\nground_corner = 3\n[reflector]'), 2, 8, "radiator.corners", ("both terminals",)),
    ("a corner twice", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm", "2 mm"],\n["20 mm", "22 mm"],\n["20 mm", "22 mm"], ["0 mm", "-2 mm"]]\n[reflector]'), 2, 10, "radiator.corners[2]", ("different places",)),
    ("a path that goes right back", GOOD.replace('"biquad"', '"path"').replace("[reflector]", 'corners = [["0 mm", "2 mm"], ["20 mm", "22 mm"], ["1 mm", "3 mm"], ["0 mm", "-2 mm"]]\n[reflector]'), 2, 8, "radiator.corners[1]", ("right back",)),
    ("gap wider than the lobe", below("radiator", 'feed_gap = "80 mm"'), 2, 5, "radiator.side", ("too wide",)),
    ("k and deduction", below("reflector", "k_factor = 0.4", 'bend_deduction = "1.5 mm"'), 2, 9, "reflector.k_factor", ("one of",)),
    ("insulation thickness of none", below("radiator", 'insulation_thickness = "1 mm"'), 2, 6, "radiator.insulation_thickness", ("enamel",)),
    # -- the file itself
    ("empty", "", 2, 1, "(file)", ("wavejig new",)),
    ("blank", "\n\n  \n", 2, 1, "(file)", ("wavejig new",)),
    ("huge", "#" * 300_000, 2, 1, "(file)", ("256 KiB",)),
    ("not text", bytes(range(256)), 2, 2, "(file)", ("UTF-8",)),
    ("UTF-16", GOOD.encode("utf-16"), 2, 1, "(file)", ("UTF-8",)),
    ("Latin-1 micro sign", below("radiator", 'side = "31000 \xb5m"').encode("latin-1"), 2, 6, "(file)", ("UTF-8",)),
    ("nul bytes", GOOD.encode() + b"\0\0\0", 2, 10, "(syntax)", ("TOML",)),
    ("quotes forgotten", changed('"1.8 mm"', "1.8 mm"), 2, 7, "wire", ('wire = "1.8 mm"',)),
    ("quote left open", changed('"1.8 mm"', '"1.8 mm'), 2, 7, "wire", ("left open",)),
    ("key twice", below("radiator", 'wire = "2 mm"'), 2, 8, "wire", ("second time",)),
    ("table twice", GOOD + "[target]\n", 2, 10, "(syntax)", ("second time",)),
    ("bracket left open", changed('"2.4835 GHz"]', '"2.4835 GHz"'), 2, 5, "(syntax)", ("TOML",)),
    ("deep nest", "a = " + "[" * 5000 + "]" * 5000 + "\n", 2, 1, "(file)", ("nested",)),
    ("endless number", f"quantity = {'9' * 20000}\n", 2, 1, "(file)", ("number",)),
    ("a list without end", f"quantity = [{'1, ' * 30_000}]\n", 2, 1, "(file)", ("lists",)),
    ("a key without end", f"{'a.' * 30_000}a = 1\n", 2, 1, "(file)", ("three parts",)),
    ("four hundred digits", changed('"1.8 mm"', "9" * 400), 2, 7, "radiator.wire", ("1.8 mm",)),
    ("four hundred digits for a factor", below("measured", "frequency = " + "9" * 400), 2, 11, "measured.frequency", ("0.9 to 1.1",)),
    ("thousands of unknown keys", GOOD + "".join(f"k{i} = 1\n" for i in range(5000)), 2, 50, "(file)", ("4960 more faults",)),
    ("a key of no letters", below("target", '"" = 1'), 2, 4, 'target.""', ("unknown key",)),
    ("colours in a unit", changed('"1.8 mm"', r'"1.8 \u001b[31mmm"'), 2, 7, "radiator.wire", (r"\x1b[31m",)),
    ("UTF-32", GOOD.encode("utf-32"), 2, 1, "(file)", ("UTF-8",)),
    ("only the mark of UTF-8", b"\xef\xbb\xbf", 2, 1, "(file)", ("wavejig new",)),
    # -- where it will work, and the paper
    ("power in decibels", GOOD + '[station]\ntransmitter_power = "20 dBm"\n', 2, 11, "station.transmitter_power", ("W, mW",)),
    ("a power of nothing", GOOD + '[station]\ntransmitter_power = "0 W"\n', 2, 11, "station.transmitter_power", ("1e-06 to 1000 W",)),
    ("a broadcaster's power", GOOD + '[station]\ntransmitter_power = "5000 W"\n', 2, 11, "station.transmitter_power", ("1000 W",)),
    ("a cable that amplifies", GOOD + '[station]\ncable_loss = "-3 dB"\n', 2, 11, "station.cable_loss", ("0 to 40 dB",)),
    ("cable loss bare", GOOD + "[station]\ncable_loss = 3\n", 2, 11, "station.cable_loss", ("3 dB",)),
    ("wind in knots misspelt", GOOD + '[station]\nwind_speed = "60 knots"\n', 2, 11, "station.wind_speed", ("kn",)),
    ("wind of a jet", GOOD + '[station]\nwind_speed = "900 km/h"\n', 2, 11, "station.wind_speed", ("5 to 100 m/s",)),
    ("a station's name", GOOD + '[station]\nname = "shed"\n', 2, 11, "station.name", ("transmitter_power",)),
    ("paper of no size", GOOD + '[sheet]\npaper = "A3"\n', 2, 11, "sheet.paper", ('"A4"', '"Letter"')),
    ("paper in small letters", GOOD + '[sheet]\npaper = "a4"\n', 2, 11, "sheet.paper", ('Did you mean "A4"?',)),
    ("a second angle", GOOD + '[sheet]\nprojection = "second"\n', 2, 11, "sheet.projection", ('"first"', '"third"')),
    ("projection as a number", GOOD + "[sheet]\nprojection = 1\n", 2, 11, "sheet.projection", ("in quotes",)),
    ("a yield wished for", GOOD + '[sheet]\nexpected_yield = "90 %"\n', 2, 11, "sheet.expected_yield", ('"yes"', '"no"')),
    ("a yield as true", GOOD + "[sheet]\nexpected_yield = true\n", 2, 11, "sheet.expected_yield", ('"yes"',)),
    ("paper in the wrong table", GOOD + '[station]\npaper = "A4"\n', 2, 11, "station.paper", ("[sheet]",)),
    # -- the batch
    ("unknown grain", GOOD + '[cutter]\ngrain = "along"\n', 2, 11, "cutter.grain", ('"none"',)),
    ("spacing without unit", GOOD + "[cutter]\nspacing = 3\n", 2, 11, "cutter.spacing", ("3 mm",)),
    ("margin wider than any sheet's", GOOD + '[cutter]\nmargin = "1 m"\n', 2, 11, "cutter.margin", ("200 mm",)),
    ("spool in kilograms", GOOD + '[wire_stock]\nlength = "2 kg"\n', 2, 11, "wire_stock.length", ("length",)),
    ("leg stock of no length", GOOD + '[wire_stock]\nleg_length = "0 mm"\n', 2, 11, "wire_stock.leg_length", ("50 to",)),
    ("tube stock bare", GOOD + "[wire_stock]\ntube_length = 1000\n", 2, 11, "wire_stock.tube_length", ("mm",)),
    ("a cut wider than a saw", GOOD + '[wire_stock]\ncut_loss = "1 m"\n', 2, 11, "wire_stock.cut_loss", ("20 mm",)),
    ("negative end waste", GOOD + '[wire_stock]\nend_waste = "-1 mm"\n', 2, 11, "wire_stock.end_waste", ("0 to",)),
    ("price in words", GOOD + '[prices]\nwire = "1.20"\n', 2, 11, "prices.wire", ("without quotes",)),
    ("negative price", GOOD + "[prices]\nsheet = -4\n", 2, 11, "prices.sheet", ("0 to",)),
    ("unknown price", GOOD + "[prices]\nconector = 4\n", 2, 11, "prices.conector", ("connector",)),
    ("currency over two lines", GOOD + '[prices]\ncurrency = "a\\nb"\n', 2, 11, "prices.currency", ("label",)),
    ("no spacer at all", below("spacer", "sets = 0"), 2, 11, "spacer.sets", ("1 to 500",)),
    # -- designs that cannot be made: exit 1
    ("bend too tight for the wire", below("radiator", 'inside_bend_radius = "0.2 mm"', 'temper = "hard"'), 1, 0, "wire-radius-tight", ("cracks",)),
    ("bends longer than sides", below("radiator", 'inside_bend_radius = "20 mm"'), 1, 0, "radiator-cannot-be-bent", ("smaller bend radius",)),
    ("standoff below the pin", below("radiator", 'standoff = "4 mm"'), 1, 0, "feed-conflict", ("pin",)),
    ("laminate folded", below("reflector", 'material = "laminate"', 'lips = "two"'), 1, 0, "sheet-not-foldable", ("lips",)),
    ("lip too short", below("reflector", 'lips = "two"', 'lip_height = "2 mm"'), 1, 0, "lip-short", ("shortest flange",)),
    ("wire longer than its bar", GOOD + '[wire_stock]\nlength = "200 mm"\n', 1, 0, "wire-over-stock", ("end waste", "wire_stock.length")),
    ("sheet larger than stock", below("reflector", 'base = ["700 mm", "700 mm"]'), 1, 0, "blank-over-stock", ("stock sheet",)),
    ("hole off the base", GOOD + '[[reflector.holes]]\nx = "500 mm"\ny = "0 mm"\ndiameter = "3 mm"\n', 1, 0, "reflector-conflict", ("edge",)),
    ("hole in the connector", GOOD + '[[reflector.holes]]\nx = "5 mm"\ny = "0 mm"\ndiameter = "6 mm"\n', 1, 0, "holes-meet", ("run into",)),
    ("tube on aluminium", below("feed", 'style = "tube"') .replace('thickness = "0.8 mm"', 'thickness = "0.8 mm"\nmaterial = "aluminium"'), 1, 0, "sheet-not-solderable", ("solder",)),
    ("legs shorted by the connector", below("feed", 'leg_spacing = "4 mm"'), 1, 0, "feed-conflict", ("cut-out",)),
    ("tube in too narrow a gap", below("feed", 'style = "tube"').replace('wire = "1.8 mm"', 'wire = "1.8 mm"\nfeed_gap = "2 mm"'), 1, 0, "feed-conflict", ("tube",)),
    # -- a dish of the user's own
    ("unknown kind of reflector", below("reflector", 'kind = "owned"'), 2, 9, "reflector.kind", ("own",)),
    ("own without sizes", below("reflector", 'kind = "own"'), 2, 8, "reflector.own.diameter", ("160 mm",)),
    ("own without depth", below("reflector", 'kind = "own"') + '[reflector.own]\ndiameter = "160 mm"\n', 2, 11, "reflector.own.depth", ("45 mm",)),
    ("round one with a size", below("reflector", 'kind = "own"') + OWN + 'size = "160 mm"\n', 2, 14, "reflector.own.size", ("round",)),
    ("rectangular one with a diameter", below("reflector", 'kind = "own"') + OWN + 'shape = "rectangular"\n', 2, 12, "reflector.own.diameter", ("rectangular",)),
    ("dish without the table above", GOOD.replace('[reflector]\nthickness = "0.8 mm"\n', "") + OWN, 2, 8, "reflector.kind", ('kind = "own"',)),
    ("dish without its kind", GOOD + OWN, 2, 8, "reflector.kind", ('kind = "own"',)),
    ("lips on an own dish", below("reflector", 'kind = "own"', 'lips = "four"') + OWN, 2, 10, "reflector.lips", ("folded",)),
    ("base of an own dish", below("reflector", 'kind = "own"', 'base = "123 mm"') + OWN, 2, 10, "reflector.base", ("[reflector.own]",)),
    ("bend deduction of an own dish", below("reflector", 'kind = "own"', 'bend_deduction = "1 mm"') + OWN, 2, 10, "reflector.bend_deduction", ("folded",)),
    ("wall that leans inwards", below("reflector", 'kind = "own"') + OWN + 'slope = "-5 deg"\n', 2, 14, "reflector.own.slope", ("0 to 60",)),
    ("slope without unit", below("reflector", 'kind = "own"') + OWN + "slope = 5\n", 2, 14, "reflector.own.slope", ('"5 deg"',)),
    ("depth of nothing", below("reflector", 'kind = "own"') + '[reflector.own]\ndiameter = "160 mm"\ndepth = "0 mm"\n', 2, 13, "reflector.own.depth", ("0.01",)),
    ("radius larger than the floor", below("reflector", 'kind = "own"') + OWN.replace("160", "60").replace("15", "25") + 'radius = "20 mm"\n', 2, 14, "reflector.own.radius", ("15.0 mm",)),
    ("radius deeper than the dish", below("reflector", 'kind = "own"') + OWN + 'radius = "30 mm"\n', 2, 14, "reflector.own.radius", ("15 mm",)),
    ("one size of a box", below("reflector", 'kind = "own"') + '[reflector.own]\nshape = "rectangular"\nsize = ["160 mm"]\ndepth = "45 mm"\n', 2, 13, "reflector.own.size", ("200 mm",)),
    ("shape nobody knows", below("reflector", 'kind = "own"') + OWN + 'shape = "oval"\n', 2, 14, "reflector.own.shape", ("rectangular",)),
    ("depth misspelt", below("reflector", 'kind = "own"') + OWN.replace("depth", "depht"), 2, 13, "reflector.own.depht", ("depth",)),
]  # fmt: skip
