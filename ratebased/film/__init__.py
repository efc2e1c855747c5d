"""Mass transfer through one film: exact, linearised, effective, explicit and numerical methods."""
from .methods import krishna_standart
from .problem import MESSAGES, FilmStatus
from .result import FilmDerivatives, FilmFlux

__all__ = ["MESSAGES", "FilmDerivatives", "FilmFlux", "FilmStatus", "krishna_standart"]
