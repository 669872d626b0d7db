"""Each finding has a design that raises it and one that does not; codes are stable, remedies are given."""

from __future__ import annotations

from typing import Any

import pytest

from tests.designs import design
from wavejig.shop import Inspection, inspect

FOUR = {"lips": "four"}
BESIDE = ("test_own.py", "test_predicted.py", "test_corners_and_prints.py")
MOVED = ("fixture/test_liftout.py", "spacer/test_withdraw.py", "fixture/bending/test_order.py")
# code, severity, tables that raise it, tables that do not
CASES: list[tuple[str, str, dict[str, Any], dict[str, Any]]] = [
    ("wire-radius-tight", "error", {"radiator": {"inside_bend_radius": "0.3 mm", "temper": "hard"}}, {}),
    ("pin-not-stock", "warning", {"radiator": {"inside_bend_radius": "2.3 mm"}}, {}),
    ("radiator-cannot-be-bent", "error", {"radiator": {"inside_bend_radius": "19 mm"}}, {}),
    ("wires-near", "warning", {"radiator": {"feed_gap": "2.2 mm"}}, {}),
    ("sheet-not-solderable", "error", {"feed": {"style": "tube"}, "reflector": {"material": "aluminium"}}, {}),
    ("sheet-needs-flux", "warning", {"reflector": {"material": "galvanised-steel"}}, {}),
    ("ground-by-lug", "note", {"reflector": {"material": "aluminium"}}, {}),
    ("wire-not-solderable", "error", {"radiator": {"metal": "aluminium"}}, {}),
    ("pin-lapped", "note", {"feed": {"connector": "sma-4hole-post"}}, {}),
    ("starting-values", "note", {}, {"radiator": {"side": "31 mm", "standoff": "16 mm", "feed_gap": "4 mm"}}),
    ("sheet-not-foldable", "error", {"reflector": {"material": "laminate", "lips": "two"}}, {}),
    ("lip-short", "error", {"reflector": {**FOUR, "lip_height": "3 mm"}}, {"reflector": FOUR}),
    ("fold-radius-tight", "warning", {"reflector": {**FOUR, "material": "aluminium-6061", "inside_bend_radius": "0.2 mm"}},
     {"reflector": {**FOUR, "material": "brass"}}),
    ("fold-radius-not-tool", "note", {"reflector": {**FOUR, "inside_bend_radius": "2 mm"}, "folding": {"tooling_radius": "1 mm"}},
     {"reflector": FOUR}),
    ("hole-near-bend", "warning", {"reflector": {**FOUR, "holes": [{"x": "0 mm", "y": "-58 mm", "diameter": "3 mm"}]}},
     {"reflector": FOUR}),
    ("hole-small", "warning", {"reflector": {"holes": [{"x": "30 mm", "y": "0 mm", "diameter": "0.5 mm"}]}}, {}),
    ("hole-below-kerf", "error",
     {"reflector": {"holes": [{"x": "45 mm", "y": "0 mm", "diameter": "2.5 mm"}]},
      "cutter": {"process": "router", "compensated": "in-file"}},
     {"reflector": {"holes": [{"x": "45 mm", "y": "0 mm", "diameter": "2.5 mm"}]}, "cutter": {"process": "router"}}),
    ("holes-meet", "error", {"reflector": {"holes": [{"x": "0 mm", "y": "0 mm", "diameter": "4 mm"}]}}, {}),
    ("web-thin", "warning", {"reflector": {"holes": [{"x": "9.13 mm", "y": "14.8 mm", "diameter": "3.3 mm"}]}}, {}),
    ("laminate-cutting", "warning", {"reflector": {"material": "laminate"}}, {}),
    ("metal-reflects-laser", "warning", {"reflector": {"material": "copper"}, "cutter": {"process": "co2-laser"}},
     {"reflector": {"material": "copper"}, "cutter": {"process": "waterjet"}}),
    ("metal-needs-fibre", "note", {"reflector": {"material": "brass"}}, {"reflector": {"material": "tinplate"}}),
    ("holes-by-drill", "note", {"cutter": {"process": "guillotine"}}, {}),
    ("wire-over-stock", "error", {"wire_stock": {"length": "250 mm"}}, {"wire_stock": {"length": "1 m"}}),
    ("blanks-crowded", "warning", {"cutter": {"spacing": "0.5 mm"}, "quantity": 4}, {"quantity": 4}),
    ("blank-over-stock", "error", {"reflector": {"base": ["400 mm", "400 mm"]}}, {}),
    ("unlike-metals", "warning", {"reflector": {"material": "aluminium"}}, {}),
    ("no-drain", "warning", {"reflector": FOUR, "mounting": {"drain": "none"}}, {"reflector": FOUR}),
    ("seal-connector", "note", {}, {"feed": {"style": "tube"}}),
    ("seal-tube", "note", {"feed": {"style": "tube"}}, {}),
    ("sheet-draws-heat", "warning", {"reflector": {"material": "copper"}}, {"reflector": {"material": "tinplate"}}),
    ("pin-near-sheet", "warning", {"feed": {"calliper": {"rear_cutout": "4 mm"}}}, {}),
    ("standoff-too-fine", "warning", {"radiator": {"standoff": "3.9 mm"}, "feed": {"style": "tube"}}, {}),
    ("feed-gap-too-fine", "warning", {"radiator": {"feed_gap": "1.9 mm"}, "wire": "0.8 mm"}, {}),
    ("tolerance-below-print", "note", {"tolerances": {"standoff": "0.1 mm"}}, {}),
    ("base-small", "warning", {"reflector": {"base": ["100 mm", "123 mm"]}}, {}),
    ("bend-over-brake", "error", {"reflector": FOUR, "folding": {"longest_bend": "100 mm"}}, {"reflector": FOUR}),
    ("box-fold", "note", {"reflector": FOUR}, {"reflector": {"lips": "two"}}),
    ("fold-along-grain", "note", {"reflector": {**FOUR, "material": "galvanised-steel"}}, {"reflector": FOUR}),
    ("notch-too-tight", "warning", {"reflector": FOUR, "cutter": {"process": "router", "kerf": "0.2 mm"}},
     {"reflector": FOUR, "cutter": {"process": "router"}}),
    ("lips-may-collide", "warning", {"reflector": {**FOUR, "corners": "mitre", "lip_height": "60 mm"},
                                     "cutter": {"stock_sheet": ["1000 mm", "600 mm"]}},
     {"reflector": {**FOUR, "corners": "mitre", "lip_height": "18 mm"}}),
    ("wall-below-nozzle", "warning", {"printer": {"nozzle": "1.3 mm"}}, {"printer": {"nozzle": "1.1 mm"}}),
    ("text-below-nozzle", "note", {"printer": {"nozzle": "0.8 mm"}}, {"printer": {"nozzle": "0.4 mm"}}),
    ("springback-rough", "note", {"radiator": {"temper": "hard"}}, {}),
    ("wires-touch", "error", {"radiator": {"feed_gap": "1 mm"}}, {"radiator": {"feed_gap": "3 mm"}}),
    ("straight-short", "note", {"family": "twin-loop"}, {"feed": {"style": "tube"}}),
    ("measure-connector", "note", {}, {"feed": {"style": "tube"}}),
    ("spacer-conflict", "error", {"reflector": {"base": ["40 mm", "40 mm"]}}, {}),
    ("spacer-note", "note", {"spacer": {"style": "posts", "material": "ASA"}}, {}),
    ("fixture-note", "note", {"family": "twin-loop", "band": ["902 MHz", "928 MHz"], "wire": "10 AWG",
                              "feed": {"style": "legs", "leg": "1.8 mm"},
                              "cutter": {"stock_sheet": ["1000 mm", "600 mm"]}}, {}),
    ("tray-cannot-be-folded", "error", {"reflector": {**FOUR, "lip_height": "1 mm"}}, {"reflector": FOUR}),
    ("marks-left-out", "note", {"reflector": {"base": ["40 mm", "40 mm"]}}, {}),
    ("reflector-conflict", "error",
     {"reflector": {**FOUR, "holes": [{"x": "0 mm", "y": "-60.5 mm", "diameter": "3 mm"}]}}, {"reflector": FOUR}),
    ("solder-heat", "note", {}, {}),
    ("plastic-weather", "warning", {"spacer": {"style": "posts", "material": "PLA"}}, {"spacer": {"style": "posts", "material": "ASA"}}),
    ("post-too-weak", "warning", {"radiator": {"inside_bend_radius": "1.8 mm", "metal": "bronze", "temper": "annealed"},
                                  "wire": "3 mm", "band": ["430 MHz", "440 MHz"], "feed": {"style": "tube"},
                                  "cutter": {"stock_sheet": ["2000 mm", "1000 mm"]}}, {}),
    ("springback-untried", "note", {}, {"radiator": {"trial": [
        {"former": "6 mm", "bent_to": "100 deg", "relaxed_to": "99.3 deg"}]}}),
    ("fixture-style", "note", {"fixture": {"style": "stop-block"}}, {}),
    ("nest-heat", "warning", {"band": ["7.0 GHz", "7.2 GHz"], "wire": "0.8 mm", "feed": {"style": "tube", "tube": "tube-2.2"}}, {}),
    ("fixture-tiled", "note", {"printer": {"bed": ["100 mm", "100 mm", "100 mm"]}}, {}),
    ("feed-conflict", "error", {"radiator": {"standoff": "4 mm"}}, {}),
    ("reflector-conflict", "error", {"reflector": {"holes": [{"x": "61 mm", "y": "0 mm", "diameter": "8 mm"}]}}, {}),
    ("fixture-conflict", "error", {"band": ["430 MHz", "440 MHz"], "family": "twin-loop", "wire": "3 mm",
                                   "feed": {"style": "tube"}, "cutter": {"stock_sheet": ["2000 mm", "1000 mm"]},
                                   "printer": {"bed": ["150 mm", "150 mm", "150 mm"]}}, {}),
]  # fmt: skip


