"""Case files: the words of a TOML file turned into the objects of the library."""
from .column import ColumnCase, read_column_case
from .flux import FilmCase, InterfaceCase, read_flux_case
from .hardware import hardware_from
from .mixture import properties_from
from .rate import RateCase, read_rate_case

__all__ = ["ColumnCase", "FilmCase", "InterfaceCase", "RateCase", "hardware_from", "properties_from",
           "read_column_case", "read_flux_case", "read_rate_case"]
