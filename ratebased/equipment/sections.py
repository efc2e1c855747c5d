"""Which contactor stands where: sections of a column by stage number."""
from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..errors import InputError
from .protocol import Contactor, ContactState, TransferCoefficients


@dataclass(frozen=True)
class Section:
    """Stages `first` to `last`, both included, hold `contactor`."""

    first: int
    last: int
    contactor: Contactor


Hardware = Contactor | Sequence[Section]
"""One contactor for every contact stage, or sections that together cover them."""


def by_contactor(hardware: Hardware, stages: NDArray[np.int64]) -> Iterator[tuple[Contactor, NDArray[np.int64]]]:
    """(contactor, positions in `stages`) for each section.

    Raises `InputError` for a stage that no section or more than one section covers.
    """
    if isinstance(hardware, Contactor):
        yield hardware, np.arange(stages.size)
        return
    covered = np.zeros(stages.size, int)
    found = []
    for section in hardware:
        inside = (stages >= section.first) & (stages <= section.last)
        covered += inside
        if inside.any():
            found.append((section.contactor, np.flatnonzero(inside)))
    for count, text in ((0, "no section of the hardware covers it"), (2, "more than one section covers it")):
        bad = np.flatnonzero(covered == count if count == 0 else covered >= count)
        if bad.size:
            raise InputError(f"hardware, stage {stages[bad[0]]}: {text}")
    yield from found


def stage_coefficients(contactor: Contactor, state: ContactState, stages: NDArray[np.integer]) -> TransferCoefficients:
    """`contactor.transfer(state)` of the stages with the numbers `stages`, (...); an `InputError` names the stage."""
    try:
        return contactor.transfer(state)
    except InputError as error:
        if not error.entry:
            raise
        raise InputError(f"stage {stages[error.entry[0]]}: {error}") from error
