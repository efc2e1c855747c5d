"""What goes into an interface and what comes out: frozen records of arrays, any batch shape, components last."""
from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from ..bootstrap import TotalFlux
from ..film import FilmFlux
from ..show import Shown

if TYPE_CHECKING:
    import pandas as pd

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Bulk:
    """One phase beside its film.

    composition : mole fractions, (..., n). temperature : K, (...). kappa : pair mass-transfer coefficients, m/s, (...,
    n, n), symmetric, diagonal ignored. heat_transfer : low-flux film coefficient, W/(m2 K), (...), above zero.
    molar_density : mol/m3, (...). Batch shapes broadcast.
    """

    composition: Array
    temperature: Array
    kappa: Array
    heat_transfer: Array
    molar_density: Array


class InterfaceStatus(IntEnum):
    """How an interface ended; the solved ones come first."""

    SOLVED = 0
    """From the zero-flux start (or the start given)."""
    SECOND_START = 1
    """From the temperature of the bulk liquid."""
    CONTINUATION = 2
    """Followed from the zero-flux state of the same liquid to the bulks asked for."""
    OTHER_BRANCH = 3
    """Solved, but on a branch that a fold separates from the zero-flux state: other solutions exist."""
    FAILED = 4
    """No solution found by any path."""
    UNSTABLE_LIQUID = 5
    """[Gamma] of the answer has an eigenvalue that is not positive: the liquid would split."""
    OUT_OF_RANGE = 6
    """The interface temperature lies outside the range of the property model."""


@dataclass(frozen=True)
class InterfaceDerivatives:
    """Derivatives of a converged interface by w = (y_1..y_n, T_V, x_1..x_n, T_L), implicit function theorem.

    dN (..., n, 2n+2); dE, dq_vapor_bulk, dT_I (..., 2n+2); dz (..., 2n+1, 2n+2): of all unknowns (N, u, T_I).
    By fractions they are mole-number derivatives at one mole in all, d/dg_j at sum g = 1: no column depends on the
    order of the components, and the chain rule through component flows, dy_i/dg_j = (delta_ij - y_i)/G, holds. The
    column of a component that cannot be in the phase is zero.
    """

    dN: Array
    dE: Array
    dq_vapor_bulk: Array
    dT_I: Array
    dz: Array


@dataclass(frozen=True)
class FilmState:
    """What the two films were computed with: bulk compositions (..., n), resistances K = 1/(c kappa), m2 s/mol, (...,
    n, n), [Gamma] (..., n-1, n-1) or None for the identity.
    """

    y: Array
    x: Array
    K_vapor: Array
    K_liquid: Array
    gamma_vapor: Array | None
    gamma_liquid: Array | None


@dataclass(frozen=True)
class InterfaceFlux(Shown):
    """Solution of the two-film interface. Fluxes positive from vapour to liquid, batch first.

    N : component fluxes, mol/(m2 s), (..., n). y_I, x_I : interface mole fractions, (..., n). T_I : K, (...).
    q_vapor_bulk, q_vapor_interface, q_liquid_interface, q_liquid_bulk : conduction at the four faces, W/m2, (...).
    energy_flux : E = q + sum N_i H_i, the same through both films, W/m2, (...).
    residual : largest scaled residual of film equations, sums and energy. equilibrium_residual : max |y_I - K x_I|.
    energy_residual : |E_V - E_L| relative to the sum of the absolute terms. iterations : Newton steps of the path that
    succeeded. status : `InterfaceStatus`. size : largest |A|_1 of the two films. NaN where nothing was found.
    error : on request, estimated max|dN|/max|N| of one [Gamma] for each film, (...), else None.
    u : the unknowns x_I (y_I of a non-condensing component), (..., n). derivatives : on request, else None.
    """

    N: Array
    y_I: Array
    x_I: Array
    T_I: Array
    q_vapor_bulk: Array
    q_vapor_interface: Array
    q_liquid_interface: Array
    q_liquid_bulk: Array
    energy_flux: Array
    residual: Array
    equilibrium_residual: Array
    energy_residual: Array
    iterations: NDArray[np.int64]
    status: NDArray[np.int64]
    size: Array
    u: Array
    names: tuple[str, ...]
    films: FilmState
    derivatives: InterfaceDerivatives | None = None
    error: Array | None = None

    @property
    def solved(self) -> NDArray[np.bool_]:
        """True where a solution was found, (...)."""
        return self.status <= InterfaceStatus.OTHER_BRANCH

    @cached_property
    def vapor_film(self) -> FilmFlux:
        """The vapour film, face 0 the bulk: profile, regime, entropy production. Its kappa is c kappa, its c_t one."""
        f = self.films
        return _film(self.N, f.y, self.y_I, f.K_vapor, f.gamma_vapor, self.status)

    @cached_property
    def liquid_film(self) -> FilmFlux:
        """The liquid film, face 0 the interface; as `vapor_film`."""
        f = self.films
        return _film(self.N, self.x_I, f.x, f.K_liquid, f.gamma_liquid, self.status)

    @cached_property
    def vapor_entropy_share(self) -> Array:
        """Share of the vapour film in the entropy production by diffusion, 0..1, (...); 0.5 where nothing diffuses.

        A film that a component leaves or enters at zero concentration produces infinitely much and takes all of it.
        """
        vapor, liquid = self.vapor_film.entropy_production, self.liquid_film.entropy_production
        with np.errstate(invalid="ignore", divide="ignore"):
            share = vapor / (vapor + liquid)
        share = np.where(np.isinf(vapor), np.where(np.isinf(liquid), 0.5, 1.0), share)
        return np.where((vapor == 0) & (liquid == 0), 0.5, share)

    def to_frame(self) -> pd.DataFrame:
        """One row an interface (batch axes flattened): fluxes, interface state, conduction, residuals, status."""
        import pandas as pd

        n = len(self.names)
        columns: dict[str, Array] = {}
        for label, value in (("N_{}_mol_m2_s", self.N), ("x_I_{}", self.x_I), ("y_I_{}", self.y_I)):
            flat = value.reshape(-1, n)
            columns |= {label.format(name): flat[:, i] for i, name in enumerate(self.names)}
        for label, scalar in (("T_I_K", self.T_I), ("q_vapor_bulk_W_m2", self.q_vapor_bulk),
                              ("q_vapor_interface_W_m2", self.q_vapor_interface),
                              ("q_liquid_interface_W_m2", self.q_liquid_interface),
                              ("q_liquid_bulk_W_m2", self.q_liquid_bulk), ("energy_flux_W_m2", self.energy_flux),
                              ("vapor_entropy_share", self.vapor_entropy_share), ("residual", self.residual)):
            columns[label] = scalar.reshape(-1)
        frame = pd.DataFrame(columns)
        frame["iterations"] = self.iterations.reshape(-1)
        frame["status"] = [InterfaceStatus(int(s)).name.lower() for s in self.status.reshape(-1)]
        return frame


def _film(N: Array, x0: Array, xd: Array, K: Array, gamma: Array | None, status: NDArray[np.int64]) -> FilmFlux:
    n = N.shape[-1]
    nu, s = TotalFlux(np.where(np.isfinite(N.sum(-1)), N.sum(-1), 0.0)).linear_form(n)
    off = ~np.eye(n, dtype=bool)
    kappa = np.where(off, 1.0 / np.where(off, K, 1.0), 1.0)
    return FilmFlux(N, x0, xd, kappa, np.ones(N.shape[:-1]), nu, s, gamma, np.zeros(N.shape[:-1], np.int64),
                    np.asarray(status, np.int8))
