"""Published empirical correlations for diffusivities, packings and trays: pure functions of arrays.

Modules by what is predicted; a function is named by its authors: `packing_area.onda`, `tray_limits.fair_flooding`.
Every public correlation carries a `record` (what it predicts, for what, range, scatter, source, confidence) and warns
`OutOfRangeWarning` outside its range; `catalogue()` lists all records. Arguments are named, with unit and domain, in
`glossary`; the docstrings are completed from it and from the record.
"""
from __future__ import annotations

from .catalogue import catalogue
from .errors import InputError, NoPhysicalRootError, OutOfRangeWarning
from .packings import Packing, packing, packings
from .record import Correlation, Record
from .validity import Confidence, Range, Validity

__all__ = ["Confidence", "Correlation", "InputError", "NoPhysicalRootError", "OutOfRangeWarning", "Packing", "Range",
           "Record", "Validity", "catalogue", "packing", "packings"]
