"""Two films and the interface between them: fluxes, interface state, derivatives."""
from .blocks import InterfaceBlocks, interface_blocks, interface_start
from .flux import interface_flux
from .records import Bulk, InterfaceDerivatives, InterfaceFlux, InterfaceStatus

__all__ = ["Bulk", "InterfaceBlocks", "InterfaceDerivatives", "InterfaceFlux", "InterfaceStatus", "interface_blocks",
           "interface_flux", "interface_start"]
