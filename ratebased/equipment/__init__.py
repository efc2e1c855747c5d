"""Contactors: the protocol and its implementations."""
from .fixed import FixedCoefficients
from .protocol import Contactor, ContactState, Hydraulics, TransferCoefficients
from .state import contact_state

__all__ = ["ContactState", "Contactor", "FixedCoefficients", "Hydraulics", "TransferCoefficients", "contact_state"]
