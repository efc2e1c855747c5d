"""Errors and the one warning category of the correlations."""
from __future__ import annotations


class InputError(ValueError):
    """Bad input: the message names the argument, the entry and the value."""


class NoPhysicalRootError(ArithmeticError):
    """The equations of a correlation have no physical root at the conditions given (a packed bed beyond flooding)."""


class OutOfRangeWarning(UserWarning):
    """A correlation was called outside its range; the message names the variable and by how much."""
