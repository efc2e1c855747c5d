"""Rings in a molecule written as a SMILES string: what an additive-volume method needs beyond the formula."""
from __future__ import annotations

import re

_TOKEN = re.compile(r"\[[^\]]*\]|Br|Cl|[BCNOPSFI]|[bcnops]|%\d\d|[-=#:/\\().\d]")


def counted_rings(smiles: str) -> int:
    """Number of rings that are aromatic or contain an atom other than carbon.

    These are the rings with a volume decrement in the method of Fuller et al.; a saturated carbon ring has none.
    A ring system counts once per ring it is made of. A ring system is aromatic when half its bonds or nearly so are
    double (alternating), or its atoms are written in lower case.
    """
    atoms, bonds = _graph(smiles)
    ring_bonds = [bond for bond in bonds if _connected_without(bonds, bond)]
    total = 0
    remaining = {atom for a, b, _ in ring_bonds for atom in (a, b)}
    while remaining:
        system = {remaining.pop()}
        while True:
            reached = {atom for a, b, _ in ring_bonds if a in system or b in system for atom in (a, b)}
            if reached <= system:
                break
            system |= reached
        remaining -= system
        inside = [bond for bond in ring_bonds if bond[0] in system]
        hetero = any(atoms[atom].strip("[]H+-0123456789").upper() != "C" for atom in system)
        lower = all(atoms[atom].strip("[]")[:1].islower() for atom in system)
        alternating = 2 * sum(double for _, _, double in inside) == len(system)
        if hetero or lower or alternating:
            total += len(inside) - len(system) + 1
    return total


def _graph(smiles: str) -> tuple[list[str], list[tuple[int, int, bool]]]:
    atoms: list[str] = []
    bonds: list[tuple[int, int, bool]] = []
    open_rings: dict[str, tuple[int, bool]] = {}
    branch: list[int] = []
    last, double = -1, False
    for token in _TOKEN.findall(smiles):
        if token == "(":
            branch.append(last)
        elif token == ")":
            last = branch.pop()
        elif token == "=":
            double = True
        elif token.lstrip("%").isdigit():
            label = token.lstrip("%")
            if label in open_rings:
                start, was_double = open_rings.pop(label)
                bonds.append((start, last, double or was_double))
            else:
                open_rings[label] = (last, double)
            double = False
        elif token == ".":
            last = -1
        elif token in "-#:/\\":
            continue
        else:
            atoms.append(token)
            if last >= 0:
                bonds.append((last, len(atoms) - 1, double))
            last, double = len(atoms) - 1, False
    return atoms, bonds


def _connected_without(bonds: list[tuple[int, int, bool]], removed: tuple[int, int, bool]) -> bool:
    """Whether the ends of a bond stay connected without it: then the bond is part of a ring."""
    others = [bond for bond in bonds if bond is not removed]
    reached = {removed[0]}
    while True:
        more = {atom for a, b, _ in others if a in reached or b in reached for atom in (a, b)}
        if removed[1] in more:
            return True
        if more <= reached:
            return False
        reached |= more
