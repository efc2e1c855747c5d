"""Contactors: the protocol and its implementations."""
from .fixed import FixedCoefficients
from .packings import BilletConstants, BilletSchultes, BravoFair, Onda, RandomPacking
from .protocol import Contactor, ContactState, Hydraulics, TransferCoefficients
from .sections import Hardware, Section, by_contactor
from .state import contact_state
from .tray_methods import AIChESieve, ChanFair, ChenChuang, Zuiderweg
from .trays import SieveTray

__all__ = [
    "AIChESieve", "BilletConstants", "BilletSchultes", "BravoFair", "ChanFair", "ChenChuang", "ContactState",
    "Contactor", "FixedCoefficients", "Hardware", "Hydraulics", "Onda", "RandomPacking", "Section", "SieveTray",
    "TransferCoefficients", "Zuiderweg", "by_contactor", "contact_state",
]
