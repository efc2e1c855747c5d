"""Activity models: numpy kernels over any batch of stages, with derivatives by temperature and mole numbers."""
from .dissolved import DissolvedGases
from .ideal import Ideal
from .protocol import ActivityModel
from .unifac import Unifac

__all__ = ["ActivityModel", "DissolvedGases", "Ideal", "Unifac"]
