"""Metals by name, form and temper: what bends, what conducts, what solders, what corrodes what."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Any, Literal

from wavejig.stock.errors import StockError, unknown_name
from wavejig.stock.tables import column, table

Form = Literal["wire", "sheet"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Metal:
    """One metal in one form and temper; fields are the columns of tables `metals` and `tempers`.

    strength_coefficient_mpa, hardening_exponent: K and n of the flow stress K*strain^n; n = 0 means ideal
    plastic. conductivity_ms_per_m: of the surface the current flows in. solderable: with ordinary
    solder. min_inside_radius_factor: times wire diameter or sheet thickness. `source` joins both rows'.
    """

    name: str
    form: Form
    temper: str
    youngs_modulus_gpa: float
    yield_mpa: float
    strength_coefficient_mpa: float
    hardening_exponent: float
    conductivity_ms_per_m: float
    density_g_per_cm3: float
    solderable: Literal["yes", "with-flux", "no"]
    galvanic_group: str
    gauge_series: str
    min_inside_radius_factor: float
    handbook_class: Literal["soft", "half-hard", "hard", "none"]
    laser_friendly: bool
    foldable: bool
    source: str


def wire_metal(name: str, temper: str | None = None) -> Metal:
    """The wire metal `name`; without a temper, the one most spools have.

    Raises StockError (a ValueError) that lists the names or tempers there are, and the nearest.
    """
    return _metal(name, "wire", temper)


def sheet_metal(name: str, temper: str | None = None) -> Metal:
    """The sheet metal or laminate `name`; without a temper, the one most stockists hold.

    Raises StockError (a ValueError) that lists the names or tempers there are, and the nearest.
    """
    return _metal(name, "sheet", temper)


def metal_names(form: Form) -> tuple[str, ...]:
    """Names of the metals sold in this form, in the table's order; aliases are not among them."""
    return tuple(dict.fromkeys(row["name"] for row in _tempers() if row["form"] == form))


def temper_names(name: str, form: Form) -> tuple[str, ...]:
    """Tempers of one metal in one form, softest first. Raises StockError for an unknown name."""
    known = _canonical_name(name, form)
    return tuple(row["temper"] for row in _tempers() if (row["name"], row["form"]) == (known, form))


def galvanic_difference_v(group: str, other_group: str) -> float:
    """Difference of anodic index in V between two galvanic groups, never negative.

    Raises StockError for an unknown group. Source: table `galvanic`.
    """
    return abs(_anodic_index_v(group) - _anodic_index_v(other_group))


def allowed_galvanic_v(place: str = "outdoors") -> float:
    """Largest anodic index difference in V between touching metals. Source: table `galvanic-limits`."""
    for row in table("galvanic-limits").rows:
        if row["place"] == place:
            return float(row["allowed_difference_v"])
    raise unknown_name("place", place, column("galvanic-limits", "place"))


@cache
def _metal(name: str, form: Form, temper: str | None) -> Metal:
    known = _canonical_name(name, form)
    rows = [row for row in _tempers() if (row["name"], row["form"]) == (known, form)]
    chosen = [row for row in rows if (row["default"] if temper is None else row["temper"] == temper)]
    if not chosen:
        raise unknown_name(f"temper of {known} {form}", str(temper), [row["temper"] for row in rows])
    fields: dict[str, Any] = {**_base(known), **chosen[0]}
    fields["source"] = f"{_base(known)['source']}; {chosen[0]['source']}"
    del fields["default"]
    return Metal(**fields)


def _canonical_name(name: str, form: Form) -> str:
    known = metal_names(form)
    aliases = {str(row["alias"]): str(row["name"]) for row in table("metal-aliases").rows}
    found = aliases.get(name, name)
    if found in known:
        return found
    if found in metal_names("sheet" if form == "wire" else "wire"):
        raise StockError(f'{form} metal: "{name}" is not sold as {form}; need one of {", ".join(known)}.')
    here = [alias for alias, metal in aliases.items() if metal in known]
    raise unknown_name(f"{form} metal", name, [*known, *here])


def _tempers() -> tuple[Any, ...]:
    return table("tempers").rows


def _base(name: str) -> dict[str, Any]:
    return next(dict(row) for row in table("metals").rows if row["name"] == name)


def _anodic_index_v(group: str) -> float:
    for row in table("galvanic").rows:
        if row["group"] == group:
            return float(row["anodic_index_v"])
    raise unknown_name("galvanic group", group, column("galvanic", "group"))
