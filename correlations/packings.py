"""Generic packings: form, material, size, and the constants the correlations take, each with source and confidence."""
from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType
from typing import Any

from .errors import InputError
from .record import Record
from .validity import Confidence


@dataclass(frozen=True)
class Field:
    """A constant of a packing: SI value, key into the bibliography, confidence."""

    value: float
    source: str
    confidence: Confidence


@dataclass(frozen=True)
class Packing:
    """A packing by form, material and size, with what is published about it.

    kind : "random" or "structured".
    fields : argument name of the correlations -> `Field`; what is not published is not there.
    """

    kind: str
    form: str
    material: str
    size: str
    fields: Mapping[str, Field]

    @property
    def name(self) -> str:
        """Form, material and size."""
        return f"{self.form}, {self.material}, {self.size}"

    def __getitem__(self, field: str) -> float:
        """Value of a field; `InputError` where the table has none."""
        if field not in self.fields:
            raise InputError(f"{field}: the table has no value for {self.name}; known: {sorted(self.fields)}")
        return self.fields[field].value

    def arguments(self, function: Callable[..., Any]) -> dict[str, float]:
        """Those arguments of a correlation that the table knows for this packing."""
        record: Record = function.record  # type: ignore[attr-defined]
        return {name: self.fields[name].value for name in record.parameters if name in self.fields}


def _field(entry: Mapping[str, Any]) -> Field:
    return Field(float(entry["value"]), entry["source"], Confidence[entry["confidence"].upper()])


@cache
def critical_surface_tensions() -> Mapping[str, Field]:
    """Critical surface tension by material, N/m."""
    return MappingProxyType({name: _field(entry) for name, entry in _table()["critical_surface_tension"].items()})


@cache
def packings() -> Mapping[str, Packing]:
    """All packings of the table by name, as "slotted ring, metal, 50 mm"."""
    tensions = critical_surface_tensions()
    found: dict[str, Packing] = {}
    for row in _table()["packing"]:
        fields = {name: _field(entry) for name, entry in row.items() if isinstance(entry, dict)}
        if row["material"] in tensions:
            fields.setdefault("critical_surface_tension", tensions[row["material"]])
        packing = Packing(row["kind"], row["form"], row["material"], row["size"], MappingProxyType(fields))
        found[packing.name] = packing
    return MappingProxyType(found)


def packing(name: str) -> Packing:
    """The packing of that name; an `InputError` lists the names where there is none."""
    if name not in packings():
        raise InputError(f"name: no packing {name!r}; the table has {sorted(packings())}")
    return packings()[name]


def _table() -> dict[str, Any]:
    import tomllib  # here, because most programs that import the correlations never read the table
    from importlib.resources import files

    return tomllib.loads(files(__package__).joinpath("packings.toml").read_text(encoding="utf-8"))