def made(tables: dict[str, Any]) -> Inspection:
    tables = dict(tables)
    return inspect(design(tables.pop("family", "biquad"), **tables))


@pytest.mark.parametrize(("code", "severity", "bad", "good"), CASES, ids=[c[0] for c in CASES])
def test_finding(code: str, severity: str, bad: dict[str, Any], good: dict[str, Any]) -> None:
    inspection = made(bad)
    found = [f for f in inspection.findings if f.code == code]
    assert found, [f.code for f in inspection.findings]
    assert {f.severity for f in found} == {severity}
    for f in found:
        assert f.message and f.remedy and f.where and f.source
    assert inspection.can_be_made is not any(f.severity == "error" for f in inspection.findings)
    if code != "solder-heat":  # no printing plastic outlasts solder
        assert code not in {f.code for f in made(good).findings}


def test_findings_come_worst_first() -> None:
    inspection = made(
        {
            "reflector": {"material": "aluminium"},
            "radiator": {"inside_bend_radius": "0.3 mm", "temper": "hard"},
        }
    )
    order = [f.severity for f in inspection.findings]
    assert order == sorted(order, key=("error", "warning", "note").index)


def test_each_code_in_the_code_is_tried_here() -> None:
    """A finding nobody has seen raised is a finding that may not work."""
    import re
    from pathlib import Path

    import wavejig.shop

    text = "".join(p.read_text() for p in Path(wavejig.shop.__file__).parent.glob("*.py"))
    codes = set(re.findall(r'code="([a-z-]+)"', text)) | set(re.findall(r'_cannot\(\s*"([a-z-]+)"', text))
    codes |= set(re.findall(r'code="([a-z-]+)" if', text)) | set(
        re.findall(r' else "([a-z]+-[a-z]+)",\n\s+severity', text)
    )
    # the cases of these rooms' findings stand in files of their own
    beside = "".join(Path(__file__).with_name(n).read_text() for n in BESIDE)
    untried = codes - {c[0] for c in CASES} - set(re.findall(r'"([a-z]+(?:-[a-z]+)+)"', beside))
    # raised while a pack is built, from moving wire and pieces; no plan of ours gets stuck, so tests spoil one
    assert untried == {"wire-caught", "spacer-caught", "no-bend-order"}
    tests = Path(__file__).parents[1]
    moved = "".join((tests / name).read_text() for name in MOVED)
    assert all(f'told.code == "{code}"' in moved for code in untried)
