"""Property models: the protocol, its implementations, and what can be computed from any of them."""
from .constant_volatility import ConstantVolatility
from .cubic_properties import CubicProperties
from .henry import HenryConstant
from .protocol import KDerivatives, LiquidTransport, PropertyModel, VaporTransport
from .saturation import bubble_point, dew_point, smallest_gamma_eigenvalue
from .thermo_properties import ThermoProperties

__all__ = ["ConstantVolatility", "CubicProperties", "HenryConstant", "KDerivatives", "LiquidTransport", "PropertyModel",
           "ThermoProperties", "VaporTransport", "bubble_point", "dew_point", "smallest_gamma_eigenvalue"]
