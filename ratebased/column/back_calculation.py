"""Efficiencies and heights back-calculated from a rate-based profile, and the sets to feed an equilibrium column
with.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..arguments import finite_scalar
from ..efficiency.definitions import equilibrium_vapor, murphree_vapor, small_driving_force, vaporization
from ..efficiency_set import EfficiencyBasis, EfficiencyKind, EfficiencySet
from ..errors import InputError
from ..properties.protocol import Array, Mask, PropertyModel
from ..properties.saturation import bubble_point
from ..show import Shown
from .profile import Profile

if TYPE_CHECKING:
    import pandas as pd


@dataclass(frozen=True, eq=False)
class ColumnEfficiencies(Shown):
    """Component efficiencies of the C contact stages of a column of S stages.

    stage: numbers, (C,). basis: temperature at which the equilibrium vapour y* of the leaving liquid is taken.
    murphree: E_i = (y_i - y_in,i)/(y*_i - y_in,i), (C, n), blank (NaN) where flagged. flagged: |y* - y_in| below the
    limit, where the figure means nothing, or a component that cannot be in both phases. y_in, y_out, y_star: (C, n).
    vaporization: y_i/(K_i(T_L) x_i), one for masked or absent components. superheat: T_V - T_L, K. T_reference: bubble
    point or T_L, K. dependent: the component with the largest y, (C,), whose Murphree efficiency follows from the
    others at the bubble-point basis: sum_i E_i (y*_i - y_in,i) = 0.
    """

    names: tuple[str, ...]
    stages: int
    stage: NDArray[np.int64]
    basis: EfficiencyBasis
    murphree: Array
    flagged: Mask
    y_in: Array
    y_out: Array
    y_star: Array
    vaporization: Array
    superheat: Array
    T_reference: Array
    T_L: Array
    T_V: Array
    dependent: NDArray[np.int64]
    ordinary: Mask

    @property
    def exact_murphree(self) -> Array:
        """Murphree efficiencies of every component in both phases, flagged ones too; zero for the others."""
        return np.where(self.ordinary, murphree_vapor(self.y_in, self.y_out, self.y_star), 0.0)

    def vaporization_set(self) -> EfficiencySet:
        """Vaporisation efficiencies with the superheat: bounded, the recommended form."""
        return EfficiencySet(EfficiencyKind.VAPORIZATION, self._spread(self.vaporization, 1.0),
                             vapor_offset=self._spread(self.superheat, 0.0), given=self._given())

    def murphree_set(self) -> EfficiencySet:
        """Murphree efficiencies with the temperature offsets that go with their basis.

        Raises
        ------
        InputError : a component whose efficiency has a pole, y* = y_in: no Murphree set holds that column.
        """
        poles = ~np.isfinite(self.exact_murphree) & (np.arange(len(self.names)) != self.dependent[:, None])
        for k, i in np.argwhere(poles)[:1]:
            raise InputError(f"stage {self.stage[k]}: the Murphree efficiency of {self.names[i]} has a pole, y* = "
                             "y_in; feed vaporisation efficiencies back")
        values = self._spread(np.where(np.isfinite(self.exact_murphree), self.exact_murphree, 1.0), 1.0)
        at_bubble = self.basis is EfficiencyBasis.BUBBLE_POINT
        dependent = np.full(self.stages, -1)
        if at_bubble:
            dependent[self.stage - 1] = self.dependent
        return EfficiencySet(EfficiencyKind.MURPHREE_VAPOR, values, dependent,
                             self._spread(self.T_V - self.T_reference, 0.0),
                             self._spread(self.T_L - self.T_reference, 0.0), self.basis, self._given())

    def _given(self) -> Mask:
        given = np.zeros(self.stages, bool)
        given[self.stage - 1] = True
        return given

    def _spread(self, values: Array, rest: float) -> Array:
        full = np.full((self.stages, *values.shape[1:]), rest)
        full[self.stage - 1] = values
        return full

    def to_frame(self) -> pd.DataFrame:
        """One row a contact stage: Murphree (blank where flagged), y_out - y_in, vaporisation efficiencies, offsets."""
        import pandas as pd
        columns: dict[str, object] = {"stage": self.stage, "basis": self.basis.value,
                                      "dependent": [self.names[k] for k in self.dependent]}
        for word, array in (("E", self.murphree), ("dy", self.y_out - self.y_in), ("eta", self.vaporization)):
            columns |= {f"{word}_{name}": array[:, i] for i, name in enumerate(self.names)}
        columns["superheat_K"] = self.superheat
        columns["T_vapor_minus_reference_K"] = self.T_V - self.T_reference
        columns["T_liquid_minus_reference_K"] = self.T_L - self.T_reference
        return pd.DataFrame(columns)


def equilibrium_state(profile: Profile, properties: PropertyModel, at_liquid_temperature: bool | None
                      ) -> tuple[EfficiencyBasis, Array, Array]:
    """Basis, y* and its temperature for the liquids leaving the contact stages.

    See `equilibrium_vapor`; K belongs to the vapour that leaves."""
    c = profile.contact_index
    P, x, T_L = profile.P[c], profile.x[c], profile.T_L[c]
    ordinary = properties.condensable & properties.volatile
    own = not ordinary.all() if at_liquid_temperature is None else at_liquid_temperature
    if not own and not properties.condensable.all():
        raise InputError("at_liquid_temperature = False: the bubble point of a liquid under a gas means nothing")
    v_in = profile.entering_vapor()[c]
    star = equilibrium_vapor(properties, P, x, T_L, v_in / v_in.sum(-1, keepdims=True), y_out=profile.y[c],
                             at_liquid_temperature=own)
    return EfficiencyBasis(star.basis), star.composition, star.temperature


def column_efficiencies(profile: Profile, *, limit: float = 0.01, at_liquid_temperature: bool | None = None,
                     properties: PropertyModel | None = None) -> ColumnEfficiencies:
    """Back-calculated component efficiencies of a column.

    Parameters
    ----------
    limit : a Murphree figure is flagged where |y* - y_in| < limit max(y*, y_in): less than K is known to.
    at_liquid_temperature : basis of y*; None takes the bubble point unless a component is masked.
    properties : the model of a loaded profile.

    Raises
    ------
    InputError : no model, a model of other components, a limit below zero.

    Sources: Murphree, Ind. Eng. Chem. 17 (1925) 747; vaporisation efficiencies of Holland (1963), with K at the
    temperature of the leaving liquid.
    """
    model = profile.model_or(properties)
    if finite_scalar("limit", limit) < 0:
        raise InputError(f"limit = {limit}: expected zero or a positive number")
    c = profile.contact_index
    ordinary = model.condensable & model.volatile
    basis, y_star, T = equilibrium_state(profile, model, at_liquid_temperature)
    v_in = profile.entering_vapor()[c]
    y_in, y = v_in / v_in.sum(-1, keepdims=True), profile.y[c]
    flagged = small_driving_force(y_in, y_star, limit) | ~ordinary
    murphree = np.where(flagged, np.nan, murphree_vapor(y_in, y, y_star))
    T_L, T_V = profile.T_L[c], profile.T_V[c]
    K = model.k_value(T_L, profile.P[c], profile.x[c], y)
    eta = vaporization(K, profile.x[c], y, ordinary)          # zero where a trace is lost in rounding
    return ColumnEfficiencies(profile.names, profile.stages, c + 1, basis, murphree, flagged, y_in, y, y_star,
                           np.where(eta > 0, eta, 1.0), T_V - T_L, T, T_L, T_V,
                           np.argmax(np.where(ordinary, y, -1.0), -1), ordinary)


@dataclass(frozen=True, eq=False)
class ColumnHeights(Shown):
    """Heights of a packed bed by component, (C, n), over its C segments.

    hetp: height equivalent to a theoretical plate, m, blank (NaN) where flagged. stages: N_eq of each segment.
    stripping: S = m V/L, m the slope of y* over x between the ends of the segment. flagged: no meaningful figure.
    height: m, (C,).
    """

    names: tuple[str, ...]
    stage: NDArray[np.int64]
    height: Array
    hetp: Array
    equivalent_stages: Array
    stripping: Array
    flagged: Mask

    def mean(self) -> Array:
        """HETP of each component over the bed, m, (n,): height over the stages of the segments that are not flagged."""
        used = np.where(self.flagged, 0.0, 1.0)
        stages = np.where(self.flagged, 0.0, self.equivalent_stages).sum(0)
        height = (used * self.height[:, None]).sum(0)
        return np.where(stages > 0, height / np.where(stages > 0, stages, 1.0), np.nan)

    def to_frame(self) -> pd.DataFrame:
        """One row a segment: hetp_<name>_m (blank where flagged) and S_<name>."""
        import pandas as pd
        columns: dict[str, object] = {"stage": self.stage, "height_m": self.height}
        for word, array in (("hetp_{}_m", self.hetp), ("S_{}", self.stripping)):
            columns |= {word.format(name): array[:, i] for i, name in enumerate(self.names)}
        return pd.DataFrame(columns)


def column_heights(profile: Profile, *, limit: float = 0.01, properties: PropertyModel | None = None) -> ColumnHeights:
    """Component HETPs of a packed bed from its rate-based profile.

    A segment of height Z is E_i of a plate (Murphree, y* of the leaving liquid); N_eq,i = ln(1 + E_i (S_i - 1))/ln S_i
    and HETP_i = Z/N_eq,i, exact for a straight equilibrium line of slope m and a straight operating line (Lewis 1936).

    Raises
    ------
    InputError : a column of trays.
    """
    if profile.height is None:
        raise InputError("profile: no segment height, trays have efficiencies instead of an HETP")
    model = profile.model_or(properties)
    c = profile.contact_index
    table = column_efficiencies(profile, limit=limit, properties=model)
    l_in = profile.entering_liquid()[c]
    x_in = l_in / l_in.sum(-1, keepdims=True)
    at_own = table.basis is EfficiencyBasis.LIQUID_TEMPERATURE
    ordinary = table.ordinary
    T_in = profile.T_L[np.maximum(c - 1, 0)]
    if at_own:
        star_in = np.where(ordinary, model.k_value(table.T_L, profile.P[c], x_in, table.y_out) * x_in, 0.0)
    else:
        star_in = bubble_point(model, profile.P[c], x_in, T_in)[1]
    dx = profile.x[c] - x_in
    flat = np.abs(dx) < 1e-12
    star_out = np.where(ordinary, table.y_star, star_in)
    slope = np.where(flat, np.nan, (star_out - star_in) / np.where(flat, 1.0, dx))
    ratio = ((profile.V + profile.vapor_draw)[c] / (profile.L + profile.liquid_draw)[c])[:, None]
    S = slope * ratio
    E = table.murphree
    with np.errstate(invalid="ignore"):
        argument = 1.0 + E * (S - 1.0)
        near = np.abs(S - 1.0) < 1e-6
        good = (argument > 0) & (S > 0) & np.isfinite(argument)
        stages = np.where(near, E, np.log(np.where(good, argument, 1.0)) / np.log(np.where(good & ~near, S, 2.0)))
        good &= stages > 0
    Z = profile.height[c]
    stages = np.where(good, stages, np.nan)
    return ColumnHeights(profile.names, c + 1, Z, Z[:, None] / stages, stages, S, ~good)
