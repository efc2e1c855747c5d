"""A debutanizer rated with K-values of one's own: any object with the methods of `PropertyModel` will do.

The plant keeps fitted vapour pressures, latent heats and heat capacities of its four components and constant transport
properties. Wrapped in a class with the required methods, and nothing optional, they run the interface, both column
models and the efficiency table; no property package is imported. Numbers and scenario are invented for the example.
"""
import numpy as np

from ratebased.column import (
    Column,
    DistillateRate,
    Feed,
    Reboiler,
    RefluxRatio,
    TotalCondenser,
    solve_equilibrium,
    solve_ratebased,
)
from ratebased.efficiency import efficiency_table
from ratebased.equipment import FixedCoefficients
from ratebased.interface import Bulk, interface_flux
from ratebased.properties import LiquidTransport, VaporTransport, bubble_point
from ratebased.stage_profile import ProfileFeed

R = 8.314462618


class PlantProperties:
    """K_i = exp(a_i - b_i/T)/P with the plant's constants; ideal liquid, ideal gas."""

    names = ("isobutane", "n-butane", "isopentane", "n-pentane")
    molar_mass = np.array([58.1, 58.1, 72.2, 72.2]) * 1e-3
    condensable = np.ones(4, bool)
    volatile = np.ones(4, bool)

    boiling_point = np.array([261.4, 272.7, 301.0, 309.2])            # K at 1 atm
    latent = np.array([21.3, 22.4, 24.7, 25.8]) * 1e3                 # J/mol
    cp_vapor = np.array([97.0, 99.0, 120.0, 121.0])                   # J/(mol K)
    cp_liquid = np.array([141.0, 140.0, 165.0, 167.0])

    def k_value(self, T, P, x, y):
        b = self.latent / R
        K = 101325.0 * np.exp(b / self.boiling_point - b / np.asarray(T)[..., None]) / np.asarray(P)[..., None]
        return np.broadcast_to(K, np.broadcast_shapes(K.shape, np.shape(x))).copy()

    def thermodynamic_factor(self, T, P, x):
        return np.broadcast_to(np.eye(3), (*np.shape(x)[:-1], 3, 3)).copy()

    def vapor_enthalpy(self, T, P, y):
        return self.latent + self.cp_vapor * (np.asarray(T)[..., None] - self.boiling_point)

    def liquid_enthalpy(self, T, P, x):
        return self.cp_liquid * (np.asarray(T)[..., None] - self.boiling_point)

    def vapor_transport(self, T, P, y):
        shape = np.broadcast_shapes(np.shape(T), np.shape(P), np.shape(y)[:-1])
        density = np.broadcast_to(np.asarray(P) / (R * np.asarray(T)), shape)
        D = 4.0e-6 * (101325.0 / np.asarray(P)) * (np.asarray(T) / 300.0) ** 1.75
        return VaporTransport(density, density * (y @ self.molar_mass), np.full(shape, 8.5e-6),
                              np.broadcast_to(y @ self.cp_vapor, shape), np.full(shape, 0.019),
                              np.broadcast_to(D, shape)[..., None, None] * np.ones((4, 4)))

    def liquid_transport(self, T, P, x):
        shape = np.broadcast_shapes(np.shape(T), np.shape(P), np.shape(x)[:-1])
        density = np.full(shape, 8.6e3)
        return LiquidTransport(density, density * (x @ self.molar_mass), np.full(shape, 1.6e-4),
                               np.broadcast_to(x @ self.cp_liquid, shape), np.full(shape, 0.10),
                               np.full((*shape, 4, 4), 6.0e-9), np.full(shape, 0.011))


plant = PlantProperties()
P = 5.0e5
column = Column(16, [Feed(8, [15.0, 30.0, 25.0, 30.0], vapor_fraction=0.0)], P, condenser=TotalCondenser(),
                reboiler=Reboiler(), specifications=[RefluxRatio(1.8), DistillateRate(45.0)])
tray = FixedCoefficients(0.020, 2.5e-4, 60.0, h_vapor=70.0, h_liquid=900.0)

x = np.array([0.15, 0.30, 0.25, 0.30])
T_boil, y_boil = bubble_point(plant, P, x)
one = interface_flux(Bulk([0.10, 0.25, 0.30, 0.35], T_boil + 4.0, 0.02, 70.0, P / (R * T_boil)),
                     Bulk(x, T_boil, 2.5e-4, 900.0, 8.6e3), plant, P)
equilibrium = solve_equilibrium(column, plant)
rates = solve_ratebased(column, plant, tray, start=equilibrium)
table = efficiency_table(rates.to_frame(), tray, plant, feeds=(ProfileFeed(8, "liquid", 100.0, x, T_boil),))

if __name__ == "__main__":
    print(f"bubble point of the feed: {T_boil:.2f} K, y = {y_boil.round(4)}")
    print(f"one interface: N = {(one.N * 1e3).round(4)} mmol/(m2 s) into the liquid, T_I = {one.T_I:.2f} K")
    for label, profile in (("equilibrium stages", equilibrium), ("rates", rates)):
        print(f"{label:20s} n-pentane in the distillate {profile.x[0, 3]:.5f}, n-butane in the bottoms "
              f"{profile.x[-1, 1]:.5f}")
    columns = ["stage", "T_K", *(f"E_{name}" for name in plant.names)]
    print(table.to_frame()[columns].round(3).to_string(index=False))
