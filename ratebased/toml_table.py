"""Reading a parsed TOML table key by key: every error names the file, the key and the value, unknown keys included."""
from __future__ import annotations

import difflib
import math
import tomllib
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .errors import InputError

_REQUIRED = object()
LARGEST = 1e20
"""Size beyond which no figure of a case file makes sense; positive ones are above its inverse."""


class TomlTable:
    """One table of a file. Each accessor takes a key away; `finish` complains of those that nothing asked for."""

    def __init__(self, data: Mapping[str, Any], where: str) -> None:
        self.data, self.where, self.asked, self.known = dict(data), where, set[str](), set[str]()

    @classmethod
    def load(cls, path: Path) -> TomlTable:
        """The top table of a file."""
        try:
            with path.open("rb") as file:
                return cls(tomllib.load(file), str(path))
        except FileNotFoundError as error:
            raise InputError(f"{path}: no such file") from error
        except IsADirectoryError as error:
            raise InputError(f"{path}: a folder, expected a TOML file") from error
        except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
            raise InputError(f"{path}: not a TOML file: {error}") from error
        except RecursionError as error:
            raise InputError(f"{path}: not a TOML file: nested too deeply") from error
        except (OSError, ValueError) as error:
            raise InputError(f"{path}: cannot be read: {error}") from error

    def fail(self, key: str, why: str) -> InputError:
        """The error to raise for a key."""
        return InputError(f"{self.where}: {key} = {self.data.get(key)!r}: {why}")

    def has(self, key: str) -> bool:
        """True where the key is given; it is known then, though not yet asked for."""
        self.known.add(key)
        return key in self.data

    def take(self, key: str, default: Any = _REQUIRED) -> Any:
        """The value as it is."""
        self.asked.add(key)
        if key not in self.data:
            if default is _REQUIRED:
                raise InputError(f"{self.where}: key {key} is missing{self._hint(key)}")
            return default
        return self.data[key]

    def _hint(self, key: str) -> str:
        near = difflib.get_close_matches(key, [k for k in self.data if k not in self.asked], 1)
        return f" (found {near[0]!r}: is that it?)" if near else ""

    def text(self, key: str, default: Any = _REQUIRED) -> str:
        """A string."""
        value = self.take(key, default)
        if not isinstance(value, str):
            raise self.fail(key, "expected a text in quotes")
        return value

    def choice(self, key: str, allowed: Mapping[str, Any], default: Any = _REQUIRED) -> Any:
        """What one of the allowed words stands for."""
        word = self.text(key, default)
        if word not in allowed:
            near = difflib.get_close_matches(word, allowed, 1)
            hint = f"; did you mean {near[0]!r}?" if near else ""
            raise self.fail(key, f"expected one of {', '.join(repr(a) for a in allowed)}{hint}")
        return allowed[word]

    def flag(self, key: str, default: Any = _REQUIRED) -> bool:
        """true or false."""
        value = self.take(key, default)
        if not isinstance(value, bool):
            raise self.fail(key, "expected true or false")
        return value

    def number(self, key: str, default: Any = _REQUIRED, *, above: float | None = None,
               most: float | None = None) -> float:
        """A finite number, above `above` and at most `most`."""
        value = self.take(key, default)
        if not _finite(value):
            raise self.fail(key, "expected a finite number")
        if abs(value) > LARGEST or (above is not None and 0 < value - above < 1.0 / LARGEST):
            raise self.fail(key, f"no such size in SI units (expected {1.0 / LARGEST:g} to {LARGEST:g})")
        if above is not None and not value > above:
            raise self.fail(key, f"expected a number above {above:g}")
        if most is not None and value > most:
            raise self.fail(key, f"expected a number of at most {most:g}")
        return float(value)

    def optional_number(self, key: str, *, above: float | None = None, most: float | None = None) -> float | None:
        """A number, or None where the key is absent."""
        self.asked.add(key)
        return self.number(key, above=above, most=most) if key in self.data else None

    def whole(self, key: str, default: Any = _REQUIRED) -> int:
        """A whole number."""
        value = self.take(key, default)
        if isinstance(value, bool) or not isinstance(value, int):
            raise self.fail(key, "expected a whole number")
        return value

    def numbers(self, key: str, default: Any = _REQUIRED) -> list[float]:
        """A list of finite numbers."""
        value = self.take(key, default)
        if not isinstance(value, list) or not all(_finite(item) for item in value):
            raise self.fail(key, "expected a list of finite numbers")
        return [float(item) for item in value]

    def span(self, key: str) -> tuple[float, float]:
        """[low, high], two positive numbers in rising order."""
        value = self.take(key)
        if not (isinstance(value, list) and len(value) == 2 and all(_finite(v) for v in value)
                and 0 < value[0] < value[1]):
            raise self.fail(key, "expected [low, high], two positive numbers in rising order")
        return float(value[0]), float(value[1])

    def by_component(self, key: str, names: Sequence[str], default: Any = _REQUIRED) -> NDArray[np.float64]:
        """One number for each component, (n,): a number for all, or a table with every name."""
        value = self.take(key, default)
        if _finite(value):
            return np.full(len(names), float(value))
        if not isinstance(value, dict):
            raise self.fail(key, "expected one number, or one for each component as {water = 0.9, ethanol = 0.1}")
        table = TomlTable(value, f"{self.where}: {key}")
        numbers = np.array([table.number(name) for name in names])
        table.finish()
        return numbers

    def by_pair(self, key: str, names: Sequence[str], default: Any = _REQUIRED) -> NDArray[np.float64]:
        """Positive numbers for pairs, (n, n): a number for all, or a table with every pair as "water / ethanol".

        The diagonal is one: it means nothing.
        """
        value = self.take(key, default)
        n = len(names)
        matrix = np.ones((n, n))
        if _finite(value):
            matrix[:] = self.number(key, default, above=0.0)
            np.fill_diagonal(matrix, 1.0)
            return matrix
        if not isinstance(value, dict):
            raise self.fail(key, 'expected one number, or one for each pair as {"water / ethanol" = 1.2e-5}')
        table = TomlTable(value, f"{self.where}: {key}")
        for i in range(n):
            for j in range(i):
                words = (f"{names[j]} / {names[i]}", f"{names[i]} / {names[j]}")
                given = [word for word in words if table.has(word)]
                if len(given) > 1:
                    raise table.fail(words[1], f"the pair is given twice, also as {words[0]!r}")
                matrix[i, j] = matrix[j, i] = table.number(given[0] if given else words[0], above=0.0)
        table.finish()
        return matrix

    def texts(self, key: str, default: Any = _REQUIRED) -> list[str]:
        """A list of strings."""
        value = self.take(key, default)
        if not isinstance(value, list) or not all(isinstance(item, str) for item in value):
            raise self.fail(key, "expected a list of texts in quotes")
        return list(value)

    def stages(self, key: str) -> tuple[int, int]:
        """[first, last] stage numbers."""
        value = self.take(key)
        whole = isinstance(value, list) and len(value) == 2 and all(
            isinstance(item, int) and not isinstance(item, bool) for item in value)
        if not whole or value[0] > value[1]:
            raise self.fail(key, "expected [first, last], two stage numbers")
        return value[0], value[1]

    def composition(self, key: str, names: Sequence[str]) -> NDArray[np.float64]:
        """Mole fractions by component name, (n,); components not named are absent."""
        value = self.take(key)
        if not isinstance(value, dict):
            raise self.fail(key, "expected mole fractions by name, as {water = 0.9, ethanol = 0.1}")
        table = TomlTable(value, f"{self.where}: {key}")
        fractions = np.array([table.number(name, 0.0, most=1.0) for name in names])
        table.finish()
        if (fractions < 0).any() or abs(fractions.sum() - 1.0) > 1e-6:
            raise self.fail(key, f"mole fractions must not be negative and must sum to one (sum {fractions.sum():.8g})")
        return np.asarray(fractions / fractions.sum())

    def table(self, key: str, *, required: bool = True) -> TomlTable:
        """A table inside this one; an empty one where it is absent and not required."""
        value = self.take(key) if required else self.take(key, {})
        if not isinstance(value, dict):
            raise self.fail(key, f"expected a table [{key}]")
        return TomlTable(value, f"{self.where} [{key}]")

    def tables(self, key: str) -> list[TomlTable]:
        """The tables [[key]], none where absent."""
        value = self.take(key, [])
        if not isinstance(value, list) or not all(isinstance(item, dict) for item in value):
            raise self.fail(key, f"expected tables [[{key}]]")
        return [TomlTable(item, f"{self.where} [[{key}]] {number}") for number, item in enumerate(value, 1)]

    def finish(self) -> None:
        """Raise for the first key that nothing asked for, with the nearest known one."""
        for key in self.data:
            if key not in self.asked:
                known = sorted(self.asked | self.known)
                near = difflib.get_close_matches(key, known, 1)
                hint = f"; did you mean {near[0]!r}?" if near else f"; known keys: {', '.join(known)}"
                raise InputError(f"{self.where}: unknown key {key!r}{hint}")


def _finite(value: object) -> bool:
    """True for a number that is finite as a float."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        return False
    try:
        return math.isfinite(float(value))
    except OverflowError:
        return False
