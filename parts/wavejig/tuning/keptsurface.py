"""Response surfaces kept on disk: the next yield or sweep of the same article costs no solve but its own.

The key is a hash of everything a surface follows from: the recipe but for what no spread and no model is
made from, the values its free numbers were settled to, the spreads, and the program (`cache`). The other
inputs of a yield or a fit (the quantity, the wanted return loss, the sweeps themselves) are no part of it:
what follows from them is worked out anew, which takes seconds. So nothing kept can be stale.
"""

from __future__ import annotations

from collections.abc import Sequence
from concurrent.futures import Executor
from dataclasses import asdict
from typing import Any

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning import cache
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.explore import Explored, explore
from wavejig.tuning.solving import Told
from wavejig.tuning.spread import Spread
from wavejig.tuning.surface import Axes, Curve, Surface

Complex = NDArray[np.complex128]

_FOLDER = "surfaces"


def explored(
    article: Nominal,
    spread: Spread,
    executor: Executor,
    *,
    wide: bool = False,
    least_margin: float = 0.0,
    told: Told = lambda done, of: None,
) -> Explored:
    """As `explore`, from the cache if it is there, kept if it was worked out now. article need not be meshed."""
    key = _key(article, spread, wide, least_margin)
    found = _load(key, article, spread)
    if found is None:
        found = explore(
            article.meshed() if article.plan is None else article,
            spread,
            executor,
            wide=wide,
            least_margin=least_margin,
            told=told,
        )
        cache.write(_FOLDER, key, _data(found))
    return found


def _key(article: Nominal, spread: Spread, wide: bool, least_margin: float) -> str:
    asked = article.recipe.model_dump(mode="json", exclude=cache.NOT_PHYSICS | {"wire_stock"})
    del asked["target"]["return_loss"]
    return cache.hashed([asked, dict(article.values), asdict(spread), wide, least_margin])


def _data(found: Explored) -> dict[str, Any]:
    surface = found.surface
    return {
        "name": found.article.design.name,
        "axes": {
            "names": list(surface.axes.names),
            "centre": surface.axes.centre.tolist(),
            "half": surface.axes.half.tolist(),
            "nodes_hz": surface.axes.nodes_hz.tolist(),
            "size": surface.axes.size,
        },
        "curve": {
            "nodes_hz": surface.curve.nodes_hz.tolist(),
            "admittance_s": _pairs(surface.curve.admittance_s),
            "form": surface.curve.form,
            "reference_ohm": surface.curve.reference_ohm,
        },
        "coefficients": [_pairs(row) for row in surface.coefficients],
        "strength": surface.strength,
        "press": surface.press,
        "solves": found.solves,
        "error_reflection": found.error_reflection,
        "error_db": found.error_db,
        "bias_db": found.bias_db,
        "band_hz": found.band_hz.tolist(),
    }


def _load(key: str, article: Nominal, spread: Spread) -> Explored | None:
    data = cache.read(_FOLDER, key)
    try:
        axes, curve = data["axes"], data["curve"]
        found = Explored(
            article=article,
            spread=spread,
            surface=Surface(
                axes=Axes(
                    names=tuple(axes["names"]),
                    centre=np.array(axes["centre"], dtype=np.float64),
                    half=np.array(axes["half"], dtype=np.float64),
                    nodes_hz=np.array(axes["nodes_hz"], dtype=np.float64),
                    size=axes["size"],
                ),
                curve=Curve(
                    nodes_hz=np.array(curve["nodes_hz"], dtype=np.float64),
                    admittance_s=_complex(curve["admittance_s"]),
                    form=curve["form"],
                    reference_ohm=float(curve["reference_ohm"]),
                ),
                coefficients=np.array([_complex(row) for row in data["coefficients"]]),
                strength=float(data["strength"]),
                press=float(data["press"]),
            ),
            solves=int(data["solves"]),
            error_reflection=float(data["error_reflection"]),
            error_db=float(data["error_db"]),
            bias_db=float(data["bias_db"]),
            band_hz=np.array(data["band_hz"], dtype=np.float64),
        )
    except (KeyError, TypeError, ValueError):
        return None
    return found if _whole(found) else None


def _whole(found: Explored) -> bool:
    """Whether every number is there; a file that was tampered with or cut short is worked out anew."""
    axes, surface = found.surface.axes, found.surface
    d, k = len(axes.names), len(axes.nodes_hz)
    numbers = (axes.centre, axes.half, axes.nodes_hz, surface.coefficients, surface.curve.admittance_s)
    return (
        axes.names == found.spread.names
        and axes.centre.shape == axes.half.shape == (d,)
        and surface.coefficients.shape == (1 + d + d * (d + 1) // 2, k)
        and surface.curve.admittance_s.shape == surface.curve.nodes_hz.shape
        and surface.curve.form in ("reflection", "impedance", "admittance")
        and (axes.size is None or (isinstance(axes.size, int) and 0 <= axes.size < d))
        and all(bool(np.isfinite(n).all()) for n in numbers)
    )


def _pairs(values: Complex) -> list[list[float]]:
    return [[float(v.real), float(v.imag)] for v in values]


def _complex(pairs: Sequence[Sequence[float]]) -> Complex:
    return np.array([complex(a, b) for a, b in pairs], dtype=np.complex128)
