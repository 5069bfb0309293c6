"""What the nodes get of the loads of one case, and the reading of chords and bounded numbers."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.chains import chain_named
from sizing.brief.findings import Findings, KeyPath, Quantities, shown
from sizing.brief.model import StatedLoad
from sizing.brief.nodes_and_supports import NodeTable
from sizing.brief.stated_loads import number_with_unit
from sizing.units import Kind

FloatArray = NDArray[np.float64]


@dataclass(kw_only=True)
class SpreadLoads:
    """What the nodes get, and a row for each load as stated. ``good``: all could be read."""

    nodal: dict[int, FloatArray] = field(default_factory=dict)
    stated: list[StatedLoad] = field(default_factory=list)
    good: bool = True

    def add(self, node: int, force: FloatArray) -> None:
        """Add a force in N at a node."""
        self.nodal[node] = self.nodal[node] + force if node in self.nodal else force

    def state(self, text: str, given: FloatArray, applied: FloatArray) -> None:
        """Add the row of one load: its words, its resultant, and what reached the nodes."""
        self.stated.append(
            StatedLoad(text=text, given=tuple(given.tolist()), applied=tuple(applied.tolist()))
        )


@dataclass(frozen=True, kw_only=True)
class LoadReader:
    """What loads are read with: the nodes, where mistakes go, and the brief's units."""

    nodes: NodeTable
    findings: Findings
    quantities: Quantities

    def position(self, node: int) -> FloatArray:
        """Return the coordinates of a node in m."""
        return np.array(self.nodes.nodes[node].position)

    def panel(self, a: int, b: int) -> str:
        """Return the name of the panel between two nodes."""
        return f"{self.nodes.nodes[a].name}-{self.nodes.nodes[b].name}"

    def chain(self, path: KeyPath, text: str) -> list[int] | None:
        """Return the nodes of a chord; None, with the mistake recorded, when it is none."""
        names = chain_named(path, text, self.nodes.names, self.findings)
        if names is None or any(name not in self.nodes.names.index for name in names):
            return None
        return [self.nodes.names.index[name] for name in names]

    def bounded(self, path: KeyPath, value: Any, kind: Kind, greatest: float) -> float | None:
        """Return a quantity of at most ``greatest`` either way, in SI units."""
        number = self.quantities.read(path, value, kind)
        if number is not None and abs(number) > greatest:
            most = number_with_unit(greatest, kind, self.quantities.units)
            self.findings.add(
                path,
                found=shown(value),
                expected=f"at most {most}",
                fix="" if kind == "dimensionless" else "Check the unit.",
            )
            return None
        return number


def share_out(
    chain: Sequence[int],
    shares: Sequence[float],
    directions: Sequence[FloatArray],
    loads: SpreadLoads,
) -> FloatArray:
    """Put half of each panel's load (N) at either end; return the sum of what was put."""
    at: dict[int, FloatArray] = {}
    for (a, b), share, direction in zip(pairwise(chain), shares, directions, strict=True):
        for node in (a, b):
            at[node] = at.get(node, np.zeros(len(direction))) + 0.5 * share * direction
    for node, force in at.items():
        loads.add(node, force)
    return np.asarray(np.sum(list(at.values()), axis=0))
