"""Random recipes that are legal key by key: TOML text of every family, most keys, odd stock, extreme sizes.

`random_recipe(seed)` draws the same text on every machine. Values mostly make sense together, some stand at the
edge of what their key allows, and some are drawn from all of it; whether the whole can be made is what the tests
find out. Only keys that exclude each other by the recipe's own words are kept apart.
"""

from __future__ import annotations

import math
import random
from collections.abc import Callable
from typing import Any

from wavejig.design.starting import LIGHT_M_PER_S
from wavejig.stock import connectors, metals, processes

FAMILIES = ("quad", "biquad", "double-biquad", "twin-loop", "path")
_EXTENT = {"quad": 0.36, "biquad": 0.71, "double-biquad": 1.42, "twin-loop": 0.72, "path": 0.8}
_LONGEST_MM = 3000.0
_SOLDERABLE = ("copper", "tinned-copper", "brass", "bronze")
_SHEETS = ("brass", "copper", "tinplate", "laminate-fr4")
_BORES_MM = {"n-4hole": 2.0, "n-bulkhead": 2.0, "sma-4hole-cup": 0.95, "sma-bulkhead": 0.95}
_CURRENCIES = (
    "EUR",
    "kr",
    "£",
    "=1+1",
    "<b>",
    "%%d",
    "{\\\\f}",
    "''",
    "a,b;c",
    '\\"',
    "\\\\P",
    "+x",
    "&amp;",
)
_SWEEPS = (
    "first.s1p",
    "=cmd|' /C calc'!A0",
    "<script>.s1p",
    "../../x.s1p",
    "%%c^J{x}",
    "ünïcode 🛰.s1p",
    "@SUM(A1)",
)


def random_recipe(seed: int) -> str:
    """The recipe of one seed."""
    return _Draw(seed).text()


