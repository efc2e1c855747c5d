"""Contactors: the protocol and its implementations."""
from .protocol import Contactor, ContactState, Hydraulics, TransferCoefficients

__all__ = ["ContactState", "Contactor", "Hydraulics", "TransferCoefficients"]
