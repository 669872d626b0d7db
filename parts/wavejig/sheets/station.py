"""Figures for the cautions and the mounting: radiated power, distance, wind. Pure formulas; SI, loads in N.

Assumptions stand in for what a recipe does not give; each is told on the sheet.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.design.model import Design
from wavejig.reflector.model import Tray

# Assumed when the recipe does not say; common practice, no source.
POWER_W, CABLE_LOSS_DB, WIND_M_PER_S = 0.1, 0.0, 40.0
# Gain in dBi assumed where nothing has been predicted: high, to err on the safe side; common practice, no source.
GAIN_DBI = {"quad": 10.0, "biquad": 12.0, "double-biquad": 15.0, "twin-loop": 12.0, "path": 13.0}
# Air, EN 1991-1-4, and drag of a square plate 1.2 and of a cup open to the wind 1.4 (Hoerner, Fluid-Dynamic
# Drag, 1965); all from memory.
AIR_KG_PER_M3, DRAG_PLATE, DRAG_CUP = 1.25, 1.2, 1.4
LIGHT_M_PER_S = 299_792_458.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Exposure:
    """What the transmitter makes of the antenna. *_assumed: the figure is ours, not the recipe's.

    limit_w_per_m2: the power density the distances are for. clear_m: where the plane-wave density falls to it
    in free space; reflected_m: with the field doubled by a full reflection (four times the density).
    far_field_m: nearer than this the formula does not hold.
    """

    power_w: float
    power_assumed: bool
    loss_db: float
    loss_assumed: bool
    gain_dbi: float
    gain_assumed: bool
    eirp_w: float
    limit_w_per_m2: float
    clear_m: float
    reflected_m: float
    far_field_m: float

    @property
    def eirp_dbm(self) -> float:
        """EIRP in dB over a milliwatt."""
        return 10.0 * math.log10(self.eirp_w * 1000.0)

    @property
    def keep_m(self) -> float:
        """The distance to keep: the larger of both, in steps of 0.1 m upwards."""
        return math.ceil(max(self.reflected_m, self.far_field_m) * 10.0 - 1e-9) / 10.0


def exposure(design: Design, gain_dbi: float | None) -> Exposure:
    """EIRP and distances of a design; gain_dbi: predicted, None if nothing has been predicted."""
    station, target = design.station, design.target
    power = POWER_W if station.transmitter_power_w is None else station.transmitter_power_w
    loss = CABLE_LOSS_DB if station.cable_loss_db is None else station.cable_loss_db
    gain = GAIN_DBI[design.radiator.family] if gain_dbi is None else gain_dbi
    eirp = eirp_w(power, gain, loss)
    limit = public_limit_w_per_m2(target.band_low_hz)
    wide_m = math.hypot(design.reflector.base_x_mm, design.reflector.base_y_mm) / 1000.0
    return Exposure(
        power_w=power,
        power_assumed=station.transmitter_power_w is None,
        loss_db=loss,
        loss_assumed=station.cable_loss_db is None,
        gain_dbi=gain,
        gain_assumed=gain_dbi is None,
        eirp_w=eirp,
        limit_w_per_m2=limit,
        clear_m=distance_m(eirp, limit),
        reflected_m=distance_m(4.0 * eirp, limit),
        far_field_m=2.0 * wide_m**2 * target.band_high_hz / LIGHT_M_PER_S,
    )


def eirp_w(power_w: float, gain_dbi: float, loss_db: float) -> float:
    """Power an isotropic radiator would need for the same density in the main beam."""
    return power_w * math.pow(10.0, (gain_dbi - loss_db) / 10.0)


def distance_m(eirp: float, density_w_per_m2: float) -> float:
    """Where EIRP / (4 pi r^2) has fallen to a density. Far field only. Source: FCC OET Bulletin 65 (1997)."""
    return math.sqrt(eirp / (4.0 * math.pi * density_w_per_m2))


def public_limit_w_per_m2(frequency_hz: float) -> float:
    """Reference level for the general public, whole body, 30 min average.

    Source: ICNIRP 2020, from memory: 2 W/m2 up to 400 MHz, f/200 MHz up to 2 GHz, 10 W/m2 above. Other rules
    differ: the sheet sends the reader to those in force where they are.
    """
    mhz = frequency_hz / 1e6
    return 2.0 if mhz <= 400.0 else min(mhz / 200.0, 10.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Wind:
    """Load of the wind square onto the reflector."""

    speed_m_per_s: float
    assumed: bool
    area_m2: float
    drag: float
    force_n: float


def wind(design: Design, tray: Tray) -> Wind:
    """F = rho v^2 Cd A / 2 on the area the reflector turns to the wind."""
    given = design.station.wind_speed_m_per_s
    speed = WIND_M_PER_S if given is None else given
    reach = {e: tray.half_mm(e) for e in ("x+", "x-", "y+", "y-")}
    for lip in tray.lips:
        reach[lip.edge] += max(lip.height_mm * math.cos(math.radians(lip.angle_deg)), 0.0)
    own = tray.own
    if own is not None:
        for edge in reach:
            reach[edge] += own.reach_mm(own.depth_mm) + max(own.rim_mm, tray.thickness_mm)
    area = (reach["x+"] + reach["x-"]) * (reach["y+"] + reach["y-"]) / 1e6
    if own is not None and own.shape == "round":
        area *= math.pi / 4.0
    drag = DRAG_CUP if tray.lips or own is not None else DRAG_PLATE
    return Wind(
        speed_m_per_s=speed,
        assumed=given is None,
        area_m2=area,
        drag=drag,
        force_n=0.5 * AIR_KG_PER_M3 * speed**2 * drag * area,
    )
