"""Any object with the required methods runs the whole chain, and the data library is never imported for it."""
import subprocess
import sys
from pathlib import Path

EXAMPLE = Path(__file__).parents[2] / "examples" / "own_properties" / "own_k_values.py"
SCRIPT = f"""
import runpy, sys
import numpy as np
from ratebased.properties import PropertyModel
names = runpy.run_path({str(EXAMPLE)!r})
assert not [m for m in ("thermo", "chemicals") if m in sys.modules]
plant, one, equilibrium, rates = (names[key] for key in ("plant", "one", "equilibrium", "rates"))
assert isinstance(plant, PropertyModel) and not hasattr(plant, "k_value_derivatives")
# closed form: sum x exp(b/Tb - b/T) = P/1 atm
T, x, b = names["T_boil"], names["x"], plant.latent / 8.314462618
assert abs((x * np.exp(b / plant.boiling_point - b / T)).sum() * 101325.0 / names["P"] - 1) < 1e-10
assert np.isfinite(one.N).all() and one.N[0] < 0 < one.N[3]   # the lightest leaves the liquid, the heaviest enters it
for profile in (equilibrium, rates):
    assert abs(profile.x.sum(1) - 1).max() < 1e-9 and np.isfinite(profile.T_L).all()
assert equilibrium.x[0, 3] < rates.x[0, 3] < 0.3              # fewer effective stages with finite rates
frame = names["table"].to_frame()
E = frame[[f"E_{{name}}" for name in plant.names]].to_numpy(float)
assert len(frame) == 14 and 0 < np.nanmin(E) and np.nanmax(E) < 1.5
print("done")
"""


def test_own_k_values_from_interface_to_efficiency_table():
    result = subprocess.run([sys.executable, "-W", "error", "-c", SCRIPT], capture_output=True, text=True)
    assert result.stdout.strip().endswith("done"), result.stderr
