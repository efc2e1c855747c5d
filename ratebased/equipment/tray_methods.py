"""Published methods for the transfer units of a tray: small functions a tray object is given, one a method.

Each takes the tray, its operation and the state and returns numbers of transfer units of the pairs, N_V and N_L,
(..., n, n) each: N_V = kappa_V a t_V, N_L = kappa_L a t_L.
"""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Protocol

import numpy as np

from correlations import Correlation, mixing, tray_hydraulics, tray_transfer

from .calls import Calls
from .protocol import Array, ContactState

if TYPE_CHECKING:
    from .trays import CrossFlowTray

Correlations = Mapping[str, Correlation[..., Any]]


@dataclass(frozen=True)
class TrayOperation:
    """What the traffic does on a tray, arrays over stages.

    active_velocity, hole_velocity, net_velocity m/s; weir_load per length of weir and path_load per mean width of the
    liquid path, m2/s; flow_parameter; flooding: net velocity over the flooding velocity; froth_density and
    clear_liquid: by Bennett, Agrawal & Cook.
    """

    active_velocity: Array
    hole_velocity: Array
    net_velocity: Array
    weir_load: Array
    path_load: Array
    flow_parameter: Array
    flooding: Array
    froth_density: Array
    clear_liquid: Array


class TrayTransferMethod(Protocol):
    """Transfer units of the pairs on a tray."""

    vapor_exponent: float
    liquid_exponent: float
    """p of kappa ~ D^p in each phase, for the heat-transfer analogy."""

    correlations: Correlations
    """The correlations used, by what for; "vapor" and "liquid" carry the scatter of the coefficients."""

    def __call__(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState,
                 calls: Calls) -> tuple[Array, Array]: ...

    def peclet(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Peclet number of the liquid path, (...)."""
        ...


class _AIChEMixing:
    """Residence time on the clear liquid of the method and the eddy diffusivity of the AIChE manual (1958)."""

    vapor_exponent = liquid_exponent = 0.5

    def clear_liquid(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Clear liquid height, m."""
        return operation.clear_liquid

    def liquid_time(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Residence time of the liquid, s."""
        return calls(tray_hydraulics.liquid_residence_time,
                     clear_liquid_height=self.clear_liquid(tray, operation, state, calls),
                     path_length=tray.path_length, weir_load=operation.path_load)

    def peclet(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Peclet number of the liquid path, (...)."""
        eddy = calls(mixing.aiche_eddy_diffusivity, active_velocity=operation.active_velocity,
                     weir_load=operation.path_load, weir_height=tray.weir_height)
        return calls(mixing.peclet_number, path_length=tray.path_length, eddy_diffusivity=eddy,
                     liquid_residence_time=self.liquid_time(tray, operation, state, calls))


class _AIChE(_AIChEMixing):
    """The vapour units of the manual with the liquid units and the clear liquid of one kind of tray."""

    correlations: Correlations

    def clear_liquid(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Clear liquid height by the manual's own equation, m."""
        return calls(self.correlations["clear liquid"], weir_height=tray.weir_height,
                     weir_load=operation.path_load, active_velocity=operation.active_velocity,
                     vapor_density=state.vapor.mass_density)

    def __call__(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState,
                 calls: Calls) -> tuple[Array, Array]:
        """N_V, N_L of the pairs."""
        vapor = calls.pairs(
            self.correlations["vapor"], state.vapor.diffusivity, active_velocity=operation.active_velocity,
            vapor_density=state.vapor.mass_density, vapor_viscosity=state.vapor.viscosity,
            weir_height=tray.weir_height, weir_load=operation.path_load)
        liquid = calls.pairs(
            self.correlations["liquid"], state.liquid.diffusivity, active_velocity=operation.active_velocity,
            vapor_density=state.vapor.mass_density,
            liquid_residence_time=self.liquid_time(tray, operation, state, calls))
        return vapor, liquid


class AIChESieve(_AIChE):
    """Two-film transfer units of sieve trays, AIChE Bubble-Tray Design Manual (1958)."""

    correlations: Correlations = {
        "vapor": tray_transfer.aiche_vapor_units, "liquid": tray_transfer.aiche_sieve_liquid_units,
        "clear liquid": tray_hydraulics.aiche_sieve_clear_liquid,
        "eddy diffusivity": mixing.aiche_eddy_diffusivity}


class AIChEBubbleCap(_AIChE):
    """Two-film transfer units of bubble-cap trays, AIChE Bubble-Tray Design Manual (1958)."""

    correlations: Correlations = {
        "vapor": tray_transfer.aiche_vapor_units, "liquid": tray_transfer.aiche_bubble_cap_liquid_units,
        "clear liquid": tray_hydraulics.aiche_bubble_cap_clear_liquid,
        "eddy diffusivity": mixing.aiche_eddy_diffusivity}


class ChanFair(_AIChEMixing):
    """Transfer units of sieve trays, Chan & Fair (1984), on the clear liquid of Bennett, Agrawal & Cook (1983)."""

    correlations: Correlations = {
        "vapor": tray_transfer.chan_fair_vapor, "liquid": tray_transfer.chan_fair_liquid,
        "clear liquid": tray_hydraulics.bennett_clear_liquid,
        "eddy diffusivity": mixing.aiche_eddy_diffusivity}

    def __call__(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState,
                 calls: Calls) -> tuple[Array, Array]:
        """N_V, N_L of the pairs."""
        vapor_time = calls(tray_hydraulics.vapor_residence_time, clear_liquid_height=operation.clear_liquid,
                           froth_density=operation.froth_density, active_velocity=operation.active_velocity)
        vapor = calls.pairs(tray_transfer.chan_fair_vapor, state.vapor.diffusivity,
                            flood_fraction=operation.flooding, clear_liquid_height=operation.clear_liquid)
        liquid = calls.pairs(tray_transfer.chan_fair_liquid, state.liquid.diffusivity,
                             active_velocity=operation.active_velocity, vapor_density=state.vapor.mass_density)
        liquid_time = self.liquid_time(tray, operation, state, calls)
        return vapor * vapor_time[..., None, None], liquid * liquid_time[..., None, None]


class ChenChuang(_AIChEMixing):
    """Transfer units of sieve trays in the froth regime, Chen & Chuang (1993)."""

    correlations: Correlations = {
        "vapor": tray_transfer.chen_chuang_vapor_units, "liquid": tray_transfer.chen_chuang_liquid_units,
        "clear liquid": tray_hydraulics.bennett_clear_liquid,
        "eddy diffusivity": mixing.aiche_eddy_diffusivity}

    def __call__(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState,
                 calls: Calls) -> tuple[Array, Array]:
        """N_V, N_L of the pairs."""
        common = {
            "active_velocity": operation.active_velocity, "vapor_density": state.vapor.mass_density,
            "liquid_density": state.liquid.mass_density, "liquid_viscosity": state.liquid.viscosity,
            "surface_tension": state.liquid.surface_tension, "hole_area_fraction": tray.hole_area_fraction,
            "clear_liquid_height": operation.clear_liquid}
        vapor = calls.pairs(tray_transfer.chen_chuang_vapor_units, state.vapor.diffusivity, **common)
        liquid = calls.pairs(
            tray_transfer.chen_chuang_liquid_units, state.liquid.diffusivity, **common,
            molar_flow_ratio=state.V / state.L, vapor_molar_mass=state.vapor_molar_mass,
            liquid_molar_mass=state.liquid_molar_mass)
        return vapor, liquid


class Zuiderweg(_AIChEMixing):
    """Coefficients and area of sieve trays, Zuiderweg (1982); spray or mixed regime below, emulsion flow above 3."""

    vapor_exponent, liquid_exponent = 0.0, 0.25
    correlations: Correlations = {
        "vapor": tray_transfer.zuiderweg_vapor, "liquid": tray_transfer.zuiderweg_liquid,
        "area": tray_transfer.zuiderweg_spray_area,
        "area in emulsion flow": tray_transfer.zuiderweg_emulsion_area,
        "clear liquid": tray_hydraulics.hofhuis_zuiderweg_clear_liquid,
        "eddy diffusivity": mixing.aiche_eddy_diffusivity}

    def clear_liquid(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState, calls: Calls) -> Array:
        """Clear liquid height by Hofhuis & Zuiderweg (1979), m."""
        return calls(tray_hydraulics.hofhuis_zuiderweg_clear_liquid, weir_height=tray.weir_height,
                     pitch=tray.hole_pitch, flow_parameter=operation.flow_parameter,
                     weir_per_area=tray.weir_length / tray.active_area)

    def __call__(self, tray: CrossFlowTray, operation: TrayOperation, state: ContactState,
                 calls: Calls) -> tuple[Array, Array]:
        """N_V, N_L of the pairs; the vapour coefficient is the same for every pair."""
        height = self.clear_liquid(tray, operation, state, calls)
        regime = calls(tray_transfer.zuiderweg_emulsion_number, flow_parameter=operation.flow_parameter,
                       weir_per_area=tray.weir_length / tray.active_area, clear_liquid_height=height)
        group = {"active_velocity": operation.active_velocity, "vapor_density": state.vapor.mass_density,
                 "clear_liquid_height": height, "flow_parameter": operation.flow_parameter,
                 "surface_tension": state.liquid.surface_tension, "hole_area_fraction": tray.hole_area_fraction}
        area = np.where(regime > 3, calls(tray_transfer.zuiderweg_emulsion_area, **group),
                        calls(tray_transfer.zuiderweg_spray_area, **group))
        kappa_vapor = calls(tray_transfer.zuiderweg_vapor, vapor_density=state.vapor.mass_density)
        kappa_liquid = calls.pairs(tray_transfer.zuiderweg_liquid, state.liquid.diffusivity)
        liquid_velocity = state.liquid_volume_flow / tray.active_area
        vapor = np.broadcast_to((kappa_vapor * area / operation.active_velocity)[..., None, None],
                                state.vapor.diffusivity.shape)
        return vapor, kappa_liquid * (area / liquid_velocity)[..., None, None]
