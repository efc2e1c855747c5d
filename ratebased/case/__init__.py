"""Case files: the words of a TOML file turned into the objects of the library."""
from .hardware import hardware_from
from .mixture import properties_from
from .rate import RateCase, read_rate_case

__all__ = ["RateCase", "hardware_from", "properties_from", "read_rate_case"]
