"""Property models: the protocol and its implementations."""
from .constant_volatility import ConstantVolatility
from .protocol import KDerivatives, LiquidTransport, PropertyModel, VaporTransport

__all__ = ["ConstantVolatility", "KDerivatives", "LiquidTransport", "PropertyModel", "VaporTransport"]
