"""Why a component's flux or efficiency is what it is: numbers, and one plain sentence."""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from .errors import InputError
from .film.result import regimes
from .film.split import FluxSplit, flux_split
from .interface import InterfaceFlux
from .properties.protocol import Array
from .show import Shown

if TYPE_CHECKING:
    import pandas as pd


@dataclass(frozen=True)
class FilmExplanation:
    """One film of an interface.

    split : parts of the fluxes. regime : of each component. driving : x_0 - x_delta, (n).
    """

    phase: str
    split: FluxSplit
    regime: tuple[str, ...]
    driving: Array


@dataclass(frozen=True)
class FluxExplanation(Shown):
    """The flux of every component through one interface.

    names; N mol/(m2 s), positive from vapour to liquid; vapor, liquid: the films; vapor_share: share of the vapour film
    in the entropy production by diffusion, 0..1: the film with the larger share controls.
    """

    names: tuple[str, ...]
    N: Array
    vapor: FilmExplanation
    liquid: FilmExplanation
    vapor_share: float

    @property
    def controlling(self) -> FilmExplanation:
        """The film that dissipates more."""
        return self.vapor if self.vapor_share >= 0.5 else self.liquid

    def to_frame(self) -> pd.DataFrame:
        """Rows: phase and component; columns: the parts, mol/(m2 s), `pull_<name>` for each other component, sum."""
        import pandas as pd

        rows = []
        for film in (self.vapor, self.liquid):
            s = film.split
            for i, name in enumerate(self.names):
                rows.append({
                    "phase": film.phase, "component": name, "regime": film.regime[i], "driving": film.driving[i],
                    "own_gradient": s.own[i], "nonideality": s.nonideality[i],
                    **{f"pull_{other}": s.pull[i, j] for j, other in enumerate(self.names)},
                    "bulk_flow": s.bulk_flow[i], "high_flux": s.high_flux[i], "flux": s.total[i]})
        return pd.DataFrame(rows)

    def strongest_pull(self, i: int, film: FilmExplanation) -> int:
        """Index of the component that pulls i most in a film."""
        return int(np.argmax(np.abs(film.split.pull[i])))

    def sentence(self, name: str) -> str:
        """What moves a component, in one sentence."""
        if name not in self.names:
            raise InputError(f"name = {name!r}: expected one of {', '.join(self.names)}")
        i = self.names.index(name)
        film = self.controlling
        s = film.split
        share = self.vapor_share if film is self.vapor else 1.0 - self.vapor_share
        unit = 1e3
        parts = {"its own gradient": s.own[i], "non-ideality": s.nonideality[i], "bulk flow": s.bulk_flow[i],
                 "the high-flux correction": s.high_flux[i]}
        parts |= {f"the pull of {other}": s.pull[i, j] for j, other in enumerate(self.names) if j != i}
        ranked = sorted(parts.items(), key=lambda item: -abs(item[1]))
        told = [f"{value * unit:+.4g} by {words}" for words, value in ranked if abs(value) > 0.05 * abs(ranked[0][1])]
        if self.N[i] == 0:
            return f"{name} does not move."
        way = "from vapour to liquid" if self.N[i] > 0 else "from liquid to vapour"
        text = (f"{name} moves {way} at {abs(self.N[i]) * unit:.4g} mmol/(m2 s); the {film.phase} film controls "
                f"({100 * share:.0f} % of the diffusive entropy production) and its flux there is "
                f"{', '.join(told)} (positive towards the liquid)")
        if film.regime[i] != "ordinary":
            text += f": {film.regime[i]} diffusion, by the pair {name}/{self.names[self.strongest_pull(i, film)]}"
        return text + "."


def explain_flux(interface: InterfaceFlux, index: tuple[int, ...] = ()) -> FluxExplanation:
    """Explain one interface of a batch; `index` picks it (nothing for a single one)."""
    f = interface.films

    def pick(array: Array, trailing: int) -> Array:
        full = np.broadcast_to(array, (*interface.N.shape[:-1], *array.shape[array.ndim - trailing:]))
        return np.asarray(full[index])

    N, x_I, y_I = (pick(a, 1) for a in (interface.N, interface.x_I, interface.y_I))
    y, x = pick(f.y, 1), pick(f.x, 1)

    def film(phase: str, start: Array, end: Array, K: Array, gamma: Array | None) -> FilmExplanation:
        G = None if gamma is None else pick(gamma, 2)
        return FilmExplanation(phase, flux_split(N, start, end, pick(K, 2), G),
                               tuple(str(r) for r in regimes(N, start, end)), start - end)

    return FluxExplanation(interface.names, N, film("vapour", y, y_I, f.K_vapor, f.gamma_vapor),
                           film("liquid", x_I, x, f.K_liquid, f.gamma_liquid),
                           float(pick(interface.vapor_entropy_share, 0)))