class _Draw:
    def __init__(self, seed: int) -> None:
        self.draw = random.Random(seed)
        self.seed = seed
        self.family = FAMILIES[seed % len(FAMILIES)]
        self.wild = self.draw.choice((0.25, 0.25, 0.3, 0.6, 1.0))  # share of the keys that is set
        self.tame = self.wild < 0.5  # then what is set mostly goes together
        self.tables: dict[str, dict[str, str]] = {}
        self.blocks: list[str] = []

    # -- values, as TOML text ---------------------------------------------------------------------------

    def maybe(self, chance: float) -> bool:
        return self.draw.random() < chance

    def pick(self, *options: Any) -> Any:
        return self.draw.choice(options)

    def number(self, low: float, high: float) -> float:
        """Even on a logarithmic scale where both ends allow it."""
        if low > 0.0 and high / low > 5.0:
            return math.exp(self.draw.uniform(math.log(low), math.log(high)))
        return self.draw.uniform(low, high)

    def length(self, low_mm: float, high_mm: float) -> str:
        """A length in some unit; never outside, whatever the rounding, nor beyond what any key takes."""
        low_mm, high_mm = min(low_mm, _LONGEST_MM), min(high_mm, _LONGEST_MM)
        value = self.number(low_mm, high_mm)
        if not self.maybe(0.25):
            return f'"{self.rounded(value, low_mm, high_mm)} mm"'
        unit, factor = self.pick(("cm", 10.0), ("in", 25.4), ("m", 1000.0), ("um", 1e-3))
        return f'"{self.rounded(value / factor, low_mm / factor, high_mm / factor)} {unit}"'

    def rounded(self, value: float, low: float, high: float) -> str:
        text = f"{value:.4g}" if value < 1e4 else f"{value:.8g}"
        return text if low <= float(text) <= high else f"{value!r}"

    def angle(self, low: float, high: float) -> str:
        value = self.draw.uniform(low, high)
        return f'"{value:.3f} deg"' if self.maybe(0.8) else f'"{math.radians(value):.6f} rad"'

    def plain(self, low: float, high: float) -> str:
        return f"{self.draw.uniform(low, high):.4f}"

    def word(self, *options: str) -> str:
        return f'"{self.pick(*options)}"'

    def either(self, value: Callable[[], str], chance: float = 0.2) -> str:
        """The value, or "auto"."""
        return '"auto"' if self.maybe(chance) else value()

    def set(self, table: str, key: str, value: Callable[[], str], chance: float = 0.3) -> None:
        if self.maybe(chance * self.wild):
            self.tables.setdefault(table, {})[key] = value()

    # -- the recipe ---------------------------------------------------------------------------------------

    def text(self) -> str:
        self._target()
        self._radiator()
        self._feed()
        self._reflector()
        self._machines()
        self._bench()
        top = [f'name = "random-{self.seed}"']
        if self.maybe(0.7):
            top.append(f"quantity = {self.pick(1, 2, 12, 50, 400, 10_000, round(self.number(1, 200)))}")
        rows = list(top)
        for table in sorted(self.tables, key=lambda t: (t.split(".")[0], t)):
            rows += ["", f"[{table}]", *(f"{k} = {v}" for k, v in self.tables[table].items())]
            for block in [b for b in self.blocks if b.startswith(f"[[{table}.")]:
                rows += ["", block]
                self.blocks.remove(block)
        return "\n".join([*rows, *("\n" + b for b in self.blocks)]) + "\n"

    def _target(self) -> None:
        size_mm = self.number(12.0, 3500.0) if self.maybe(0.1) else self.number(25.0, 700.0)
        wavelength_mm = min(max(size_mm / _EXTENT[self.family], 26.0), 2900.0)
        self.wavelength_mm = wavelength_mm
        centre_mhz = LIGHT_M_PER_S / (wavelength_mm * 1e-3) / 1e6
        half = self.pick(0.0005, 0.005, 0.015, 0.03, 0.1)
        low, high = max(centre_mhz * (1 - half), 100.0), min(centre_mhz * (1 + half), 12_000.0)
        unit, factor = self.pick(("MHz", 1.0), ("GHz", 1e-3), ("kHz", 1e3))
        self.tables["target"] = {"band": f'["{low * factor:.9g} {unit}", "{high * factor:.9g} {unit}"]'}
        self.set("target", "return_loss", lambda: f'"{self.draw.uniform(3.0, 40.0):.1f} dB"', 0.4)
        self.set(
            "target", "reference_impedance", lambda: self.word("50 ohm", "75 ohm", "10 Ω", "600 ohm"), 0.2
        )

    def _wire(self, low_mm: float, high_mm: float) -> str:
        if self.maybe(0.7):
            return self.length(low_mm, high_mm)
        gauges = [g for g in range(1, 29) if low_mm <= 0.127 * 92 ** ((36 - g) / 39) <= high_mm]
        if gauges and self.maybe(0.6):
            return f'"{self.pick(*gauges)} AWG"'
        return (
            f'"{self.pick(14, 16, 18, 20)} SWG"'
            if self.maybe(0.5)
            else f'"{self.pick(0.75, 1.5, 2.5, 4)} mm2"'
        )

    def _radiator(self) -> None:
        side = self.wavelength_mm / 4.0
        thickest = max(0.5, min(4.0, side / 12.0))
        wire = (
            self._wire(0.3, 8.0)
            if self.maybe(0.05)
            else self._wire(max(0.3, min(0.5, thickest / 2)), thickest)
        )
        self.wire_mm = thickest
        metal = self.pick(*(_SOLDERABLE if self.tame else metals.metal_names("wire")))
        r = self.tables.setdefault("radiator", {"family": f'"{self.family}"', "wire": wire})
        if self.maybe(0.6):
            r["metal"] = f'"{metal}"'
            if self.maybe(0.5):
                r["temper"] = self.word(*metals.temper_names(metal, "wire"))
        if self.maybe(0.25):
            r["insulation"] = self.word("enamel", "plastic")
            self.set("radiator", "insulation_thickness", lambda: self.length(0.005, 0.8), 0.6)
        self.set("radiator", "insulation_permittivity", lambda: self.plain(1.0, 10.0), 0.1)
        self.set(
            "radiator",
            "inside_bend_radius",
            lambda: self.either(lambda: self.length(0.3, min(side / 3, 100.0))),
            0.3,
        )
        self.set("radiator", "measured_over", lambda: self.word("outside", "centreline", "inside"), 0.3)
        self.set(
            "radiator", "standoff", lambda: self.either(lambda: self.length(0.04 * 4 * side, 1.1 * side)), 0.5
        )
        self.set("radiator", "neutral_axis_factor", lambda: self.plain(0.3, 0.7), 0.2)
        self.set(
            "radiator",
            "trim",
            lambda: self.length(0.1, 200.0) if self.maybe(0.3) else self.length(1, 10),
            0.3,
        )
        self.set(
            "radiator",
            "lap",
            lambda: '"auto"' if self.tame else self.either(lambda: self.length(1.0, 15.0)),
            0.2,
        )
        if self.family == "path":
            self._corners(side)
        else:
            sized = "lobe_diameter" if self.family == "twin-loop" else "side"
            factor = 4.0 / math.pi if self.family == "twin-loop" else 1.0
            self.set(
                "radiator",
                sized,
                lambda: self.either(lambda: self.length(0.8 * side * factor, 1.2 * side * factor)),
                0.5,
            )
            self.set(
                "radiator",
                "feed_gap",
                lambda: self.either(lambda: self.length(1.5 * thickest, 0.4 * side)),
                0.4,
            )
            self.set("radiator", "lobe_angle", lambda: self.either(lambda: self.angle(60.0, 130.0)), 0.35)
        if self.maybe(0.12):
            for former in self.draw.sample((2, 4, 6, 10, 20), self.pick(1, 2, 3)):
                bent = self.draw.uniform(60, 180)
                self.blocks.append(
                    f'[[radiator.trial]]\nformer = "{former} mm"\nbent_to = "{bent:.1f} deg"\n'
                    f'relaxed_to = "{bent * self.draw.uniform(0.93, 0.999):.1f} deg"'
                )
        if self.maybe(0.1):
            bends = self.pick(1, 2, 4)
            cut, former, bend = (
                self.draw.uniform(80, 300),
                self.draw.uniform(2.0, 12.0),
                self.draw.uniform(60.0, 120.0),
            )
            r, d, a = former / 2.0, self.wire_mm, math.radians(bend)
            gain = 2.0 * (r + d) * math.tan(a / 2.0) - a * (r + self.draw.uniform(0.4, 0.5) * d)
            self.tables["radiator.trial_length"] = {
                "cut": f'"{cut:.1f} mm"', "outside": f'"{cut + bends * gain:.2f} mm"',
                "bends": str(bends), "former": f'"{former:.2f} mm"', "angle": f'"{bend:.1f} deg"',
            }  # fmt: skip

    def _corners(self, side: float) -> None:
        """A fan from the pin side round to the ground side, one lobe or two, sometimes leaving the plane."""
        gap = max(3.0 * self.wire_mm, 4.0, 0.08 * side)
        count = self.draw.randint(3, 7)
        angles = [math.radians(55.0 - 110.0 * i / (count - 1)) for i in range(count)]
        right = [(side * self.draw.uniform(1.1, 1.5) * math.cos(a), 1.3 * side * math.sin(a)) for a in angles]
        closed = self.maybe(0.6)
        left = [(-x, -y) for x, y in right] if closed else []
        points = [(0.0, gap / 2), *right, (0.0, -gap / 2), *left, *([(0.0, gap / 2)] if closed else [])]
        lift = self.draw.uniform(0.5, 3.0) * self.wire_mm if self.maybe(0.15) else 0.0
        written = []
        for i, (x, y) in enumerate(points):
            z = f', "{lift:.2f} mm"' if lift and i == 2 else ""
            written.append(f'["{x:.2f} mm", "{y:.2f} mm"{z}]')
        self.tables["radiator"]["corners"] = "[" + ", ".join(written) + "]"
        if closed:
            self.tables["radiator"]["ground_corner"] = str(len(right) + 2)

    def _feed(self) -> None:
        style = ("legs", "tube")[self.seed // len(FAMILIES) % 2]
        f = self.tables.setdefault("feed", {"style": f'"{style}"'})
        if style == "legs" and self.tame:
            connector = self.pick(*_BORES_MM)
            f |= {"connector": f'"{connector}"', "leg": self.length(0.7, _BORES_MM[connector])}
        elif style == "legs" or self.maybe(0.2):
            f["connector"] = self.word(*(c.name for c in connectors.connectors()))
            self.set("feed", "mounting", lambda: self.word("auto", "behind", "in-front"), 0.3)
            self.set("feed", "leg", lambda: self.either(lambda: self._wire(0.8, 2.2)), 0.4)
            self.set("feed", "leg_spacing", lambda: self.either(lambda: self.length(3.0, 25.0)), 0.25)
            self.set("feed", "ground", lambda: self.word("auto", "sheet", "flange", "lug"), 0.3)
        if style == "tube" or self.maybe(0.1):
            small = [t.name for t in connectors.tubes() if t.outer_diameter_mm < self.wavelength_mm / 25.0]
            f["tube"] = self.word(*(small if self.tame and small else [t.name for t in connectors.tubes()]))
            if self.tame:
                self.tables["radiator"].pop("feed_gap", None)
        if self.maybe(0.12):
            for key, low, high in (
                ("flange", 10, 30), ("flange_thickness", 1, 4), ("hole_pitch", 7, 20), ("hole_diameter", 2, 4),
                ("rear_cutout", 4, 12), ("front_cutout", 6, 17), ("nut", 8, 24), ("washer", 9, 25),
                ("pin_diameter", 1, 3.5), ("pin_bore", 0.01, 2.5), ("pin_length", 3, 20), ("dielectric_diameter", 3, 9),
                ("dielectric_length", 0.5, 16),
            ):  # fmt: skip
                self.set("feed.calliper", key, lambda low=low, high=high: self.length(low, high), 0.25)

    def _reflector(self) -> None:
        wave = self.wavelength_mm
        r = self.tables.setdefault("reflector", {})
        material = self.pick(*(_SHEETS if self.tame else metals.metal_names("sheet")))
        if self.maybe(0.6):
            r["material"] = f'"{material}"'
            self.set("reflector", "temper", lambda: self.word(*metals.temper_names(material, "sheet")), 0.4)
        laminate = "material" in r and material.startswith("laminate")
        if self.maybe(0.75):
            gauge = self.maybe(0.15) and not laminate
            r["thickness"] = f'"{self.pick(16, 18, 20, 22, 24)} gauge"' if gauge else self.length(0.3, 3.0)
        if self.maybe(0.2):
            self._own(wave)
        else:
            self.set("reflector", "kind", lambda: '"auto"', 0.1)
            self._folded(wave, laminate)
        for _ in range(self.pick(0, 0, 0, 0, 1) if self.tame else self.pick(0, 0, 1, 3, 12)):
            reach = 0.35 if self.tame else 0.6
            x, y = (self.draw.uniform(-reach, reach) * wave for _ in range(2))
            purpose = f"\npurpose = {self.word('mounting', 'drain', 'other')}" if self.maybe(0.6) else ""
            self.blocks.append(
                f'[[reflector.holes]]\nx = "{x:.2f} mm"\ny = "{y:.2f} mm"\n'
                f"diameter = {self.length(0.6, 30.0) if self.maybe(0.2) else self.length(2.5, 6.0)}{purpose}"
            )

    def _folded(self, wave: float, laminate: bool) -> None:
        def base() -> str:
            least = (1.0 if self.tame else 0.5) * wave
            return (
                f"[{self.either(lambda: self.length(least, 1.4 * wave))}, {self.length(least, 1.4 * wave)}]"
            )

        self.set("reflector", "base", base, 0.4)
        if laminate:
            return
        self.set("reflector", "lips", lambda: self.word("none", "two", "four"), 0.7)
        self.set("reflector", "lip_edges", lambda: self.word("x", "y"), 0.3)
        self.set(
            "reflector", "lip_height", lambda: self.either(lambda: self.length(4.0, 0.4 * wave + 5.0)), 0.5
        )
        self.set("reflector", "lip_angle", lambda: self.angle(5.0, 90.0), 0.3)
        self.set("reflector", "corners", lambda: self.word("relief", "mitre"), 0.4)
        self.set("reflector", "inside_bend_radius", lambda: self.either(lambda: self.length(0.1, 6.0)), 0.3)
        if self.maybe(0.15):
            self.tables["reflector"]["k_factor"] = self.plain(0.2, 0.6)
        else:
            self.set("reflector", "bend_deduction", lambda: self.either(lambda: self.length(0.2, 5.0)), 0.15)

    def _own(self, wave: float) -> None:
        self.tables["reflector"]["kind"] = '"own"'
        own: dict[str, str] = {}
        if self.maybe(0.5):
            own |= {"shape": '"round"'} if self.maybe(0.7) else {}
            own["diameter"] = self.length(0.9 * wave, 1.6 * wave)
        else:
            own |= {
                "shape": '"rectangular"',
                "size": f"[{self.length(0.8 * wave, 1.5 * wave)}, {self.length(0.8 * wave, 1.5 * wave)}]",
            }
        own["depth"] = self.length(32.0, 0.4 * wave + 40.0)
        self.tables["reflector.own"] = own
        self.set("reflector.own", "slope", lambda: self.angle(0.0, 45.0), 0.5)
        self.set("reflector.own", "radius", lambda: self.length(0.5, max(1.0, min(0.03 * wave, 25.0))), 0.5)
        self.set("reflector.own", "rim", lambda: self.length(1.0, 40.0), 0.4)

    def _machines(self) -> None:
        plastics = tuple(p.name for p in processes.plastics())
        beds = (
            (120, 120, 120),
            (180, 180, 180),
            (220, 220, 250),
            (300, 300, 400),
            (1000, 60, 90),
            (60, 60, 60),
        )
        self.set("printer", "bed", lambda: "[" + ", ".join(f'"{b} mm"' for b in self.pick(*beds)) + "]", 0.6)
        self.set(
            "printer",
            "nozzle",
            lambda: self.word("0.25 mm", "0.4 mm", "0.6 mm", "0.8 mm", "2 mm", "0.1 mm"),
            0.3,
        )
        self.set("printer", "clearance", lambda: self.length(0.05, 0.6), 0.3)
        self.set("printer", "hole_allowance", lambda: self.length(0.01, 0.4), 0.2)
        self.set("printer", "material", lambda: self.word(*plastics), 0.3)
        styles = (
            ("auto", "board") if self.tame and self.family == "twin-loop" else ("auto", "board", "stop-block")
        )
        self.set("fixture", "style", lambda: self.word(*styles), 0.5 / self.wild)
        self.set("spacer", "style", lambda: self.word("block", "block", "posts"), 0.6 / self.wild)
        self.set("spacer", "material", lambda: self.word(*plastics), 0.3)
        self.set("spacer", "sets", lambda: self.either(lambda: str(self.pick(1, 2, 5, 500))), 0.2)
        cutters = tuple(c.name for c in processes.cutters())
        self.set("cutter", "process", lambda: self.word(*cutters), 0.6)
        self.set("cutter", "kerf", lambda: self.length(0.01, 3.0), 0.3)
        self.set("cutter", "compensated", lambda: self.word("by-shop", "in-file"), 0.4)
        self.set("cutter", "smallest_hole", lambda: self.either(lambda: self.length(0.2, 5.0)), 0.2)
        sheets = ('"600 mm", "300 mm"', '"1 m", "2 m"', '"12 in", "24 in"', '"3000 mm", "1500 mm"')
        if self.tame and self.wavelength_mm > 200.0:
            self.tables.setdefault("cutter", {})["stock_sheet"] = '["3000 mm", "3000 mm"]'
        self.set("cutter", "stock_sheet", lambda: f"[{self.pick(*sheets)}]", 0.2)
        self.set("cutter", "spacing", lambda: self.either(lambda: self.length(0.1, 20.0)), 0.2)
        self.set("cutter", "margin", lambda: self.either(lambda: self.length(0.5, 30.0)), 0.2)
        self.set("cutter", "grain", lambda: self.word("auto", "x", "y", "none"), 0.3)
        self.set("folding", "smallest_flange", lambda: self.either(lambda: self.length(2.0, 20.0)), 0.15)
        self.set("folding", "tooling_radius", lambda: self.either(lambda: self.length(0.2, 4.0)), 0.15)
        self.set("folding", "longest_bend", lambda: self.either(lambda: self.length(300.0, 3000.0)), 0.15)
        for key, low in (("length", 500.0), ("leg_length", 200.0), ("tube_length", 200.0)):
            self.set(
                "wire_stock",
                key,
                lambda low=low: self.either(lambda: f'"{self.number(low, 1e6):.1f} mm"'),
                0.2,
            )
        self.set("wire_stock", "cut_loss", lambda: self.length(0.1, 3.0), 0.15)
        self.set("wire_stock", "end_waste", lambda: self.length(1.0, 120.0), 0.15)

    def _bench(self) -> None:
        self.set("mounting", "polarisation", lambda: self.word("vertical", "horizontal"), 0.4)
        self.set("mounting", "pole", lambda: '"none"' if self.maybe(0.2) else self.length(10.0, 120.0), 0.4)
        self.set("mounting", "drain", lambda: self.word("auto", "none"), 0.3)
        self.set("tolerances", "grade", lambda: self.word("f", "m", "c"), 0.3)
        for key, low, high in (("side", 0.01, 2.0), ("standoff", 0.01, 2.0), ("nest", 0.05, 2.0)):
            self.set("tolerances", key, lambda low=low, high=high: self.length(low, high), 0.2)
        self.set("tolerances", "bend_angle", lambda: self.angle(0.1, 5.0), 0.2)
        self.set("tolerances", "distribution", lambda: self.word("normal", "uniform"), 0.2)
        for key in ("feed_gap", "wire", "bend_radius", "base", "lip_height", "leg_spacing"):
            self.set("tolerances", key, lambda: self.either(lambda: self.length(0.01, 1.0)), 0.1)
        self.set("tolerances", "lip_angle", lambda: self.either(lambda: self.angle(0.05, 10.0)), 0.1)
        self.set("tolerances", "permittivity", lambda: self.plain(0.0, 0.5), 0.1)
        self.set("tolerances", "model", lambda: self.plain(0.0, 0.1), 0.1)
        self.set("measured", "frequency", lambda: self.plain(0.9, 1.1), 0.1)
        self.set("measured", "frequency_error", lambda: self.plain(0.0, 0.1), 0.1)
        self.set("measured", "sweep", lambda: f'"{self.pick(*_SWEEPS)}"', 0.15)
        side = self.wavelength_mm / 4.0
        for key, size in (
            ("side", side),
            ("lobe_diameter", side * 1.27),
            ("standoff", 0.6 * side),
            ("feed_gap", 4.0),
        ):
            self.set("measured", key, lambda size=size: self.length(0.9 * size, 1.1 * size), 0.08)
        self.set("measured", "reading_error", lambda: self.length(0.01, 2.0), 0.08)
        self.set(
            "station",
            "transmitter_power",
            lambda: self.word("100 mW", "0.001 mW", "25 W", "1000 W", "1 W"),
            0.3,
        )
        self.set("station", "cable_loss", lambda: self.word("0 dB", "3.2 dB", "40 dB"), 0.2)
        self.set(
            "station",
            "wind_speed",
            lambda: self.word("5 m/s", "150 km/h", "100 mph", "80 kn", "100 m/s"),
            0.3,
        )
        self.set("sheet", "paper", lambda: self.word("A4", "Letter"), 0.4)
        self.set("sheet", "projection", lambda: self.word("first", "third"), 0.4)
        self.set("sheet", "expected_yield", lambda: self.word("no", "yes"), 0.2)
        self.set("prices", "currency", lambda: f'"{self.pick(*_CURRENCIES)}"', 0.4)
        for key in (
            "wire", "leg_wire", "tube", "sheet", "blank", "connector", "plug", "screw", "nut", "washer", "lug",
            "pole_clamp", "dowel", "plastic",
        ):  # fmt: skip
            self.set(
                "prices",
                key,
                lambda: self.pick("0", "0.0", "1e6", "0.07", f"{self.number(0.01, 100):.2f}"),
                0.2,
            )
