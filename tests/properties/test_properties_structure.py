"""Rings that carry a volume decrement, from the structure."""
import pytest

from correlations.gas_diffusivity import diffusion_volume
from ratebased.properties.structure import counted_rings


@pytest.mark.parametrize("smiles, rings", [
    ("CC(=O)C", 0), ("C1=CC=CC=C1", 1), ("CC1=CC=CC=C1C", 1), ("c1ccccc1", 1), ("C1CCCCC1", 0), ("C1=CC=NC=C1", 1),
    ("C1CCOC1", 1), ("C1=COC(=C1)C=O", 1), ("C1=CC=C2C=CC=CC2=C1", 2), ("C1=CC=C(C=C1)C2=CC=CC=C2", 2),
    ("[O-][N+](=O)C1=CC=CC=C1", 1), ("C1CC=CCC1", 0), ("C1=CSC=C1", 1), ("ClC1=CC=CC=C1", 1), ("O", 0),
    ("C(C(F)(F)F)Br", 0)])
def test_rings(smiles, rings):
    assert counted_rings(smiles) == rings


def test_volumes_of_ring_compounds():
    """Benzene 90.96, thiophene 77.44 cm3/mol: Fuller, Ensley & Giddings (1969) increments, as used in textbooks."""
    assert diffusion_volume({"C": 6, "H": 6}, aromatic_rings=counted_rings("C1=CC=CC=C1")) == pytest.approx(90.96e-6)
    assert diffusion_volume({"C": 4, "H": 4, "S": 1},
                            aromatic_rings=counted_rings("C1=CSC=C1")) == pytest.approx(77.44e-6)
