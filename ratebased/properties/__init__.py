"""Property models: the protocol, its implementations, and what can be computed from any of them."""
from .constant_volatility import ConstantVolatility
from .protocol import KDerivatives, LiquidTransport, PropertyModel, VaporTransport
from .saturation import bubble_point, dew_point, smallest_gamma_eigenvalue

__all__ = ["ConstantVolatility", "KDerivatives", "LiquidTransport", "PropertyModel", "VaporTransport", "bubble_point",
           "dew_point", "smallest_gamma_eigenvalue"]
