"""Mass transfer through one film: exact, linearised, effective, explicit and numerical methods."""
from .approximate import (
    effective,
    explicit_burghardt_krupiczka,
    explicit_krishna,
    explicit_taylor_smith,
    linearized,
)
from .collocation import numerical
from .methods import krishna_standart
from .multistart import solutions
from .problem import MESSAGES, FilmStatus
from .result import FilmDerivatives, FilmFlux

__all__ = [
    "MESSAGES",
    "FilmDerivatives",
    "FilmFlux",
    "FilmStatus",
    "effective",
    "explicit_burghardt_krupiczka",
    "explicit_krishna",
    "explicit_taylor_smith",
    "krishna_standart",
    "linearized",
    "numerical",
    "solutions",
]
