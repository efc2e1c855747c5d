"""Cross-flow trays: dimensions, operation, limits, and the coefficients by a published method."""
from __future__ import annotations

import math
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

import numpy as np
from scipy.optimize import brentq

from correlations import Correlation, tray_hydraulics, tray_limits

from ..arguments import positive_scalar
from ..errors import InputError
from .calls import Calls
from .heat import analogy
from .protocol import Array, ContactState, Hydraulics, TransferCoefficients
from .tray_methods import AIChEBubbleCap, AIChESieve, TrayOperation, TrayTransferMethod


@dataclass(frozen=True)
class CrossFlowTray:
    """A single-pass tray with segmental downcomers; all lengths m.

    diameter of the column; spacing; weir_height; downcomer_fraction: area of one downcomer over the cross-section;
    hole_area_fraction: free area over active area; hole_diameter; hole_pitch (None: triangular, from the free area);
    deck_thickness; apron_clearance under the downcomer apron (None: 10 mm below the weir); foaming_factor: capacity of
    a foaming system over that of a clean one; method: transfer units, a function of `tray_methods`.

    Raises `InputError` for dimensions that are not positive or do not fit.
    """

    diameter: float
    spacing: float
    weir_height: float
    hole_diameter: float
    hole_area_fraction: float
    downcomer_fraction: float = 0.12
    deck_thickness: float = 0.002
    hole_pitch: float | None = None
    apron_clearance: float | None = None
    foaming_factor: float = 1.0
    method: TrayTransferMethod = field(default_factory=AIChESieve)

    def __post_init__(self) -> None:
        for name in ("diameter", "spacing", "weir_height", "hole_diameter", "hole_area_fraction", "downcomer_fraction",
                     "deck_thickness", "foaming_factor"):
            positive_scalar(name, getattr(self, name))
        for name in ("hole_pitch", "apron_clearance"):
            if getattr(self, name) is not None:
                positive_scalar(name, getattr(self, name))
        if not self.downcomer_fraction < 0.4:
            raise InputError(f"downcomer_fraction = {self.downcomer_fraction}: expected below 0.4 of the cross-section")
        if not self.hole_area_fraction < 0.35:
            raise InputError(f"hole_area_fraction = {self.hole_area_fraction}: expected below 0.35 of the active area")
        if not self.weir_height < self.spacing:
            raise InputError(f"weir_height = {self.weir_height}: expected below the spacing, {self.spacing} m")
        if self.hole_pitch is None:
            # Equilateral triangles of holes: A_h/A_a = pi/(2 sqrt 3) (d/p)^2.
            pitch = self.hole_diameter * math.sqrt(math.pi / (2.0 * math.sqrt(3.0) * self.hole_area_fraction))
            object.__setattr__(self, "hole_pitch", pitch)
        if self.apron_clearance is None:
            object.__setattr__(self, "apron_clearance", max(0.5 * self.weir_height, self.weir_height - 0.010))

    @property
    def cross_section(self) -> float:
        """m2."""
        return math.pi * self.diameter**2 / 4.0

    @property
    def active_area(self) -> float:
        """Cross-section less two downcomers, m2."""
        return self.cross_section * (1.0 - 2.0 * self.downcomer_fraction)

    @property
    def net_area(self) -> float:
        """Cross-section less one downcomer, m2."""
        return self.cross_section * (1.0 - self.downcomer_fraction)

    @cached_property
    def _chord_angle(self) -> float:
        """Angle of the segment that is the downcomer, from (angle - sin angle)/(2 pi) = downcomer_fraction."""
        return float(brentq(lambda a: (a - math.sin(a)) / (2.0 * math.pi) - self.downcomer_fraction, 1e-6, math.pi))

    @property
    def weir_length(self) -> float:
        """Chord of the downcomer, m."""
        return self.diameter * math.sin(self._chord_angle / 2.0)

    @property
    def path_length(self) -> float:
        """Distance between the weirs, m."""
        return self.diameter * math.cos(self._chord_angle / 2.0)

    def operation(self, state: ContactState, calls: Calls) -> TrayOperation:
        """What the traffic of `state` does on this tray."""
        vapor, liquid = state.vapor_volume_flow, state.liquid_volume_flow
        active = vapor / self.active_area
        net = vapor / self.net_area
        weir_load = liquid / self.weir_length
        densities = {"vapor_density": state.vapor.mass_density, "liquid_density": state.liquid.mass_density}
        flow_parameter = (state.liquid_mass_flow / state.vapor_mass_flow
                          * np.sqrt(state.vapor.mass_density / state.liquid.mass_density))
        return TrayOperation(
            active_velocity=active, hole_velocity=active / self.hole_area_fraction, net_velocity=net,
            weir_load=weir_load, path_load=liquid * self.path_length / self.active_area, flow_parameter=flow_parameter,
            flooding=net / self.flooding_velocity(state, flow_parameter, calls),
            froth_density=calls(tray_hydraulics.bennett_froth_density, active_velocity=active, **densities),
            clear_liquid=calls(tray_hydraulics.bennett_clear_liquid, weir_height=self.weir_height,
                               weir_load=weir_load, active_velocity=active, **densities))

    def flooding_velocity(self, state: ContactState, flow_parameter: Array, calls: Calls) -> Array:
        """Vapour velocity on the net area at entrainment flooding, same L/V, m/s (Fair 1961)."""
        return calls(tray_limits.fair_flooding, flow_parameter=flow_parameter, tray_spacing=self.spacing,
                     surface_tension=state.liquid.surface_tension, vapor_density=state.vapor.mass_density,
                     liquid_density=state.liquid.mass_density, hole_area_fraction=self.hole_area_fraction,
                     foaming_factor=self.foaming_factor)

    def transfer(self, state: ContactState) -> TransferCoefficients:
        """Pair coefficients per active area from the transfer units: kappa_V A = N_V Q_V, kappa_L A = N_L Q_L.

        Heat by analogy, h = mean kappa c cp Le^p, with the exponents p of the method's kappa ~ D^p.
        """
        calls = Calls(state.V.shape)
        operation = self.operation(state, calls)
        N_V, N_L = self.method(self, operation, state, calls)
        kappa_V = N_V * (state.vapor_volume_flow / self.active_area)[..., None, None]
        kappa_L = N_L * (state.liquid_volume_flow / self.active_area)[..., None, None]
        return TransferCoefficients(
            kappa_vapor=kappa_V, kappa_liquid=kappa_L,
            h_vapor=analogy(kappa_V, state.vapor, self.method.vapor_exponent),
            h_liquid=analogy(kappa_L, state.liquid, self.method.liquid_exponent),
            area=np.full(state.V.shape, self.active_area), basis="active area", notes=calls.notes)

    @property
    def correlations(self) -> dict[str, Correlation[..., Any]]:
        """The correlations used, by what for."""
        return {**self.method.correlations, "flooding": tray_limits.fair_flooding,
                "froth density": tray_hydraulics.bennett_froth_density,
                "orifice coefficient": tray_hydraulics.leibson_orifice_coefficient,
                "residual pressure drop": tray_hydraulics.bubble_residual_head,
                "weir crest": tray_hydraulics.francis_weir_crest,
                "underflow": tray_hydraulics.downcomer_underflow_head,
                "dry pressure drop": self.dry_correlation, "weep point": tray_limits.froude_weep_point,
                "entrainment": tray_limits.hunt_entrainment,
                "downcomer backup": tray_hydraulics.downcomer_backup}

    def peclet(self, state: ContactState) -> Array:
        """Peclet number of the liquid along its path, (...)."""
        calls = Calls(state.V.shape)
        return self.method.peclet(self, self.operation(state, calls), state, calls)

    def dry_head(self, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Dry pressure drop, m of liquid, as an orifice with the coefficient of Leibson et al. (1957)."""
        orifice = calls(tray_hydraulics.leibson_orifice_coefficient, hole_diameter=self.hole_diameter,
                        deck_thickness=self.deck_thickness)
        return calls(tray_hydraulics.sieve_dry_head, hole_velocity=operation.hole_velocity, orifice_coefficient=orifice,
                     vapor_density=state.vapor.mass_density, liquid_density=state.liquid.mass_density)

    def hydraulics(self, state: ContactState) -> Hydraulics:
        """Flooding, pressure drop, clear liquid, weeping, downcomer backup and entrainment."""
        calls = Calls(state.V.shape)
        o = self.operation(state, calls)
        rho_L = state.liquid.mass_density
        residual = calls(tray_hydraulics.bubble_residual_head, liquid_density=rho_L,
                         surface_tension=state.liquid.surface_tension, hole_diameter=self.hole_diameter)
        dry = self.dry_head(o, state, calls)
        drop = calls(tray_hydraulics.tray_pressure_drop, dry_head=dry, clear_liquid_height=o.clear_liquid,
                     residual_head=residual, liquid_density=rho_L)
        assert self.apron_clearance is not None
        underflow = calls(tray_hydraulics.downcomer_underflow_head, liquid_flow=state.liquid_volume_flow,
                          apron_area=self.apron_clearance * self.weir_length)
        backup = calls(tray_hydraulics.downcomer_backup, total_head=dry + o.clear_liquid + residual,
                       weir_height=self.weir_height,
                       weir_crest=calls(tray_hydraulics.francis_weir_crest, weir_load=o.weir_load),
                       underflow_head=underflow)
        level = calls(tray_hydraulics.downcomer_froth_height, backup=backup, downcomer_froth_density=0.5)
        return Hydraulics(
            flooding=o.flooding, pressure_drop=drop, clear_liquid=o.clear_liquid,
            weeping=self.weep_velocity(o, state, calls) / o.hole_velocity,
            downcomer=level / (self.spacing + self.weir_height),
            entrainment=calls(tray_limits.hunt_entrainment, surface_tension=state.liquid.surface_tension,
                              net_velocity=o.net_velocity, tray_spacing=self.spacing,
                              clear_liquid_height=o.clear_liquid),
            notes=calls.notes)

    @property
    def dry_correlation(self) -> Correlation[..., Any]:
        """What the dry pressure drop comes from."""
        return tray_hydraulics.sieve_dry_head

    def weep_velocity(self, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Hole velocity at the weep point, m/s."""
        return calls(tray_limits.froude_weep_point, clear_liquid_height=operation.clear_liquid,
                     vapor_density=state.vapor.mass_density, liquid_density=state.liquid.mass_density)


@dataclass(frozen=True)
class SieveTray(CrossFlowTray):
    """A sieve tray; `method` `AIChESieve()` (default), `ChanFair()`, `ChenChuang()` or `Zuiderweg()`."""


@dataclass(frozen=True)
class BubbleCapTray(CrossFlowTray):
    """A bubble-cap tray; hole dimensions are those of the risers. `method` `AIChEBubbleCap()`.

    The hydraulics are those of sieve trays and only a guide: caps have their own charts.
    """

    method: TrayTransferMethod = field(default_factory=AIChEBubbleCap)


@dataclass(frozen=True)
class ValveTray(CrossFlowTray):
    """A tray with floating valves: the AIChE transfer units serve in the absence of data of its own.

    closed_loss, open_loss: K of the dry pressure drop with the valves closed and open, head = K u_h^2 rho_V/rho_L,
    s2/m; valve_thickness m and valve_density kg/m3 of their metal. All four are data of the valve and the user's.
    """

    closed_loss: float = math.nan
    open_loss: float = math.nan
    valve_thickness: float = math.nan
    valve_density: float = 7900.0

    def __post_init__(self) -> None:
        super().__post_init__()
        for name in ("closed_loss", "open_loss", "valve_thickness", "valve_density"):
            positive_scalar(name, getattr(self, name))

    @property
    def dry_correlation(self) -> Correlation[..., Any]:
        """What the dry pressure drop comes from."""
        return tray_hydraulics.valve_dry_head

    def dry_head(self, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Dry pressure drop, m of liquid: valves partly or fully open, whichever is more (Klein 1982)."""
        return calls(tray_hydraulics.valve_dry_head, hole_velocity=operation.hole_velocity,
                     vapor_density=state.vapor.mass_density, liquid_density=state.liquid.mass_density,
                     closed_loss=self.closed_loss, open_loss=self.open_loss, valve_thickness=self.valve_thickness,
                     valve_density=self.valve_density)
