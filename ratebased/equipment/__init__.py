"""Contactors: the protocol and its implementations."""
from .fixed import FixedCoefficients
from .protocol import Contactor, ContactState, Hydraulics, TransferCoefficients
from .sections import Hardware, Section, by_contactor
from .state import contact_state

__all__ = [
    "ContactState", "Contactor", "FixedCoefficients", "Hardware", "Hydraulics", "Section", "TransferCoefficients",
    "by_contactor", "contact_state",
]
