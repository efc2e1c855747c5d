"""Two films and the interface between them: fluxes, interface state, derivatives."""
from .blocks import InterfaceBlocks, interface_blocks, interface_start
from .flux import interface_flux
from .records import Bulk, FilmState, InterfaceDerivatives, InterfaceFlux, InterfaceStatus
from .reverse import bulks_from_interface
from .search import solutions

__all__ = ["Bulk", "FilmState", "InterfaceBlocks", "InterfaceDerivatives", "InterfaceFlux", "InterfaceStatus",
           "bulks_from_interface", "interface_blocks", "interface_flux", "interface_start", "solutions"]
