"""Contactors: the protocol and its implementations."""
from .fixed import FixedCoefficients
from .packings import BilletConstants, BilletSchultes, BravoFair, Onda, RandomPacking
from .protocol import LIMITS, Contactor, ContactState, Hydraulics, TransferCoefficients
from .sections import Hardware, Section, by_contactor, stage_coefficients
from .state import contact_state
from .structured import BravoRochaFair, RochaBravoFair, StructuredPacking, TsaiArea
from .tray_methods import AIChEBubbleCap, AIChESieve, ChanFair, ChenChuang, Zuiderweg
from .trays import BubbleCapTray, SieveTray, ValveTray

__all__ = [
    "LIMITS", "AIChEBubbleCap", "AIChESieve", "BilletConstants", "BilletSchultes", "BravoFair", "BravoRochaFair",
    "BubbleCapTray", "ChanFair", "ChenChuang", "ContactState", "Contactor", "FixedCoefficients", "Hardware",
    "Hydraulics", "Onda", "RandomPacking", "RochaBravoFair", "Section", "SieveTray", "StructuredPacking",
    "TransferCoefficients", "TsaiArea", "ValveTray", "Zuiderweg", "by_contactor", "contact_state",
    "stage_coefficients",
]
