"""Activity models: numpy kernels over any batch of stages, with derivatives by temperature and mole numbers."""
from .dissolved import DissolvedGases
from .ideal import Ideal
from .nrtl import Nrtl
from .protocol import ActivityModel, ln_gamma_and_derivatives
from .unifac import Unifac
from .uniquac import Uniquac
from .wilson import Wilson

__all__ = ["ActivityModel", "DissolvedGases", "Ideal", "Nrtl", "Unifac", "Uniquac", "Wilson",
           "ln_gamma_and_derivatives"]
