"""Metals: the two tables fit each other, look-ups find defaults and aliases, refusals help."""

from __future__ import annotations

import re
from itertools import pairwise
from typing import get_args, get_type_hints

import pytest

from wavejig.stock.errors import StockError
from wavejig.stock.metals import (
    Form,
    Metal,
    allowed_galvanic_v,
    galvanic_difference_v,
    metal_names,
    sheet_metal,
    temper_names,
    wire_metal,
)
from wavejig.stock.tables import column, table


def every_metal() -> list[Metal]:
    finders = {"wire": wire_metal, "sheet": sheet_metal}
    return [
        finders[form](name, temper)
        for form in get_args(Form)
        for name in metal_names(form)
        for temper in temper_names(name, form)
    ]


def test_every_row_of_both_tables_is_reached() -> None:
    assert len(every_metal()) == len(table("tempers").rows)
    assert {metal.name for metal in every_metal()} == set(column("metals", "name"))


@pytest.mark.parametrize("form", get_args(Form))
def test_each_metal_has_one_default_temper(form: Form) -> None:
    for name in metal_names(form):
        defaults = [
            row["temper"]
            for row in table("tempers").rows
            if (row["name"], row["form"]) == (name, form) and row["default"]
        ]
        assert len(defaults) == 1, name
        found = wire_metal(name) if form == "wire" else sheet_metal(name)
        assert (found.name, found.form, found.temper) == (name, form, defaults[0])


@pytest.mark.parametrize("metal", every_metal(), ids=lambda m: f"{m.name} {m.form} {m.temper}")
def test_metal_makes_sense(metal: Metal) -> None:
    for name, kind in get_type_hints(Metal).items():
        choices = get_args(kind)
        value = getattr(metal, name)
        assert value in choices if choices else type(value) is kind, name
    assert galvanic_difference_v(metal.galvanic_group, metal.galvanic_group) == 0.0
    series = {c.name for c in table("sheet-gauge").columns} - {"gauge"}
    assert metal.gauge_series in series | {"none"}
    assert 0.0 <= metal.hardening_exponent < 0.6
    assert 0.1 < metal.conductivity_ms_per_m <= 58.0
    # ideal plastic rows say so, and take the yield stress as their flow stress
    ideal = metal.hardening_exponent == 0.0
    if metal.foldable:
        assert ("ideal plastic" in metal.source) == ideal
    if ideal:
        assert metal.strength_coefficient_mpa == metal.yield_mpa
    # a hardening row's flow stress passes its proof stress somewhere in the strains of a bend
    assert metal.strength_coefficient_mpa * 0.3**metal.hardening_exponent >= metal.yield_mpa


@pytest.mark.parametrize("form", get_args(Form))
def test_harder_tempers_yield_later_and_bend_less(form: Form) -> None:
    find = wire_metal if form == "wire" else sheet_metal
    for name in metal_names(form):
        tempers = [find(name, temper) for temper in temper_names(name, form)]
        for soft, hard in pairwise(tempers):
            assert soft.yield_mpa < hard.yield_mpa
            assert soft.min_inside_radius_factor <= hard.min_inside_radius_factor


def test_aliases_lead_to_metals_and_hide_none() -> None:
    for row in table("metal-aliases").rows:
        assert row["name"] in column("metals", "name")
        assert row["alias"] not in column("metals", "name")
    assert sheet_metal("aluminium") == sheet_metal("aluminium-1050")
    assert wire_metal("cuzn37", "hard") == wire_metal("brass", "hard")
    assert sheet_metal("fr4").name == "laminate-fr4"


def test_what_the_shop_must_know() -> None:
    assert not sheet_metal("laminate-fr4").foldable
    assert sheet_metal("brass").foldable
    assert sheet_metal("aluminium").solderable == "no"
    assert sheet_metal("copper").solderable == "yes"
    assert not sheet_metal("copper").laser_friendly
    assert sheet_metal("tinplate").laser_friendly


@pytest.mark.parametrize(
    ("name", "temper", "says"),
    [
        ("coper", None, 'wire metal: got "coper", need one of copper, '),
        ("coper", None, 'Nearest: "copper".'),
        ("Aluminum", None, 'Nearest: "aluminum".'),
        ("tinplate", None, '"tinplate" is not sold as wire; need one of copper, '),
        ("fr4", None, 'wire metal: "fr4" is not sold as wire'),
        ("copper", "anealed", 'got "anealed", need one of annealed, half-hard, hard. Nearest: "annealed".'),
        ("copper", "O", 'temper of copper wire: got "O", need one of annealed, half-hard, hard.'),
    ],
)
def test_refusals_list_what_there_is(name: str, temper: str | None, says: str) -> None:
    with pytest.raises(StockError, match=re.escape(says)):
        wire_metal(name, temper)


def test_unknown_group_and_place() -> None:
    with pytest.raises(StockError, match=r'galvanic group: got "coper".*Nearest: "copper"'):
        galvanic_difference_v("coper", "tin")
    with pytest.raises(StockError, match=r'place: got "outdoor", need one of outdoors, indoors, dry.'):
        allowed_galvanic_v("outdoor")
